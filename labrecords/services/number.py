"""Numbers are reserved when a record is started and never reused; names that people give, once only."""

from __future__ import annotations

from datetime import datetime

from django.db import connection


def next_number(series: str, *, at: datetime, width: int = 5) -> str:
    """Take the next number of a series, e.g. R-26-00417; the row stays locked until the transaction ends."""
    with connection.cursor() as cursor:
        cursor.execute(
            "INSERT INTO labrecords_numberseries (series, year, last) VALUES (%s, %s, 1)"
            " ON CONFLICT (series, year)"
            " DO UPDATE SET last = labrecords_numberseries.last + 1 RETURNING last",
            [series, at.year],
        )
        (last,) = cursor.fetchone()
    return f"{series}-{at.year % 100:02d}-{last:0{width}d}"


def reserve_name(register: str, name: str) -> None:
    """One person at a time records a name that is typed: the second waits, and then finds it taken."""
    with connection.cursor() as cursor:
        cursor.execute("SELECT pg_advisory_xact_lock(hashtextextended(%s, 0))", [f"{register} {name.casefold()}"])
