"""A real Celery worker on the test database, as the application role, behind a real broker.

    def test_worker_computes(worker, analyst):
        run = ...submitted through the services...
        worker.wait_until(lambda: Run.objects.get(pk=run.pk).calculation_id)

Tests with ``worker`` commit (it asks for ``transactional_db``). The worker starts once a session, at the
first test that asks. ``worker.kill()`` is kill -9, ``worker.start()`` starts it again; the fixture does so
itself before the next test. Inside ``with broker_down():`` the broker is gone. The tests have no schedule:
``worker.send("labrecords.tasks.sweep_waiting")`` does what it would do.
"""

from __future__ import annotations

import contextlib
import os
import signal
import socket
import subprocess
import sys
import time
from collections.abc import Callable, Iterator
from pathlib import Path
from typing import Any

import pytest

from labrecords.local import APP, die_with_parent
from tests.support import cluster

CHECKOUT = Path(__file__).resolve().parent.parent.parent


class Worker:
    """One worker with two processes."""

    def __init__(self, log: Path, *, database_url: str) -> None:
        self.log, self.database_url = log, database_url
        self.name = f"tests-{os.getpid()}@{socket.gethostname()}"
        self.process: subprocess.Popen[bytes] | None = None

    def start(self) -> None:
        """Start it unless it runs, and wait until it answers."""
        if self.process is not None and self.process.poll() is None:
            return
        command = [
            sys.executable, "-W", "ignore::UserWarning", "-m", "celery", "-A", "labrecords", "worker",
            "-n", self.name, "-c", "2", "-l", "INFO", "--without-gossip", "--without-mingle",
        ]  # fmt: skip
        env = dict(os.environ, DATABASE_URL=self.database_url, DJANGO_SETTINGS_MODULE="labrecords.settings")
        with open(self.log, "ab") as log:
            self.process = subprocess.Popen(
                command, cwd=CHECKOUT, env=env, stdin=subprocess.DEVNULL, stdout=log, stderr=log,
                process_group=0, preexec_fn=die_with_parent(signal.SIGKILL),
            )  # fmt: skip
        self.wait_until(self.answers, seconds=40)

    def stop(self) -> None:
        """Let it finish what it does, and end it."""
        if self.process is not None and self.process.poll() is None:
            self.process.terminate()
            self.process.wait(30)

    def kill(self) -> None:
        """kill -9: the worker and the processes that compute."""
        if self.process is not None and self.process.poll() is None:
            os.killpg(self.process.pid, signal.SIGKILL)
            self.process.wait()

    def send(self, task: str, **ids: Any) -> None:
        """Send a task by its name."""
        from celery import current_app

        current_app.send_task(task, kwargs=ids)

    def answers(self) -> bool:
        """Does it answer through the broker?"""
        from celery import current_app

        if self.process is None or self.process.poll() is not None:
            raise AssertionError(f"The worker does not run. It said:\n{self.log.read_text()[-3000:]}")
        with current_app.connection_for_write() as fresh:
            return bool(current_app.control.ping(destination=[self.name], timeout=0.5, connection=fresh))

    def is_idle(self) -> bool:
        """Has it nothing in its hands?"""
        from celery import current_app

        with current_app.connection_for_write() as fresh:
            asked = current_app.control.inspect(destination=[self.name], timeout=2, limit=1, connection=fresh)
            return not any((asked.active() or {}).values())

    def forget(self) -> None:
        """Empty the queue."""
        from celery import current_app

        with current_app.connection_for_write() as fresh:
            current_app.control.purge(connection=fresh)

    def wait_until(self, condition: Callable[[], Any], *, seconds: float = 20) -> None:
        """Wait for a condition; say what the worker logged when it does not come true."""
        end = time.monotonic() + seconds
        while not condition():
            if time.monotonic() > end:
                raise AssertionError(f"Not within {seconds:.0f} s. The worker said:\n{self.log.read_text()[-3000:]}")
            time.sleep(0.05)


@pytest.fixture(scope="session")
def _one_worker(django_db_setup: None, tmp_path_factory: pytest.TempPathFactory) -> Iterator[Worker]:
    from django.db import connection

    known = connection.settings_dict
    url = f"postgres://{APP}@/{known['NAME']}?host={known['HOST']}&port={known['PORT']}"
    one = Worker(tmp_path_factory.mktemp("worker") / "log", database_url=url)
    yield one
    one.stop()


@pytest.fixture
def worker(transactional_db: None, _one_worker: Worker) -> Iterator[Worker]:
    """The real worker, with nothing left to do from another test."""
    _one_worker.forget()
    _one_worker.start()
    yield _one_worker
    _one_worker.forget()
    if _one_worker.process is not None and _one_worker.process.poll() is None:
        _one_worker.wait_until(_one_worker.is_idle)


@contextlib.contextmanager
def _broker_down() -> Iterator[None]:
    broker = cluster.broker()
    broker.stop()
    try:
        yield
    finally:
        broker.start()


@pytest.fixture
def broker_down() -> Callable[[], contextlib.AbstractContextManager[None]]:
    """``with broker_down():`` runs a block while the broker is gone."""
    return _broker_down
