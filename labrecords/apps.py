"""The one app."""

from django.apps import AppConfig


class LabrecordsConfig(AppConfig):
    name = "labrecords"
    default_auto_field = "django.db.models.BigAutoField"
    verbose_name = "titration records"
