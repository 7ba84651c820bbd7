"""Control charts and the versions of their limits."""

from __future__ import annotations

from django.contrib.postgres.fields import ArrayField
from django.db import models
from django.db.models import Q

from labrecords.models.method import VersionState

OF = ("control_sample", "titrant", "method", "instrument")


def _of_one_thing() -> Q:
    """Exactly one of the things a chart may be of."""
    found = Q()
    for one in OF:
        found |= Q(**{f"{name}__isnull": name != one for name in OF})
    return found


class ControlChart(models.Model):
    """A chart of a control sample's results, a titrant's concentration, a method's blank or an electrode's slope."""

    code = models.CharField(max_length=20, unique=True)
    title = models.CharField(max_length=120)
    control_sample = models.ForeignKey("ControlSample", on_delete=models.PROTECT, null=True, related_name="charts")
    titrant = models.ForeignKey("Titrant", on_delete=models.PROTECT, null=True, related_name="charts")
    method = models.ForeignKey("Method", on_delete=models.PROTECT, null=True, related_name="charts")
    instrument = models.ForeignKey("Instrument", on_delete=models.PROTECT, null=True, related_name="charts")

    class Meta:
        ordering = ["code"]
        constraints = [
            models.CheckConstraint(condition=_of_one_thing(), name="control_chart_of_one_of_four_things"),
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
    also = ArrayField(
        models.CharField(max_length=8), default=list, help_text="charts with memory that signal too: ewma, cusum"
    )
    ewma_weight = models.FloatField(default=0.2, help_text="lambda")
    ewma_width = models.FloatField(default=2.962, help_text="L, in standard deviations of the average")
    cusum_reference = models.FloatField(default=0.5, help_text="k, in sigma")
    cusum_interval = models.FloatField(default=5.0, help_text="h, in sigma")
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
            models.CheckConstraint(
                condition=Q(ewma_weight__gt=0, ewma_weight__lte=1, ewma_width__gt=0, cusum_reference__gte=0)
                & Q(cusum_interval__gt=0),
                name="control_limits_memory_in_range",
            ),
        ]

    def __str__(self) -> str:
        return f"{self.chart.code}, limits {self.number}"
