"""manage.py check_integrity: does the database still say what was recorded?"""

from __future__ import annotations

from typing import Any

from django.core.management.base import BaseCommand, CommandError

from labrecords.queries.integrity import checks, simulated_events


class Command(BaseCommand):
    help = "Checks the trail, its seal, and that every record is what the trail says. Exits 1 on a finding."

    def handle(self, *args: Any, **options: Any) -> None:
        """Run every check, say each with its findings, and fail when there is one."""
        findings = 0
        for sentence, check in checks().items():
            found = list(check())
            findings += len(found)
            self.stdout.write(f"{'ok    ' if not found else 'FAILED'}  {sentence}")
            for finding in found:
                self.stdout.write(f"        {finding}")
        simulated = simulated_events()
        if simulated:
            self.stdout.write(f"note    {simulated} events were written with a simulated clock (demo history).")
        if findings:
            raise CommandError(f"{findings} findings. Keep the database as it is and call who is responsible for it.")
