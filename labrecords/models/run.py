"""Runs: one sample under one method version with one titrant lot."""

from __future__ import annotations

from django.conf import settings
from django.db import models
from django.db.models import Q

from labrecords.models.endpoint_rule import EndpointRule
from labrecords.models.fields import ReadingField
from labrecords.models.standardization import RecordState


class Run(models.Model):
    """A titration of a sample; what it rests on is fixed when it is started."""

    number = models.CharField(max_length=20, unique=True)
    sample = models.ForeignKey("Sample", on_delete=models.PROTECT, related_name="runs")
    method_version = models.ForeignKey("MethodVersion", on_delete=models.PROTECT, related_name="runs")
    specification_limit = models.ForeignKey(
        "SpecificationLimit", on_delete=models.PROTECT, null=True, related_name="runs"
    )
    standardization = models.ForeignKey("Standardization", on_delete=models.PROTECT, related_name="runs")
    excess_standardization = models.ForeignKey(
        "Standardization", on_delete=models.PROTECT, null=True, related_name="excess_runs"
    )
    retest_for = models.ForeignKey("Investigation", on_delete=models.PROTECT, null=True, related_name="retests")
    state = models.CharField(max_length=10, choices=RecordState, default=RecordState.OPEN)
    started_by = models.ForeignKey(settings.AUTH_USER_MODEL, on_delete=models.PROTECT, related_name="+")
    started_at = models.DateTimeField()
    loss_percent = ReadingField(null=True, help_text="loss on drying or water, % (m/m)")
    remarks = models.TextField(blank=True)
    returned_reason = models.TextField(blank=True)
    void_reason = models.TextField(blank=True)
    calculation = models.ForeignKey(
        "Calculation",
        on_delete=models.PROTECT,
        null=True,
        related_name="+",
        help_text="the one that was submitted",
    )

    class Meta:
        ordering = ["-started_at", "-id"]
        constraints = [
            models.CheckConstraint(condition=Q(state__in=RecordState.values), name="run_state_known"),
            models.CheckConstraint(
                condition=~Q(state__in=["submitted", "approved"]) | Q(calculation__isnull=False),
                name="run_submitted_is_computed",
            ),
            models.CheckConstraint(condition=~Q(state="void") | ~Q(void_reason=""), name="run_void_with_a_reason"),
        ]

    def __str__(self) -> str:
        return self.number

    @property
    def rule(self) -> EndpointRule:
        """How its titrations are read."""
        return self.method_version
