"""Files kept byte for byte."""

from __future__ import annotations

from django.conf import settings
from django.db import models


class StoredFile(models.Model):
    """A file as it arrived, with its SHA-256; certificates and recorded curves."""

    sha256 = models.CharField(max_length=64, db_index=True)
    name = models.CharField(max_length=200)
    media_type = models.CharField(max_length=100)
    size = models.PositiveIntegerField()
    content = models.BinaryField()
    stored_by = models.ForeignKey(settings.AUTH_USER_MODEL, on_delete=models.PROTECT, related_name="+")
    stored_at = models.DateTimeField()

    class Meta:
        ordering = ["id"]
        constraints = [models.CheckConstraint(condition=models.Q(size__gt=0), name="stored_file_is_not_empty")]

    def __str__(self) -> str:
        return self.name
