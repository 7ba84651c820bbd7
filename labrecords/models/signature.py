"""Signatures: who, when, what it means, and the hash of exactly what was signed."""

from __future__ import annotations

from django.conf import settings
from django.db import models
from django.db.models.functions import Now


class Meaning(models.TextChoices):
    PERFORMED = "performed by", "performed by"
    REVIEWED = "reviewed by", "reviewed by"
    RETURNED = "returned by", "returned by"
    VOIDED = "voided by", "voided by"
    MADE_EFFECTIVE = "made effective by", "made effective by"
    WITHDRAWN = "withdrawn by", "withdrawn by"
    RELEASED = "released by", "released by"
    REJECTED = "rejected by", "rejected by"
    HELD = "held by", "held by"
    ASSESSED = "assessed by", "assessed by"
    PLANNED = "plan authorised by", "plan authorised by"
    CONCLUDED = "concluded by", "concluded by"
    REEVALUATED = "re-evaluated by", "re-evaluated by"
    LIMITS_SET = "limits set by", "limits set by"
    TRAIL_REVIEWED = "trail reviewed by", "trail reviewed by"


class Signature(models.Model):
    """One row per signed record. ``noun`` and ``record_id`` name the record, ``content`` is what was signed."""

    signer = models.ForeignKey(settings.AUTH_USER_MODEL, on_delete=models.PROTECT, related_name="signatures")
    printed_name = models.CharField(max_length=120)
    meaning = models.CharField(max_length=24, choices=Meaning)
    reason = models.TextField(blank=True)
    noun = models.CharField(max_length=24)
    record_id = models.BigIntegerField()
    record_number = models.CharField(max_length=40)
    content = models.TextField(help_text="canonical JSON (RFC 8785) of the record as signed")
    content_sha256 = models.CharField(max_length=64)
    signed_at = models.DateTimeField(db_default=Now())
    zone = models.CharField(max_length=40)

    class Meta:
        ordering = ["id"]
        indexes = [models.Index(fields=["noun", "record_id"])]

    def __str__(self) -> str:
        return f"{self.meaning} {self.printed_name}"
