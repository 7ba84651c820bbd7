"""manage.py check_health web|worker|beat: does the program of this container work? For health checks."""

from __future__ import annotations

import socket
import time
import urllib.error
import urllib.request
from typing import Any

from celery import current_app
from django.conf import settings
from django.core.management.base import BaseCommand, CommandError

LONGEST_SILENCE = 600  # [s] the schedule saves its file every 180 s


class Command(BaseCommand):
    help = "Ends with 0 when the program works, else with a sentence and 1."
    requires_system_checks: list[str] = []

    def add_arguments(self, parser: Any) -> None:
        """Which program, and where it is."""
        parser.add_argument("program", choices=["web", "worker", "beat"])
        parser.add_argument("--port", type=int, default=8000, help="the port of web")

    def handle(self, *args: Any, **options: Any) -> None:
        """Ask the one program."""
        checks = {"web": self.web, "worker": self.worker, "beat": self.beat}
        checks[options["program"]](options)
        self.stdout.write("works")

    def web(self, options: dict[str, Any]) -> None:
        """The site answers under one of its own names, with its database and every migration."""
        name = settings.ALLOWED_HOSTS[0].lstrip(".").replace("*", "localhost")
        request = urllib.request.Request(f"http://127.0.0.1:{options['port']}/healthz", headers={"Host": name})
        try:
            with urllib.request.urlopen(request, timeout=5):
                return
        except (urllib.error.URLError, OSError) as problem:
            raise CommandError(f"The site does not answer: {problem}") from problem

    def worker(self, options: dict[str, Any]) -> None:
        """The worker of this host answers through the broker."""
        node = f"celery@{socket.gethostname()}"
        if not current_app.control.ping(destination=[node], timeout=5):
            raise CommandError(f"The worker {node} does not answer.")

    def beat(self, options: dict[str, Any]) -> None:
        """The schedule has saved what it started."""
        saved = [path.stat().st_mtime for path in settings.DATA_DIR.glob("beat*")]
        if not saved or time.time() - max(saved) > LONGEST_SILENCE:
            raise CommandError(f"The schedule in {settings.DATA_DIR} was not saved for {LONGEST_SILENCE} s.")
