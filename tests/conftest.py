"""The cast: the people of the tests, recorded by the services like anybody else.

Every test body runs as the application role; ``as_owner`` for what the owner may: tests/support/database.py.
``as_enemy`` alters records behind the trail's back: tests/support/enemy.py.
``worker`` and ``broker_down`` are a real worker and its broker: tests/support/worker.py.
"""

from __future__ import annotations

import pytest

from labrecords.models import User
from labrecords.services.user import record_first_administrator, record_user
from tests.factories.bench import Bench, set_up_bench
from tests.factories.people import PASSWORD
from tests.support.database import _flush_as_superuser, as_owner, django_db_setup
from tests.support.enemy import as_enemy
from tests.support.trail import break_trail
from tests.support.worker import _one_worker, broker_down, worker

__all__ = [
    "_flush_as_superuser", "_one_worker", "as_enemy", "as_owner", "break_trail", "broker_down",
    "django_db_setup", "worker",
]  # fmt: skip


@pytest.fixture(autouse=True)
def _fast_passwords(settings) -> None:
    settings.PASSWORD_HASHERS = ["django.contrib.auth.hashers.MD5PasswordHasher"]


@pytest.fixture
def administrator(db: None) -> User:
    return record_first_administrator(username="jachterberg", full_name="Jonas Achterberg", password=PASSWORD)


def _person(administrator: User, username: str, full_name: str, *roles: str) -> User:
    return record_user(by=administrator, username=username, full_name=full_name, roles=list(roles), password=PASSWORD)


@pytest.fixture
def analyst(administrator: User) -> User:
    return _person(administrator, "icastell", "Ines Castell", "analyst")


@pytest.fixture
def other_analyst(administrator: User) -> User:
    return _person(administrator, "tbrandvold", "Tomas Brandvold", "analyst")


@pytest.fixture
def supervisor(administrator: User) -> User:
    return _person(administrator, "mokafor", "Maren Okafor", "supervisor")


@pytest.fixture
def other_supervisor(administrator: User) -> User:
    """A supervisor who is an analyst too: the second-person rule holds for the person."""
    return _person(administrator, "phalloran", "Piet Halloran", "supervisor", "analyst")


@pytest.fixture
def auditor(administrator: User) -> User:
    return _person(administrator, "rlindqvist", "Rhea Lindqvist", "auditor")


@pytest.fixture
def bench(analyst: User, supervisor: User) -> Bench:
    """A titrant with a lot in quarantine, its standard in use, and the instruments."""
    return set_up_bench(analyst, supervisor)
