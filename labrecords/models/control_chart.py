"""Control charts and the versions of their limits."""

from __future__ import annotations

from django.contrib.postgres.fields import ArrayField
from django.db import models
from django.db.models import Q

from labrecords.models.method import VersionState


class ControlChart(models.Model):
    """A chart of a control sample's results, or of a titrant's concentration lot by lot."""

    code = models.CharField(max_length=20, unique=True)
    title = models.CharField(max_length=120)
    control_sample = models.ForeignKey("ControlSample", on_delete=models.PROTECT, null=True, related_name="charts")
    titrant = models.ForeignKey("Titrant", on_delete=models.PROTECT, null=True, related_name="charts")

    class Meta:
        ordering = ["code"]
        constraints = [
            models.CheckConstraint(
                condition=Q(control_sample__isnull=True) ^ Q(titrant__isnull=True),
                name="control_chart_of_one_thing",
            ),
        ]

    def __str__(self) -> str:
        return self.title


class ControlLimits(models.Model):
    """One version of a chart's limits: set from a baseline, signed, frozen, then used."""

    chart = models.ForeignKey(ControlChart, on_delete=models.PROTECT, related_name="limits")
    number = models.PositiveSmallIntegerField()
    state = models.CharField(max_length=10, choices=VersionState, default=VersionState.DRAFT)
    centre = models.FloatField()
    sigma = models.FloatField()
    mean_moving_range = models.FloatField()
    baseline = models.JSONField(help_text="ids of the calculations it was computed from")
    excluded = models.JSONField(default=list, help_text='[{"calculation": id, "why": sentence}, ...]')
    rules = ArrayField(models.CharField(max_length=40), help_text="names of the run rules in use")
    effective_from = models.DateTimeField(null=True)
    reason = models.TextField(blank=True)

    class Meta:
        ordering = ["chart", "-number"]
        verbose_name_plural = "control limits"
        constraints = [
            models.UniqueConstraint(fields=["chart", "number"], name="control_limits_number_once"),
            models.UniqueConstraint(
                fields=["chart"], condition=Q(state="effective"), name="control_chart_one_effective_limits"
            ),
            models.CheckConstraint(condition=Q(sigma__gt=0), name="control_limits_sigma_positive"),
        ]

    def __str__(self) -> str:
        return f"{self.chart.code}, limits {self.number}"
