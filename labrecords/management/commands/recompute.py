"""manage.py recompute --check: every stored result against its recomputation from its stored inputs."""

from __future__ import annotations

from collections import Counter
from typing import Any

from django.core.management.base import BaseCommand, CommandError

from labrecords.models import Calculation
from labrecords.queries.recompute import recomputed

EVERY = 100


class Command(BaseCommand):
    help = "Computes every stored calculation again from its stored inputs and compares. Exits 1 when one differs."

    def add_arguments(self, parser: Any) -> None:
        """The check is the only thing it does: a stored result is never replaced."""
        parser.add_argument("--check", action="store_true", required=True, help="compare, and change nothing")

    def handle(self, *args: Any, **options: Any) -> None:
        """Compare one after the other, with progress, and fail when one differs."""
        whole, counts = Calculation.objects.count(), Counter[str]()
        for done, result in enumerate(recomputed(), start=1):
            counts[result.verdict] += 1
            if result.verdict in ("differs", "other version"):
                self.stdout.write(f"{result.verdict}: {result.label}: {result.finding}")
            if done % EVERY == 0:
                self.stdout.write(f"{done} of {whole}")
        words = ", ".join(f"{count} {verdict}" for verdict, count in sorted(counts.items())) or "nothing is stored yet"
        self.stdout.write(f"{whole} calculations: {words}")
        if counts["differs"]:
            raise CommandError(f"{counts['differs']} results do not come out again from their inputs.")
