"""What every test of a service asks: one event, every sentence of a refusal, and nothing without a trail."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from contextlib import contextmanager
from typing import Any

import pytest
from django.apps import apps
from django.db import connection

from labrecords.errors import Refused
from labrecords.models import AuditEvent
from tests.support.database import _as_owner


@contextmanager
def one_event(action: str) -> Iterator[None]:
    """The block writes exactly one event, of this action."""
    last = AuditEvent.objects.order_by("-id").values_list("pk", flat=True).first() or 0
    yield
    assert list(AuditEvent.objects.filter(pk__gt=last).values_list("action", flat=True)) == [action]


def refusal_of(service: Callable[..., Any], *given: Any, **named: Any) -> str:
    """The sentences a service refuses with; no record and no event may have been written."""
    before = all_records()
    with pytest.raises(Refused) as caught:
        service(*given, **named)
    assert all_records() == before
    return " ".join(caught.value.reasons)


def all_records() -> dict[str, list[tuple[Any, ...]]]:
    """Every row of every table of the laboratory."""
    return {
        model.__name__: list(model._default_manager.order_by("pk").values_list())
        for model in apps.get_app_config("labrecords").get_models()
    }


@pytest.fixture
def break_trail(db: None) -> Callable[[], None]:
    """Make the database refuse every event from now on, as on a full disk."""

    def install() -> None:
        with _as_owner(), connection.cursor() as cursor:
            cursor.execute(
                "CREATE FUNCTION labrecords_no_room() RETURNS trigger LANGUAGE plpgsql AS"
                " $$ BEGIN RAISE EXCEPTION 'no room for the trail'; END $$"
            )
            cursor.execute(
                "CREATE TRIGGER no_room BEFORE INSERT ON labrecords_auditevent"
                " FOR EACH ROW EXECUTE FUNCTION labrecords_no_room()"
            )

    return install
