"""manage.py fill_demo: fills an empty database with six months of Marram Quay Laboratory, by the services."""

from __future__ import annotations

import secrets
import time
from collections.abc import Mapping
from datetime import UTC, datetime, timedelta
from typing import Any

import numpy as np
from celery import current_app
from django.conf import settings
from django.core.management.base import BaseCommand, CommandError
from django.db import connection
from django.test.utils import override_settings

from labrecords.management.demo import stories
from labrecords.management.demo.bench import Bench
from labrecords.management.demo.charts import set_up_charts
from labrecords.management.demo.clock import Clock
from labrecords.management.demo.history import History
from labrecords.management.demo.laboratory import ADMINISTRATOR, PEOPLE, open_laboratory
from labrecords.management.demo.methods import record_methods, record_products
from labrecords.management.demo.second_bench import Day, SecondBench
from labrecords.models import TitrantLot, User
from labrecords.services.seal import seal_trail
from labrecords.services.user import change_password

DAYS = 183
QUICK = ["django.contrib.auth.hashers.MD5PasswordHasher", *settings.PASSWORD_HASHERS]
PASSWORD = "marram quay demo"


class Command(BaseCommand):
    help = "Fills an empty database with the demo laboratory. Run it as the owner of the records."

    def add_arguments(self, parser: Any) -> None:
        """How many days of history, and the seed of the generator."""
        parser.add_argument("--days", type=int, default=DAYS)
        parser.add_argument("--seed", type=int, default=20260601)

    def handle(self, *args: Any, **options: Any) -> None:
        """Live the months, then give every account its password for people who look around."""
        if User.objects.exists():
            raise CommandError("There are accounts in this database. The demo is filled into an empty one only.")
        begun, clock = time.monotonic(), Clock()
        names = [ADMINISTRATOR[0], *(name for name, _, _ in PEOPLE)]
        passwords = {name: secrets.token_urlsafe(18) for name in names}
        current_app.conf.broker_url = "memory://localhost"
        with override_settings(PASSWORD_HASHERS=QUICK):
            history = self._live(clock, passwords, days=options["days"], seed=options["seed"])
            clock.stop()
        self._open_accounts(passwords)
        while seal_trail() is not None:
            pass
        self.stdout.write(f"{history.runs} runs in {time.monotonic() - begun:.0f} s")

    def _live(self, clock: Clock, passwords: dict[str, str], *, days: int, seed: int) -> History:
        today = datetime.now(UTC).date()
        start = today - timedelta(days=days)
        clock.to(start, 7)
        lab = open_laboratory(start, passwords=passwords)
        record_methods(lab)
        record_products(lab, start)
        history = History(Bench(lab, clock, np.random.default_rng(seed)), start, today, self._say)
        second = SecondBench(
            self._second(History(Bench(lab, Clock(), np.random.default_rng(seed + 1)), start, today, self._say))
        )
        quickly()
        history.live(second)
        second.close()
        set_up_charts(history)
        clock.to(today - timedelta(days=1), 13)
        stories.today(history, today - timedelta(days=1))
        return history

    def _say(self, sentence: str) -> None:
        self.stdout.write(f"  {sentence}")

    def _second(self, history: History) -> Day:
        """What the second bench does in a day."""

        def work(now: datetime, position: int, lots: Mapping[str, int], true: Mapping[str, float]) -> int:
            if not history.lots:
                quickly()
            history.bench.clock.set(now)
            found = TitrantLot.objects.in_bulk(list(lots.values()))
            history.lots = {code: found[pk] for code, pk in lots.items()}
            history.bench.true, before = dict(true), history.runs
            history.samples(now.date(), position, history.team(position), second=True)
            return history.runs - before

        return work

    def _open_accounts(self, passwords: dict[str, str]) -> None:
        """The passwords of the filling are replaced by the demo's, by each person's own act."""
        lines = ["Accounts of the demo (they exist only here):", ""]
        with override_settings(PASSWORD_HASHERS=[*settings.PASSWORD_HASHERS, QUICK[0]]):
            for user in User.objects.order_by("id"):
                change_password(user, by=user, current=passwords[user.username], password=PASSWORD)
                lines.append(f"  {user.username:<14}{user.full_name}, {' and '.join(user.roles)}")
        lines += ["", f"The password of each is: {PASSWORD}", ""]
        settings.DATA_DIR.mkdir(parents=True, exist_ok=True)
        (settings.DATA_DIR / "demo-accounts.txt").write_text("\n".join(lines))


def quickly() -> None:
    """Do not wait for the disk at every commit: an interrupted filling is begun again from nothing."""
    with connection.cursor() as cursor:
        cursor.execute("SET synchronous_commit = off")
