"""Reference standards: lots of primary standards."""

from __future__ import annotations

from django.db import models
from django.db.models import Q


class LotState(models.TextChoices):
    QUARANTINED = "quarantined", "quarantined"
    IN_USE = "in use", "in use"
    EXPIRED = "expired", "expired"
    WITHDRAWN = "withdrawn", "withdrawn"


class ReferenceStandard(models.Model):
    """One lot of a primary standard with the purity of its certificate: P ± U (k)."""

    number = models.CharField(max_length=30, unique=True)
    substance = models.ForeignKey("Substance", on_delete=models.PROTECT, related_name="standards")
    supplier_lot = models.CharField(max_length=80)
    purity = models.DecimalField(max_digits=9, decimal_places=7, help_text="mass fraction, 0 to 1")
    purity_expanded = models.DecimalField(max_digits=9, decimal_places=7, help_text="U of the certificate")
    purity_k = models.DecimalField(max_digits=4, decimal_places=2, default=2)
    drying = models.CharField(max_length=160, blank=True)
    received_on = models.DateField()
    expires_on = models.DateField()
    certificate = models.ForeignKey("StoredFile", on_delete=models.PROTECT, null=True, related_name="+")
    state = models.CharField(max_length=12, choices=LotState, default=LotState.QUARANTINED)
    withdrawn_reason = models.TextField(blank=True)
    superseded_by = models.ForeignKey("self", on_delete=models.PROTECT, null=True, related_name="supersedes")

    class Meta:
        ordering = ["number"]
        constraints = [
            models.CheckConstraint(condition=Q(purity__gt=0, purity__lte=1.01), name="standard_purity_is_a_fraction"),
            models.CheckConstraint(condition=Q(purity_expanded__gt=0), name="standard_purity_has_an_uncertainty"),
            models.CheckConstraint(condition=Q(purity_k__gte=1), name="standard_purity_k_at_least_one"),
            models.CheckConstraint(condition=Q(state__in=LotState.values), name="standard_state_known"),
            models.CheckConstraint(
                condition=~Q(state="withdrawn") | ~Q(withdrawn_reason=""),
                name="standard_withdrawn_with_a_reason",
            ),
            models.CheckConstraint(
                condition=Q(state="quarantined") | Q(state="withdrawn") | Q(certificate__isnull=False),
                name="standard_in_use_has_a_certificate",
            ),
        ]

    def __str__(self) -> str:
        return self.number
