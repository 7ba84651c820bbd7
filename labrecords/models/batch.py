"""Batches and the samples drawn from them."""

from __future__ import annotations

from django.conf import settings
from django.db import models
from django.db.models import Q


class BatchState(models.TextChoices):
    TESTING = "testing", "testing"
    RELEASED = "released", "released"
    REJECTED = "rejected", "rejected"
    ON_HOLD = "on hold", "on hold"


class Batch(models.Model):
    """One production batch; "ready" is testing with every required test approved, so it is never stored."""

    number = models.CharField(max_length=30, unique=True)
    product = models.ForeignKey("Product", on_delete=models.PROTECT, related_name="batches")
    specification = models.ForeignKey("Specification", on_delete=models.PROTECT, related_name="batches")
    made_on = models.DateField()
    size = models.CharField(max_length=40, blank=True)
    state = models.CharField(max_length=10, choices=BatchState, default=BatchState.TESTING)
    disposition_reason = models.TextField(blank=True)
    disposed_by = models.ForeignKey(settings.AUTH_USER_MODEL, on_delete=models.PROTECT, null=True, related_name="+")
    disposed_at = models.DateTimeField(null=True)

    class Meta:
        ordering = ["-made_on", "-id"]
        verbose_name_plural = "batches"
        constraints = [
            models.CheckConstraint(condition=Q(state__in=BatchState.values), name="batch_state_known"),
            models.CheckConstraint(
                condition=Q(state="testing") | Q(disposed_by__isnull=False, disposed_at__isnull=False),
                name="batch_disposition_by_someone",
            ),
        ]

    def __str__(self) -> str:
        return self.number


class Sample(models.Model):
    """What was drawn, from a batch or from a control material."""

    number = models.CharField(max_length=30, unique=True)
    batch = models.ForeignKey(Batch, on_delete=models.PROTECT, null=True, related_name="samples")
    control_sample = models.ForeignKey("ControlSample", on_delete=models.PROTECT, null=True, related_name="samples")
    drawn_at = models.DateTimeField()
    drawn_by = models.CharField(max_length=120)
    place = models.CharField(max_length=120, blank=True)
    is_urgent = models.BooleanField(default=False)
    recorded_by = models.ForeignKey(settings.AUTH_USER_MODEL, on_delete=models.PROTECT, related_name="+")
    void_reason = models.TextField(blank=True)

    class Meta:
        ordering = ["-drawn_at", "-id"]
        constraints = [
            models.CheckConstraint(
                condition=Q(batch__isnull=True) ^ Q(control_sample__isnull=True),
                name="sample_from_one_source",
            ),
        ]

    def __str__(self) -> str:
        return self.number
