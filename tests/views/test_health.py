"""The site says whether it can work."""

from __future__ import annotations

import pytest
from django.core.management import CommandError, call_command
from django.db import connection
from django.test import Client


@pytest.mark.django_db
def test_health_is_good_when_every_migration_is_applied(client: Client) -> None:
    answer = client.get("/healthz")
    assert answer.status_code == 200
    assert answer.json() == {"database": "ok", "migrations": "applied"}


@pytest.mark.django_db
def test_health_names_migrations_that_wait(client: Client, as_owner) -> None:
    with as_owner(), connection.cursor() as cursor:
        cursor.execute(
            "DELETE FROM django_migrations WHERE app = 'labrecords' AND name ="
            " (SELECT max(name) FROM django_migrations WHERE app = 'labrecords')"
        )
    answer = client.get("/healthz")
    assert answer.status_code == 503
    assert answer.json()["migrations"] == "1 not applied"


@pytest.mark.django_db
def test_health_answers_without_https_behind_a_proxy(client: Client, settings) -> None:
    settings.SECURE_SSL_REDIRECT = True
    assert client.get("/healthz").status_code == 200
    assert client.get("/sign-in/").status_code == 301


@pytest.mark.django_db
def test_health_is_only_read(client: Client) -> None:
    assert client.post("/healthz").status_code == 405


@pytest.mark.django_db(transaction=True)
def test_check_health_of_web_asks_the_site(live_server) -> None:
    call_command("check_health", "web", port=int(live_server.url.rsplit(":", 1)[1]))


def test_check_health_of_web_says_so_when_nobody_answers() -> None:
    with pytest.raises(CommandError, match="The site does not answer"):
        call_command("check_health", "web", port=1)


def test_check_health_of_beat_wants_a_fresh_schedule(settings, tmp_path) -> None:
    settings.DATA_DIR = tmp_path
    with pytest.raises(CommandError, match="was not saved"):
        call_command("check_health", "beat")
    (tmp_path / "beat").touch()
    call_command("check_health", "beat")


def test_check_health_of_the_worker_says_so_when_there_is_none() -> None:
    with pytest.raises(CommandError, match="does not answer"):
        call_command("check_health", "worker")
