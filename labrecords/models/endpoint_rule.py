"""How titrations are read, for a method's runs and for a titrant's standardizations alike."""

from __future__ import annotations

from django.db import models


class CurveQuantity(models.TextChoices):
    PH = "pH", "pH"
    MV = "mV", "mV"
    CONDUCTIVITY = "conductivity", "conductivity"
    TEMPERATURE = "temperature", "temperature"
    ABSORBANCE = "absorbance", "absorbance"


class EndpointRule(models.Model):
    """The endpoint by an indicator or by a recorded curve, and what the volumes are corrected for."""

    endpoint = models.CharField(
        max_length=10, choices=[("indicator", "indicator"), ("curve", "recorded curve")], default="indicator"
    )
    indicator = models.CharField(max_length=120, blank=True, help_text="indicator and colour change")
    indicator_bias = models.DecimalField(max_digits=6, decimal_places=4, default=0, help_text="mL past equivalence")
    indicator_u = models.DecimalField(max_digits=6, decimal_places=4, default=0, help_text="mL")
    curve_quantity = models.CharField(max_length=12, choices=CurveQuantity, blank=True)
    deciding_family = models.CharField(max_length=12, blank=True)
    checking_family = models.CharField(max_length=12, blank=True)
    fixed_reading = models.DecimalField(max_digits=8, decimal_places=3, null=True)
    first_fixed_reading = models.DecimalField(
        max_digits=8, decimal_places=3, null=True, help_text="the first of two fixed endpoints"
    )
    endpoints_expected = models.PositiveSmallIntegerField(default=1)
    endpoint_chosen = models.PositiveSmallIntegerField(default=1)
    agreement_limit = models.DecimalField(max_digits=4, decimal_places=1, default=3)
    system = models.JSONField(null=True, help_text="the chemistry for the model family")
    initial_volume = models.DecimalField(
        max_digits=8, decimal_places=2, null=True, help_text="mL in the vessel at the start, for the model"
    )
    temperature_correction = models.BooleanField(default=False, help_text="volumes are corrected to 20 degC")
    temperature_within = models.DecimalField(
        max_digits=4,
        decimal_places=1,
        default=0,
        help_text="degC about the temperature read, or about 20 degC where none is corrected",
    )
    drift_u = models.DecimalField(
        max_digits=6,
        decimal_places=2,
        null=True,
        help_text="standard uncertainty of the drift, µL/min, where titres are corrected for it",
    )

    class Meta:
        abstract = True

    @property
    def takes_curve(self) -> bool:
        """Whether a titration is a recorded curve and no pair of burette readings."""
        return self.endpoint == "curve"

    @property
    def reads_two_ends(self) -> bool:
        """Whether a burette is read at two endpoints."""
        return False

    @property
    def takes_drift(self) -> bool:
        """Whether drift and duration of a titration are read."""
        return self.drift_u is not None
