"""Replicates and blanks: one titration each, of a run or of a standardization."""

from __future__ import annotations

from typing import TYPE_CHECKING

from django.conf import settings
from django.db import models
from django.db.models import Q

from labrecords.models.fields import ReadingField

if TYPE_CHECKING:
    from labrecords.models.run import Run
    from labrecords.models.standardization import Standardization


class ReplicateKind(models.TextChoices):
    SAMPLE = "sample", "sample"
    BLANK = "blank", "blank"


class ExclusionCause(models.TextChoices):
    OVERRUN = "overrun", "endpoint overrun"
    SPILL = "spill", "spill or splash loss"
    BUBBLE = "bubble", "air bubble or leak in the burette"
    WEIGHING = "weighing", "weighing or pipetting error"
    INDICATOR = "indicator", "indicator missing or spoiled"
    ELECTRODE = "electrode", "electrode or stirrer fault"
    MIXUP = "mixup", "wrong sample or solution"
    OTHER = "other", "another assignable cause"


class Replicate(models.Model):
    """Readings as they were typed; a cell may still be empty while its record is open."""

    run = models.ForeignKey("Run", on_delete=models.PROTECT, null=True, related_name="replicates")
    standardization = models.ForeignKey(
        "Standardization", on_delete=models.PROTECT, null=True, related_name="replicates"
    )
    kind = models.CharField(max_length=6, choices=ReplicateKind, default=ReplicateKind.SAMPLE)
    number = models.PositiveSmallIntegerField()
    amount = ReadingField(null=True, help_text="g or mL of sample or standard")
    start = ReadingField(null=True, help_text="mL")
    first_end = ReadingField(null=True, help_text="mL, at the first of two endpoints")
    end = ReadingField(null=True, help_text="mL")
    temperature = ReadingField(null=True, help_text="degC")
    drift = ReadingField(null=True, help_text="µL/min that are used without a sample")
    minutes = ReadingField(null=True, help_text="from the start of the titration to its endpoint")
    observation = models.CharField(max_length=120, blank=True)
    curve = models.ForeignKey("Curve", on_delete=models.PROTECT, null=True, related_name="replicates")
    entered_by = models.ForeignKey(settings.AUTH_USER_MODEL, on_delete=models.PROTECT, related_name="+")
    entered_at = models.DateTimeField()
    corrections = models.PositiveSmallIntegerField(default=0)
    is_excluded = models.BooleanField(default=False)
    exclusion_cause = models.CharField(max_length=10, choices=ExclusionCause, blank=True)
    exclusion_sentence = models.TextField(blank=True)
    excluded_by = models.ForeignKey(settings.AUTH_USER_MODEL, on_delete=models.PROTECT, null=True, related_name="+")
    excluded_at = models.DateTimeField(null=True)

    class Meta:
        ordering = ["kind", "number"]
        constraints = [
            models.CheckConstraint(
                condition=Q(run__isnull=True) ^ Q(standardization__isnull=True),
                name="replicate_in_one_record",
            ),
            models.UniqueConstraint(fields=["run", "kind", "number"], name="replicate_number_once_in_run"),
            models.UniqueConstraint(
                fields=["standardization", "kind", "number"], name="replicate_number_once_in_standardization"
            ),
            models.CheckConstraint(
                condition=Q(is_excluded=False)
                | (
                    ~Q(exclusion_cause="")
                    & ~Q(exclusion_sentence="")
                    & Q(excluded_by__isnull=False, excluded_at__isnull=False)
                ),
                name="replicate_excluded_with_cause_and_name",
            ),
            models.CheckConstraint(
                condition=Q(amount__isnull=True) | Q(amount__gt=0), name="replicate_amount_positive"
            ),
            models.CheckConstraint(
                condition=Q(start__isnull=True) | Q(start__gte=0), name="replicate_start_not_negative"
            ),
            models.CheckConstraint(
                condition=Q(start__isnull=True) | Q(end__isnull=True) | Q(end__gte=models.F("start")),
                name="replicate_end_not_below_start",
            ),
            models.CheckConstraint(
                condition=Q(minutes__isnull=True) | Q(minutes__gte=0), name="replicate_minutes_not_negative"
            ),
            models.CheckConstraint(
                condition=Q(first_end__isnull=True)
                | Q(curve__isnull=True)
                & (Q(start__isnull=True) | Q(first_end__gte=models.F("start")))
                & (Q(end__isnull=True) | Q(first_end__lte=models.F("end"))),
                name="replicate_first_end_between",
            ),
            models.CheckConstraint(
                condition=Q(curve__isnull=True) | Q(start__isnull=True, end__isnull=True),
                name="replicate_readings_or_curve",
            ),
        ]

    def __str__(self) -> str:
        return f"blank {self.number}" if self.kind == ReplicateKind.BLANK else f"titration {self.number}"

    @property
    def owner(self) -> Run | Standardization:
        """The record it belongs to."""
        found = self.run or self.standardization
        assert found is not None  # the database says so
        return found

    @property
    def pk_text(self) -> str:
        """The key as text, for the names of cells."""
        return str(self.pk)


class Curve(models.Model):
    """A recorded curve as read from its file; the file is kept beside it."""

    file = models.ForeignKey("StoredFile", on_delete=models.PROTECT, related_name="curves")
    quantity = models.CharField(max_length=12)
    mapping = models.JSONField(help_text="which columns were taken, and how the file was read")
    volumes = models.JSONField(help_text="mL, as written in the file")
    readings = models.JSONField(help_text="as written in the file")
    notes = models.JSONField(default=list)
    recorded_by = models.ForeignKey(settings.AUTH_USER_MODEL, on_delete=models.PROTECT, related_name="+")
    recorded_at = models.DateTimeField()

    class Meta:
        ordering = ["id"]

    def __str__(self) -> str:
        return f"curve of {self.file.name}"
