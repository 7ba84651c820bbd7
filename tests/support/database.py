"""The test database and its roles.

Every test body runs as the application role ``lab_app``, which owns nothing: what a test can do, the site
can.
The database is made and migrated as ``lab_owner``.
"""

from __future__ import annotations

import os
from collections.abc import Iterator
from contextlib import AbstractContextManager, contextmanager
from typing import Any

import pytest

from labrecords.local import APP, OWNER

EMPTIED = ("labrecords_", "axes_", "django_session")


@pytest.fixture(scope="session")
def django_db_setup(django_db_blocker: Any) -> Iterator[None]:
    """Make the test database, hand its schema to the owner, migrate, and go on as the application role."""
    from django.db import connection
    from django.test.utils import setup_databases, teardown_databases

    with django_db_blocker.unblock():
        worker = os.environ.get("PYTEST_XDIST_WORKER", "")
        connection.settings_dict.setdefault("TEST", {})["NAME"] = f"test_lab_{worker}" if worker else "test_lab"
        with _migrated_by_owner():
            made = setup_databases(verbosity=0, interactive=False)
        _become(APP)
    yield
    with django_db_blocker.unblock():
        _become(None)
        _end_other_sessions()
        teardown_databases(made, verbosity=0)


@contextmanager
def _migrated_by_owner() -> Iterator[None]:
    """Creation needs the superuser, migration the owner: it is taken when the new database is entered."""
    from django.db import connection
    from django.db.backends.signals import connection_created

    def enter(sender: Any, connection: Any, **_: Any) -> None:
        if (connection.settings_dict["NAME"] or "").startswith("test_lab"):
            with connection.cursor() as cursor:
                cursor.execute(f"ALTER SCHEMA public OWNER TO {OWNER}")
                cursor.execute(f"SET ROLE {OWNER}")

    connection_created.connect(enter)
    try:
        yield
    finally:
        connection_created.disconnect(enter)
        connection.close()


def _end_other_sessions() -> None:
    """A site or a worker of a journey may still hold a connection."""
    from django.db import connection

    with connection.cursor() as cursor:
        cursor.execute(
            "SELECT pg_terminate_backend(pid) FROM pg_stat_activity"
            " WHERE datname = current_database() AND pid <> pg_backend_pid()"
        )


def _become(role: str | None) -> None:
    from django.db import connection

    connection.close()
    connection.settings_dict["OPTIONS"]["assume_role"] = role


@pytest.fixture(scope="session", autouse=True)
def _flush_as_superuser() -> Iterator[None]:
    """Tests that commit are cleaned up by the superuser with the triggers off: the site itself could not.

    The framework's own tables stay as the migrations left them, so nothing has to be written into them again.
    """
    from django.core.management.commands import flush
    from django.db.backends.postgresql.operations import DatabaseOperations

    patch = pytest.MonkeyPatch()
    listed, execute = DatabaseOperations.sql_flush, DatabaseOperations.execute_sql_flush

    def records_only(self: Any, style: Any, tables: list[str], **options: Any) -> list[str]:
        return listed(self, style, [table for table in tables if table.startswith(EMPTIED)], **options)

    def as_superuser(self: Any, statements: list[str]) -> None:
        before = ["RESET ROLE", "SET session_replication_role = replica"]
        after = ["SET session_replication_role = DEFAULT", f"SET ROLE {APP}"]
        execute(self, [*before, *statements, *after])

    patch.setattr(DatabaseOperations, "sql_flush", records_only)
    patch.setattr(DatabaseOperations, "execute_sql_flush", as_superuser)
    patch.setattr(flush, "emit_post_migrate_signal", lambda *_, **__: None)
    yield
    patch.undo()


@pytest.fixture
def as_owner(db: None) -> Any:
    """``with as_owner():`` runs a block as the owner of the records, who may set a simulated clock."""
    return _as_owner


@contextmanager
def _role(name: str) -> Iterator[None]:
    from django.db import connection

    with connection.cursor() as cursor:
        cursor.execute(f"SET ROLE {name}")
        try:
            yield
        finally:
            cursor.execute("SELECT set_config('labrecords.simulated_clock', '', false)")
            cursor.execute(f"SET ROLE {APP}")


def _as_owner() -> AbstractContextManager[None]:
    return _role(OWNER)
