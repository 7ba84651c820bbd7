"""Titration records of a quality-control laboratory."""

from labrecords.celery import app as celery_app

__all__ = ["celery_app"]
