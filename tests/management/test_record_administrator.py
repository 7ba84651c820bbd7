"""The first account of an empty laboratory."""

from __future__ import annotations

import io

import pytest
from django.core.management import CommandError, call_command

from labrecords.models import User

pytestmark = pytest.mark.django_db


def record(monkeypatch: pytest.MonkeyPatch, password: str) -> None:
    monkeypatch.setattr("sys.stdin", io.StringIO(f"{password}\n"))
    call_command("record_administrator", "jachterberg", "Jonas Achterberg")


def test_record_administrator_records_the_first_account(monkeypatch: pytest.MonkeyPatch) -> None:
    record(monkeypatch, "correct horse 42")
    user = User.objects.get()
    assert user.roles == ["administrator"]
    assert user.check_password("correct horse 42")


def test_record_administrator_works_once(monkeypatch: pytest.MonkeyPatch) -> None:
    record(monkeypatch, "correct horse 42")
    with pytest.raises(CommandError, match="There are accounts already"):
        record(monkeypatch, "correct horse 43")
    assert User.objects.count() == 1


@pytest.mark.parametrize("password", ["", "short", "password1234", "jachterberg12"])
def test_record_administrator_refuses_a_weak_password(monkeypatch: pytest.MonkeyPatch, password: str) -> None:
    with pytest.raises(CommandError):
        record(monkeypatch, password)
    assert not User.objects.exists()
