"""A throw-away PostgreSQL for the tests, started before the settings are read.

A server named by DATABASE_URL is used as it is. The roles and the test database: tests/support/database.py.
"""

from __future__ import annotations

import os
import tempfile
from pathlib import Path
from typing import Any

import pytest

from labrecords.local import Postgres

_server: Postgres | None = None


@pytest.hookimpl(tryfirst=True)
def pytest_load_initial_conftests(early_config: pytest.Config, parser: Any, args: list[str]) -> None:
    """Start the server and name it in the environment; the workers of xdist inherit it."""
    global _server
    os.environ.setdefault("LAB_DEBUG", "1")
    os.environ.setdefault("LAB_HASHED_STATIC", "0")
    os.environ.setdefault("LAB_NAME", "Marram Quay Laboratory")
    os.environ.setdefault("OMP_NUM_THREADS", "1")
    os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")
    if os.environ.get("DATABASE_URL"):
        return
    folder = Path(tempfile.mkdtemp(prefix="labtest-", dir="/tmp"))
    _server = Postgres(folder, throwaway=True).start()
    _server.make_roles()
    os.environ["DATABASE_URL"] = _server.url("postgres")
    os.environ["BROKER_URL"] = "memory://"


def pytest_unconfigure(config: pytest.Config) -> None:
    """Stop the server; nothing is left behind."""
    global _server
    if _server is not None:
        _server.stop()
        _server = None
