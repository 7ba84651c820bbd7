"""manage.py record_administrator USERNAME "FULL NAME": the first account of an empty laboratory."""

from __future__ import annotations

import getpass
import sys
from typing import Any

from django.contrib.auth.password_validation import validate_password
from django.core.exceptions import ValidationError
from django.core.management.base import BaseCommand, CommandError

from labrecords.errors import Refused
from labrecords.models import User
from labrecords.services.user import record_first_administrator


class Command(BaseCommand):
    help = "Records the first account, an administrator, who records all others. Works once."

    def add_arguments(self, parser: Any) -> None:
        """Who; the password is asked for, or read as one line where nobody can be asked."""
        parser.add_argument("username")
        parser.add_argument("full_name")

    def handle(self, *args: Any, **options: Any) -> None:
        """Ask for the password, check it, record the account."""
        username, full_name = options["username"], options["full_name"]
        password = self._password()
        try:
            validate_password(password, User(username=username, full_name=full_name))
            record_first_administrator(username=username, full_name=full_name, password=password)
        except ValidationError as problem:
            raise CommandError(" ".join(problem.messages)) from problem
        except Refused as refused:
            raise CommandError(" ".join(refused.reasons)) from refused
        self.stdout.write(f"{full_name} is recorded and signs in as {username}.")

    def _password(self) -> str:
        if not sys.stdin.isatty():
            return sys.stdin.readline().rstrip("\n")
        password = getpass.getpass("Password: ")
        if password != getpass.getpass("The same again: "):
            raise CommandError("The two passwords differ. Nothing was recorded.")
        return password
