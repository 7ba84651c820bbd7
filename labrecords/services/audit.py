"""The audit event that every change is made under."""

from __future__ import annotations

from collections.abc import Iterator
from contextlib import contextmanager
from dataclasses import dataclass
from datetime import datetime

from django.db import connection

from labrecords.models import User


@dataclass(frozen=True, slots=True)
class Event:
    """An open event; ``at`` is the database's own clock when it was opened."""

    id: int
    at: datetime


@contextmanager
def event(action: str, *, by: User, subject: str = "", reason: str = "") -> Iterator[Event]:
    """Open an audit event inside the service's transaction and close it afterwards.

    The row triggers write every change of a record under the open event and refuse changes without one,
    so a service wraps all its writes in this block. ``action`` is "noun.verb", ``subject`` the record's number.
    """
    with connection.cursor() as cursor:
        cursor.execute(
            "INSERT INTO labrecords_auditevent (actor_id, actor_name, action, subject, reason)"
            " VALUES (%s, %s, %s, %s, %s) RETURNING id, occurred_at",
            [by.pk, by.full_name, action, subject, reason],
        )
        number, at = cursor.fetchone()
        yield Event(id=number, at=at)
        cursor.execute("SELECT set_config('labrecords.event', '', true)")
