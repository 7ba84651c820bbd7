"""Slow work is started by name once the transaction is safe."""

from __future__ import annotations

import logging
from typing import Any

from celery import current_app
from django.db import transaction
from kombu.exceptions import OperationalError

logger = logging.getLogger(__name__)
# Once more at once, for a connection that went stale while the broker was restarted; no waiting beyond that.
AGAIN = {"max_retries": 1, "interval_start": 0, "interval_step": 0, "interval_max": 0}


def after_commit(task_name: str, **ids: Any) -> None:
    """Send a task to the worker after commit; a broker that is down costs time, not the request.

    The row that says "waiting" is already safe, and the sweeper finds what never arrived.
    """

    def send() -> None:
        try:
            current_app.send_task(task_name, kwargs=ids, retry=True, retry_policy=AGAIN)
        except (OperationalError, OSError) as problem:
            logger.warning("%s %s was not sent, the sweeper will find it: %s", task_name, ids, problem)

    transaction.on_commit(send, robust=True)
