"""Standardizations: what gives a titrant lot its concentration."""

from __future__ import annotations

from django.conf import settings
from django.db import models
from django.db.models import Q

from labrecords.models.endpoint_rule import EndpointRule


class RecordState(models.TextChoices):
    OPEN = "open", "open"
    SUBMITTED = "submitted", "submitted"
    APPROVED = "approved", "approved"
    VOID = "void", "void"


class Basis(models.TextChoices):
    MASS = "mass", "by mass of a reference standard"
    TITRANT = "titrant", "against a standardized titrant"


class Standardization(models.Model):
    """Replicate titrations of one lot against a reference standard or another approved lot."""

    number = models.CharField(max_length=20, unique=True)
    lot = models.ForeignKey("TitrantLot", on_delete=models.PROTECT, related_name="standardizations")
    basis = models.CharField(max_length=8, choices=Basis)
    reference_standard = models.ForeignKey(
        "ReferenceStandard", on_delete=models.PROTECT, null=True, related_name="standardizations"
    )
    against = models.ForeignKey(
        "self", on_delete=models.PROTECT, null=True, related_name="rests_on_it",
        help_text="the approved standardization of the other lot that was in force",
    )  # fmt: skip
    state = models.CharField(max_length=10, choices=RecordState, default=RecordState.OPEN)
    started_by = models.ForeignKey(settings.AUTH_USER_MODEL, on_delete=models.PROTECT, related_name="+")
    started_at = models.DateTimeField()
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
    in_force_from = models.DateTimeField(null=True)
    in_force_until = models.DateField(null=True)
    superseded_at = models.DateTimeField(null=True, help_text="when a later standardization of the lot took over")

    class Meta:
        ordering = ["-started_at", "-id"]
        constraints = [
            models.CheckConstraint(condition=Q(state__in=RecordState.values), name="standardization_state_known"),
            models.CheckConstraint(
                condition=Q(basis="mass", reference_standard__isnull=False, against__isnull=True)
                | Q(basis="titrant", reference_standard__isnull=True, against__isnull=False),
                name="standardization_rests_on_one_thing",
            ),
            models.CheckConstraint(
                condition=~Q(state="approved")
                | Q(calculation__isnull=False, in_force_from__isnull=False, in_force_until__isnull=False),
                name="standardization_approved_is_computed_and_dated",
            ),
            models.CheckConstraint(
                condition=~Q(state="void") | ~Q(void_reason=""), name="standardization_void_with_a_reason"
            ),
        ]

    def __str__(self) -> str:
        return self.number

    @property
    def rule(self) -> EndpointRule:
        """How its titrations are read."""
        return self.lot.titrant
