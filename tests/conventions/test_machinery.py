"""What a machine can hold: the import table, migrations, tasks by name, settings of production."""

from __future__ import annotations

import os
import re
import subprocess
import sys
from pathlib import Path

import pytest
from celery import current_app
from django.core.management import call_command

ROOT = Path(__file__).resolve().parent.parent.parent


def test_import_table_is_kept() -> None:
    command = "from importlinter.cli import lint_imports_command as main; main()"
    env = dict(os.environ, PYTHONPATH=str(ROOT))
    done = subprocess.run(
        [sys.executable, "-c", command, "--no-cache"], cwd=ROOT, env=env, capture_output=True, text=True
    )
    assert done.returncode == 0, done.stdout + done.stderr


@pytest.mark.django_db
def test_no_migration_is_missing() -> None:
    call_command("makemigrations", check=True, dry_run=True, verbosity=0)


def test_every_task_that_is_started_by_name_is_registered() -> None:
    current_app.loader.import_default_modules()
    started = {
        name
        for path in (ROOT / "labrecords").rglob("*.py")
        for name in re.findall(r'after_commit\(\s*"([^"]+)"', path.read_text())
    }
    scheduled = {entry["task"] for entry in current_app.conf.beat_schedule.values()}
    assert started
    assert scheduled
    assert started | scheduled <= set(current_app.tasks)


def test_production_settings_pass_the_deployment_check() -> None:
    env = {
        "SECRET_KEY": "0123456789abcdefghijklmnopqrstuvwxyzABCDEFGHIJKLMNOPQRSTUVWXYZ",
        "LAB_BEHIND_PROXY": "1", "ALLOWED_HOSTS": "lab.example", "BROKER_URL": "redis://broker:6379/0",
        "DATABASE_URL": "postgres://lab_app@database/lab",
    }  # fmt: skip
    done = subprocess.run(
        [sys.executable, "manage.py", "check", "--deploy", "--fail-level", "WARNING"], cwd=ROOT, env=env,
        capture_output=True, text=True,
    )  # fmt: skip
    assert done.returncode == 0, done.stderr
