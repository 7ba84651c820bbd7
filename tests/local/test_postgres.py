"""The private database and broker: what they keep, whom they let in, and what they leave behind."""

from __future__ import annotations

import os
import signal
import tempfile
from collections.abc import Iterator
from pathlib import Path

import psycopg
import pytest

from labrecords.local import Postgres, Valkey
from labrecords.local.process import cluster_dir, command_of, short_socket_dir, unprivileged


@pytest.fixture
def server() -> Iterator[Postgres]:
    """A server that writes to the disk as the demo's does."""
    with tempfile.TemporaryDirectory(prefix="labtest-", dir="/tmp") as folder:
        one = Postgres(Path(folder))
        one.start()
        one.make_roles()
        one.make_database()
        yield one
        one.stop()


def test_start_after_kill_keeps_every_committed_row(server: Postgres) -> None:
    with psycopg.connect(server.url("lab_owner")) as owner:
        owner.execute("CREATE TABLE kept AS SELECT generate_series(1, 1000) AS n")
    assert server.process is not None
    os.kill(server.process.pid, signal.SIGKILL)
    server.process.wait()
    server.start()
    assert server.sql("SELECT count(*) FROM kept", database="lab") == "1000"


def test_start_ends_a_server_that_was_left_behind(server: Postgres) -> None:
    assert server.process is not None
    old = server.process.pid
    successor = Postgres(server.root).start()
    try:
        server.process.wait(5)
        assert successor.process is not None
        assert str(server.data) not in command_of(old)
        assert successor.sql("SELECT 1") == "1"
    finally:
        successor.stop()


def test_roles_and_database_can_be_made_again(server: Postgres) -> None:
    server.make_roles()
    server.make_database()
    owner = "SELECT pg_get_userbyid(datdba) FROM pg_database WHERE datname = 'lab'"
    assert server.sql(owner) == "lab_owner"


def test_application_role_may_not_make_tables(server: Postgres) -> None:
    with psycopg.connect(server.url("lab_app")) as app, pytest.raises(psycopg.errors.InsufficientPrivilege):
        app.execute("CREATE TABLE public.mine (n int)")


def test_other_roles_may_not_enter(server: Postgres) -> None:
    server.sql("CREATE ROLE stranger LOGIN")
    with pytest.raises(psycopg.OperationalError, match="permission denied for database"):
        psycopg.connect(server.url("stranger"))


def test_mark_goes_with_the_database(server: Postgres) -> None:
    server.mark("filled-1")
    assert server.marked() == "filled-1"
    server.drop_database()
    assert server.marked() == ""
    assert not server.has_database()


def test_server_runs_under_an_ordinary_account(server: Postgres) -> None:
    assert server.process is not None
    owner = Path(f"/proc/{server.process.pid}").stat().st_uid
    assert owner == unprivileged().get("user", os.geteuid())
    assert owner != 0


def test_stop_of_a_throwaway_server_leaves_nothing() -> None:
    folder = Path(tempfile.mkdtemp(prefix="labtest-", dir="/tmp"))
    server = Postgres(folder, throwaway=True).start()
    server.stop()
    assert not folder.exists()


def test_broken_cluster_is_named_with_the_end_of_its_log(server: Postgres) -> None:
    server.stop()
    (server.data / "PG_VERSION").write_text("9\n")
    with pytest.raises(RuntimeError, match=r"(?s)PostgreSQL does not run.*version 9"):
        server.start()


def test_valkey_keeps_its_queue_over_a_stop(tmp_path: Path) -> None:
    import redis

    valkey = Valkey(tmp_path / "valkey").start()
    client = redis.Redis(unix_socket_path=str(valkey.path))
    client.rpush("queue", "waiting")
    valkey.stop()
    valkey.start()
    assert client.lrange("queue", 0, -1) == [b"waiting"]
    client.close()
    valkey.stop()


def test_long_folders_get_a_short_socket() -> None:
    folder = short_socket_dir(Path("/tmp") / ("x" * 100))
    assert len(str(folder)) < 50
    assert folder.stat().st_mode & 0o077 == 0
    folder.rmdir()


def test_cluster_of_a_link_is_the_cluster_of_its_folder(tmp_path: Path) -> None:
    (tmp_path / "real").mkdir()
    (tmp_path / "link").symlink_to(tmp_path / "real")
    assert cluster_dir(tmp_path / "link").resolve() == cluster_dir(tmp_path / "real").resolve()
