"""The real worker: as the application role, after kill -9, and without its broker."""

from __future__ import annotations

import time

import psycopg
import pytest
from django.db import transaction

from labrecords.background import after_commit
from labrecords.models import AuditCheckpoint, AuditLeaf, User


def test_worker_does_what_is_sent_after_commit(worker, administrator: User) -> None:
    with transaction.atomic():
        after_commit("labrecords.tasks.seal_trail")
        time.sleep(0.3)
        assert not AuditLeaf.objects.exists()
    worker.wait_until(AuditCheckpoint.objects.exists)


def test_worker_does_nothing_for_a_change_that_was_rolled_back(worker, administrator: User) -> None:
    with transaction.atomic():
        after_commit("labrecords.tasks.seal_trail")
        transaction.set_rollback(True)
    time.sleep(0.5)
    assert worker.is_idle()
    assert not AuditLeaf.objects.exists()


def test_worker_signs_in_as_the_application_role(worker) -> None:
    with psycopg.connect(worker.database_url) as connected:
        assert connected.execute("SELECT session_user, current_user").fetchone() == ("lab_app", "lab_app")


def test_worker_started_after_kill_does_what_waited(worker, administrator: User) -> None:
    worker.kill()
    worker.send("labrecords.tasks.seal_trail")
    assert not AuditLeaf.objects.exists()
    worker.start()
    worker.wait_until(AuditCheckpoint.objects.exists)


def test_worker_comes_back_after_the_broker(worker, broker_down, administrator: User) -> None:
    with broker_down():
        time.sleep(0.5)
    worker.wait_until(worker.answers)
    with transaction.atomic():
        after_commit("labrecords.tasks.seal_trail")
    worker.wait_until(AuditCheckpoint.objects.exists)


@pytest.mark.django_db(transaction=True)
def test_after_commit_costs_little_while_the_broker_is_down(broker_down, administrator: User, caplog) -> None:
    with broker_down():
        begun = time.monotonic()
        with transaction.atomic():
            after_commit("labrecords.tasks.seal_trail")
        assert time.monotonic() - begun < 3
    assert "the sweeper will find it" in caplog.text
