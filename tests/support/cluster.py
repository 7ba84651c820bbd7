"""A throw-away PostgreSQL and Valkey for the tests, started before the settings are read.

A server named by DATABASE_URL is used as it is: it must know the roles of labrecords/local/postgres.py,
and the address must be a superuser's. The roles and the test database: tests/support/database.py.
"""

from __future__ import annotations

import contextlib
import os
import shutil
import tempfile
from pathlib import Path
from typing import Any

import pytest

from labrecords.local import Postgres, Valkey

_started = contextlib.ExitStack()
_broker: Valkey | None = None

SETTINGS = {
    "LAB_DEBUG": "1", "LAB_HASHED_STATIC": "0", "LAB_NAME": "Marram Quay Laboratory", "OMP_NUM_THREADS": "1",
    "OPENBLAS_NUM_THREADS": "1",
}  # fmt: skip


@pytest.hookimpl(tryfirst=True)
def pytest_load_initial_conftests(early_config: pytest.Config, parser: Any, args: list[str]) -> None:
    """Start both and name them in the environment; the workers of xdist inherit it."""
    if os.environ.get("LAB_REQUIRE_BROWSER") == "1" and not Path("/usr/bin/chromium").exists():
        raise pytest.UsageError("LAB_REQUIRE_BROWSER is 1, and there is no /usr/bin/chromium: install it.")
    for name, value in SETTINGS.items():
        os.environ.setdefault(name, value)
    number = os.environ.get("PYTEST_XDIST_WORKER", "").removeprefix("gw")
    if number:  # each has a queue of its own, or one would do the tasks of another
        os.environ["BROKER_URL"] += f"?virtual_host={int(number) + 1}"
        return
    data = _folder()
    (data / "static").mkdir()  # the finders serve the files; only the folder has to be there
    os.environ["DATA_DIR"] = str(data)
    if not os.environ.get("DATABASE_URL"):
        _start_postgres()
    _start_valkey()


def _start_postgres() -> None:
    server = Postgres(_folder(), throwaway=True)
    _started.callback(server.stop)
    server.start().make_roles()
    os.environ["DATABASE_URL"] = server.url("postgres")


def _start_valkey() -> None:
    global _broker
    _broker = Valkey(_folder())
    _started.callback(_broker.stop)
    os.environ["BROKER_URL"] = _broker.start().url


def _folder() -> Path:
    folder = Path(tempfile.mkdtemp(prefix="labtest-", dir="/tmp"))
    _started.callback(shutil.rmtree, folder, ignore_errors=True)
    return folder


def broker() -> Valkey:
    """The broker of this run, for tests that stop and start it; not from a worker of xdist."""
    if _broker is None:
        raise RuntimeError("The broker belongs to the main process of xdist. Run this test without -n.")
    return _broker


def pytest_unconfigure(config: pytest.Config) -> None:
    """Stop both; nothing is left behind."""
    _started.close()
