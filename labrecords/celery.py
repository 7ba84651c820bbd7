"""The worker's application."""

from __future__ import annotations

import os

from celery import Celery

os.environ.setdefault("DJANGO_SETTINGS_MODULE", "labrecords.settings")
app = Celery("labrecords")
app.config_from_object("django.conf:settings", namespace="CELERY")
app.autodiscover_tasks(["labrecords"])
