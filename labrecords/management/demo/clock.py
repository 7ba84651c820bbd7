"""The simulated clock of the demo's history: only the owner of the records may set it, and every event says so."""

from __future__ import annotations

from datetime import UTC, date, datetime, time, timedelta

from django.db import connection


class Clock:
    """Walks through working days; every step is set in the database before the next service runs."""

    def __init__(self) -> None:
        self.now = datetime.now(UTC)

    def to(self, day: date, hour: int, minute: int = 0) -> datetime:
        """Go to a time of a day, never backwards."""
        wanted = datetime.combine(day, time(hour, minute), tzinfo=UTC)
        return self.set(max(wanted, self.now) if self.now.date() == day else wanted)

    def step(self, minutes: float) -> datetime:
        """Go on by some minutes."""
        return self.set(self.now + timedelta(minutes=minutes))

    def stop(self) -> None:
        """Give time back to the database's own clock."""
        with connection.cursor() as cursor:
            cursor.execute("SELECT set_config('labrecords.simulated_clock', '', false)")

    def set(self, moment: datetime) -> datetime:
        """Go to a moment."""
        self.now = moment
        with connection.cursor() as cursor:
            cursor.execute("SELECT set_config('labrecords.simulated_clock', %s, false)", [moment.isoformat()])
        return moment
