"""Glassware, balances, electrodes, and their calibrations."""

from __future__ import annotations

from django.db import models
from django.db.models import F, Q


class InstrumentKind(models.TextChoices):
    BURETTE = "burette", "burette"
    PIPETTE = "pipette", "pipette"
    FLASK = "flask", "volumetric flask"
    BALANCE = "balance", "balance"
    THERMOMETER = "thermometer", "thermometer"
    ELECTRODE = "electrode", "meter with electrode"


class Instrument(models.Model):
    """One piece of equipment; what it can hold or weigh, how finely it reads, and its tolerance."""

    identifier = models.CharField(max_length=20, unique=True)
    kind = models.CharField(max_length=12, choices=InstrumentKind)
    description = models.CharField(max_length=160, blank=True)
    capacity = models.DecimalField(max_digits=12, decimal_places=4, null=True)
    unit = models.CharField(max_length=8)
    resolution = models.DecimalField(max_digits=12, decimal_places=6)
    tolerance = models.DecimalField(max_digits=12, decimal_places=6, help_text="half-width, in the unit")
    place = models.CharField(max_length=80, blank=True)
    withdrawn_at = models.DateTimeField(null=True)
    withdrawn_reason = models.TextField(blank=True)
    superseded_by = models.ForeignKey("self", on_delete=models.PROTECT, null=True, related_name="supersedes")

    class Meta:
        ordering = ["identifier"]
        constraints = [
            models.CheckConstraint(condition=Q(resolution__gt=0), name="instrument_resolution_positive"),
            models.CheckConstraint(condition=Q(tolerance__gte=0), name="instrument_tolerance_not_negative"),
            models.CheckConstraint(
                condition=Q(withdrawn_at__isnull=True) | ~Q(withdrawn_reason=""),
                name="instrument_withdrawn_with_a_reason",
            ),
        ]

    def __str__(self) -> str:
        return self.identifier


class InstrumentCalibration(models.Model):
    """One calibration: valid from its day to its due day; corrections where the certificate has them."""

    instrument = models.ForeignKey(Instrument, on_delete=models.PROTECT, related_name="calibrations")
    calibrated_on = models.DateField()
    due_on = models.DateField()
    performed_by = models.CharField(max_length=120)
    uncertainty = models.DecimalField(
        max_digits=12, decimal_places=6, null=True, help_text="expanded (k = 2), in the instrument's unit"
    )
    corrections = models.JSONField(default=list, help_text='[["10.00", "0.012"], ...]: at reading, add')
    slope_percent = models.DecimalField(max_digits=5, decimal_places=1, null=True, help_text="electrode slope")
    certificate = models.ForeignKey("StoredFile", on_delete=models.PROTECT, null=True, related_name="+")
    remarks = models.TextField(blank=True)
    withdrawn_at = models.DateTimeField(null=True)
    withdrawn_reason = models.TextField(blank=True)

    class Meta:
        ordering = ["instrument", "-calibrated_on", "-id"]
        constraints = [
            models.CheckConstraint(condition=Q(due_on__gt=F("calibrated_on")), name="calibration_due_after_its_day"),
        ]

    def __str__(self) -> str:
        return f"{self.instrument} calibrated {self.calibrated_on}"


class UsedInstrument(models.Model):
    """An instrument in its part in a run or a standardization, with the calibration that held at the time."""

    run = models.ForeignKey("Run", on_delete=models.PROTECT, null=True, related_name="instruments")
    standardization = models.ForeignKey(
        "Standardization", on_delete=models.PROTECT, null=True, related_name="instruments"
    )
    part = models.CharField(max_length=20, help_text="burette, balance, pipette, electrode, flask 1, aliquot 1, ...")
    instrument = models.ForeignKey(Instrument, on_delete=models.PROTECT, related_name="uses")
    calibration = models.ForeignKey(InstrumentCalibration, on_delete=models.PROTECT, related_name="uses")

    class Meta:
        ordering = ["id"]
        constraints = [
            models.CheckConstraint(
                condition=Q(run__isnull=True) ^ Q(standardization__isnull=True),
                name="used_instrument_in_one_record",
            ),
            models.UniqueConstraint(fields=["run", "part"], name="used_instrument_one_per_part_of_run"),
            models.UniqueConstraint(
                fields=["standardization", "part"], name="used_instrument_one_per_part_of_standardization"
            ),
        ]

    def __str__(self) -> str:
        return f"{self.part} {self.instrument}"
