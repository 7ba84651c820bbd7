"""Chemicals with a formula and a molar mass."""

from __future__ import annotations

from django.contrib.postgres.fields import ArrayField
from django.db import models


class Hazard(models.TextChoices):
    CORROSIVE_ACID = "corrosive_acid", "corrosive acid"
    CORROSIVE_BASE = "corrosive_base", "corrosive base"
    OXIDIZER = "oxidizer", "oxidizer"
    TOXIC = "toxic", "toxic"
    ENVIRONMENT = "environment", "dangerous for the environment"
    STAINS = "stains", "stains skin and benches"
    GAS_FROM_ACID = "gas_from_acid", "gives off gas with acid"
    IRRITANT = "irritant", "irritant"


class Substance(models.Model):
    """Molar mass and its standard uncertainty come from the formula and the named edition of atomic weights."""

    name = models.CharField(max_length=120, unique=True)
    formula = models.CharField(max_length=120)
    molar_mass = models.FloatField(help_text="g/mol")
    molar_mass_u = models.FloatField(help_text="standard uncertainty, g/mol")
    atomic_weights_edition = models.CharField(max_length=120)
    density = models.DecimalField(max_digits=8, decimal_places=4, null=True, help_text="g/cm3, for buoyancy")
    hazards = ArrayField(models.CharField(max_length=20, choices=Hazard), default=list)
    superseded_by = models.ForeignKey("self", on_delete=models.PROTECT, null=True, related_name="supersedes")

    class Meta:
        ordering = ["name"]
        constraints = [
            models.CheckConstraint(condition=models.Q(molar_mass__gt=0), name="substance_molar_mass_positive"),
            models.CheckConstraint(condition=models.Q(molar_mass_u__gte=0), name="substance_molar_mass_u_not_negative"),
        ]

    def __str__(self) -> str:
        return self.name
