"""Somebody with the superuser's password, who alters records behind the trail's back."""

from __future__ import annotations

from collections.abc import Callable

import pytest
from django.db import connection

from labrecords.local import APP


@pytest.fixture
def as_enemy(db: None) -> Callable[..., None]:
    """``as_enemy(statement, *arguments)``: run SQL as the superuser with every trigger switched off."""

    def run(statement: str, *arguments: object) -> None:
        with connection.cursor() as cursor:
            cursor.execute("SET CONSTRAINTS ALL IMMEDIATE")
            cursor.execute("RESET ROLE")
            cursor.execute("SET session_replication_role = replica")
            try:
                cursor.execute(statement, arguments)
            finally:
                cursor.execute("SET session_replication_role = DEFAULT")
                cursor.execute(f"SET ROLE {APP}")

    return run
