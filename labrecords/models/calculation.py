"""Calculations: the immutable outcomes, and the requests that wait for the worker."""

from __future__ import annotations

from django.conf import settings
from django.db import models
from django.db.models import Q


class Calculation(models.Model):
    """Inputs as used, outputs as computed, and the version of analysis that did it. Never changed."""

    run = models.ForeignKey("Run", on_delete=models.PROTECT, null=True, related_name="calculations")
    standardization = models.ForeignKey(
        "Standardization", on_delete=models.PROTECT, null=True, related_name="calculations"
    )
    number = models.PositiveSmallIntegerField()
    inputs = models.TextField(help_text="canonical JSON (RFC 8785)")
    inputs_sha256 = models.CharField(max_length=64)
    outputs = models.JSONField()
    engine_version = models.CharField(max_length=20)
    value = models.FloatField(null=True)
    standard_uncertainty = models.FloatField(null=True)
    expanded_uncertainty = models.FloatField(null=True)
    coverage_factor = models.FloatField(null=True)
    degrees_of_freedom = models.FloatField(null=True)
    unit = models.CharField(max_length=16)
    is_acceptable = models.BooleanField()
    needs_person = models.BooleanField(default=False)
    outcome = models.CharField(max_length=20, blank=True, help_text="conforms, does_not_conform, inconclusive or ''")
    requested_by = models.ForeignKey(settings.AUTH_USER_MODEL, on_delete=models.PROTECT, related_name="+")
    computed_at = models.DateTimeField()

    class Meta:
        ordering = ["id"]
        constraints = [
            models.CheckConstraint(
                condition=Q(run__isnull=True) ^ Q(standardization__isnull=True),
                name="calculation_of_one_record",
            ),
            models.UniqueConstraint(fields=["run", "number"], name="calculation_number_once_in_run"),
            models.UniqueConstraint(
                fields=["standardization", "number"], name="calculation_number_once_in_standardization"
            ),
        ]

    def __str__(self) -> str:
        return f"calculation {self.number}"


class CalculationRequest(models.Model):
    """The row that says "waiting": written with the change that asks for it, cleared by the worker.

    It is the worker's list of work and no record: the calculation it leads to is one.
    """

    run = models.ForeignKey("Run", on_delete=models.PROTECT, null=True, related_name="requests")
    standardization = models.ForeignKey("Standardization", on_delete=models.PROTECT, null=True, related_name="requests")
    requested_by = models.ForeignKey(settings.AUTH_USER_MODEL, on_delete=models.PROTECT, related_name="+")
    requested_at = models.DateTimeField()
    state = models.CharField(max_length=8, choices=[("waiting", "waiting"), ("done", "done"), ("failed", "failed")])
    attempts = models.PositiveSmallIntegerField(default=0)
    problem = models.TextField(blank=True, help_text="the sentence for the analyst when it failed")
    calculation = models.ForeignKey(Calculation, on_delete=models.PROTECT, null=True, related_name="+")

    class Meta:
        ordering = ["id"]
        indexes = [models.Index(fields=["state", "requested_at"])]
        constraints = [
            models.CheckConstraint(
                condition=Q(run__isnull=True) ^ Q(standardization__isnull=True), name="request_of_one_record"
            ),
            models.UniqueConstraint(fields=["run"], condition=Q(state="waiting"), name="request_one_waiting_for_run"),
            models.UniqueConstraint(
                fields=["standardization"],
                condition=Q(state="waiting"),
                name="request_one_waiting_for_standardization",
            ),
        ]

    def __str__(self) -> str:
        return f"{self.state} request {self.pk}"


class MonteCarloCheck(models.Model):
    """A check of one calculation by drawing its inputs: asked for by a person, done by the worker, with progress.

    It informs and changes no result; like a request it is the worker's list of work.
    """

    calculation = models.ForeignKey(Calculation, on_delete=models.PROTECT, related_name="monte_carlo_checks")
    requested_by = models.ForeignKey(settings.AUTH_USER_MODEL, on_delete=models.PROTECT, related_name="+")
    requested_at = models.DateTimeField()
    state = models.CharField(max_length=8, choices=[("waiting", "waiting"), ("done", "done"), ("failed", "failed")])
    draws = models.PositiveIntegerField(default=0, help_text="so far")
    outputs = models.JSONField(null=True)
    problem = models.TextField(blank=True)

    class Meta:
        ordering = ["id"]
        constraints = [
            models.UniqueConstraint(
                fields=["calculation"], condition=Q(state="waiting"), name="monte_carlo_one_waiting_for_calculation"
            ),
        ]

    def __str__(self) -> str:
        return f"{self.state} check of {self.calculation}"
