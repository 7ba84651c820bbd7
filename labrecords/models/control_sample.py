"""Control samples: stable materials with an assigned value."""

from __future__ import annotations

from django.db import models
from django.db.models import Q


class ControlSample(models.Model):
    """A material run as a sample to watch a method."""

    code = models.CharField(max_length=20, unique=True)
    name = models.CharField(max_length=120)
    method = models.ForeignKey("Method", on_delete=models.PROTECT, related_name="control_samples")
    assigned_value = models.DecimalField(max_digits=14, decimal_places=6)
    assigned_expanded = models.DecimalField(max_digits=14, decimal_places=6, help_text="U, k = 2")
    unit = models.CharField(max_length=16)
    expires_on = models.DateField()
    withdrawn_reason = models.TextField(blank=True)
    superseded_by = models.ForeignKey("self", on_delete=models.PROTECT, null=True, related_name="supersedes")

    class Meta:
        ordering = ["code"]
        constraints = [
            models.CheckConstraint(condition=Q(assigned_expanded__gt=0), name="control_sample_has_an_uncertainty"),
        ]

    def __str__(self) -> str:
        return self.code
