"""Titrants and their lots."""

from __future__ import annotations

from django.conf import settings
from django.db import models
from django.db.models import F, Q

from labrecords.models.endpoint_rule import EndpointRule
from labrecords.models.standard import LotState


class Expansion(models.TextChoices):
    """How the solution expands with temperature."""

    WATER = "water", "water"
    ETHANOLIC = "ethanolic alkali", "ethanolic alkali"


class Titrant(EndpointRule):
    """A kind of solution: nominal concentration, accepted window, intervals, and how it is standardized."""

    code = models.CharField(max_length=20, unique=True)
    name = models.CharField(max_length=120)
    substance = models.ForeignKey("Substance", on_delete=models.PROTECT, related_name="titrants")
    nominal = models.DecimalField(max_digits=10, decimal_places=6, help_text="mol/L")
    window_low = models.DecimalField(max_digits=10, decimal_places=6, help_text="mol/L")
    window_high = models.DecimalField(max_digits=10, decimal_places=6, help_text="mol/L")
    restandardization_days = models.PositiveIntegerField()
    shelf_life_days = models.PositiveIntegerField()
    standard_substance = models.ForeignKey("Substance", on_delete=models.PROTECT, null=True, related_name="+")
    standard_titrant = models.ForeignKey("self", on_delete=models.PROTECT, null=True, related_name="standardizes")
    ratio = models.CharField(max_length=12, help_text="mol of titrant per mol of standard, 1 or 1/2 or 2")
    aliquot = models.DecimalField(
        max_digits=10,
        decimal_places=4,
        null=True,
        help_text="mL of the standardized titrant that is pipetted",
    )
    standard_mass = models.DecimalField(
        max_digits=10, decimal_places=5, null=True, help_text="g of the standard usually weighed"
    )
    blanks_needed = models.PositiveSmallIntegerField(default=1)
    replicates_needed = models.PositiveSmallIntegerField()
    policy = models.CharField(max_length=12, choices=[("concordance", "concordance"), ("all", "all replicates")])
    limit = models.DecimalField(max_digits=8, decimal_places=4)
    limit_kind = models.CharField(max_length=12, choices=[("range_mL", "range, mL"), ("rsd_percent", "RSD, %")])
    coverage = models.CharField(
        max_length=10,
        choices=[("k2", "k = 2"), ("effective", "from the effective degrees of freedom")],
        default="k2",
    )
    expands_like = models.CharField(max_length=20, choices=Expansion, default=Expansion.WATER)
    buoyancy = models.BooleanField(default=False, help_text="weighings of the standard are corrected for buoyancy")
    superseded_by = models.ForeignKey("self", on_delete=models.PROTECT, null=True, related_name="supersedes")

    class Meta:
        ordering = ["code"]
        constraints = [
            models.CheckConstraint(
                condition=Q(nominal__gt=0, window_low__lt=F("window_high"), window_low__gt=0),
                name="titrant_window_in_order",
            ),
            models.CheckConstraint(
                condition=Q(standard_substance__isnull=True) ^ Q(standard_titrant__isnull=True),
                name="titrant_standardized_one_way",
            ),
            models.CheckConstraint(
                condition=Q(standard_titrant__isnull=True) | Q(aliquot__gt=0), name="titrant_aliquot_positive"
            ),
            models.CheckConstraint(
                condition=~Q(endpoint="curve") | (~Q(curve_quantity="") & ~Q(deciding_family="")),
                name="titrant_curve_says_how",
            ),
            models.CheckConstraint(condition=Q(replicates_needed__gte=2), name="titrant_needs_replicates"),
            models.CheckConstraint(condition=Q(limit__gt=0), name="titrant_limit_positive"),
        ]

    def __str__(self) -> str:
        return self.code


class TitrantLot(models.Model):
    """One bottle or tank of a titrant."""

    number = models.CharField(max_length=30, unique=True)
    titrant = models.ForeignKey(Titrant, on_delete=models.PROTECT, related_name="lots")
    prepared_on = models.DateField()
    prepared_by = models.ForeignKey(settings.AUTH_USER_MODEL, on_delete=models.PROTECT, related_name="+")
    reagent_lot = models.CharField(max_length=80)
    volume = models.DecimalField(max_digits=10, decimal_places=1, help_text="mL prepared")
    expires_on = models.DateField()
    state = models.CharField(max_length=12, choices=LotState, default=LotState.QUARANTINED)
    withdrawn_reason = models.TextField(blank=True)

    class Meta:
        ordering = ["-prepared_on", "-id"]
        constraints = [
            models.CheckConstraint(condition=Q(volume__gt=0), name="titrant_lot_volume_positive"),
            models.CheckConstraint(condition=Q(expires_on__gte=F("prepared_on")), name="titrant_lot_dates_in_order"),
            models.CheckConstraint(condition=Q(state__in=LotState.values), name="titrant_lot_state_known"),
            models.CheckConstraint(
                condition=~Q(state="withdrawn") | ~Q(withdrawn_reason=""),
                name="titrant_lot_withdrawn_with_a_reason",
            ),
        ]

    def __str__(self) -> str:
        return self.number
