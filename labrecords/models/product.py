"""Products and their specifications."""

from __future__ import annotations

from django.db import models
from django.db.models import F, Q

from labrecords.models.method import VersionState


class Product(models.Model):
    """What is made, or what is discharged."""

    code = models.CharField(max_length=20, unique=True)
    name = models.CharField(max_length=120)
    superseded_by = models.ForeignKey("self", on_delete=models.PROTECT, null=True, related_name="supersedes")

    class Meta:
        ordering = ["code"]

    def __str__(self) -> str:
        return self.name


class Specification(models.Model):
    """One version of the limits of a product; once effective it never changes."""

    product = models.ForeignKey(Product, on_delete=models.PROTECT, related_name="specifications")
    number = models.PositiveSmallIntegerField()
    state = models.CharField(max_length=10, choices=VersionState, default=VersionState.DRAFT)
    effective_from = models.DateField(null=True)
    reason = models.TextField(blank=True)

    class Meta:
        ordering = ["product", "-number"]
        constraints = [
            models.UniqueConstraint(fields=["product", "number"], name="specification_number_once"),
            models.UniqueConstraint(
                fields=["product"], condition=Q(state="effective"), name="product_one_effective_specification"
            ),
            models.CheckConstraint(condition=Q(state__in=VersionState.values), name="specification_state_known"),
            models.CheckConstraint(
                condition=Q(state="draft") | Q(effective_from__isnull=False),
                name="specification_effective_is_dated",
            ),
        ]

    def __str__(self) -> str:
        return f"{self.product.code}, specification {self.number}"


class SpecificationLimit(models.Model):
    """The limits of one test in one specification, with its rounding and its decision rule."""

    specification = models.ForeignKey(Specification, on_delete=models.PROTECT, related_name="limits")
    method = models.ForeignKey("Method", on_delete=models.PROTECT, related_name="+")
    lower = models.DecimalField(max_digits=12, decimal_places=6, null=True)
    upper = models.DecimalField(max_digits=12, decimal_places=6, null=True)
    unit = models.CharField(max_length=16)
    places = models.PositiveSmallIntegerField(help_text="decimals the result is rounded to before comparison")
    figures = models.PositiveSmallIntegerField(
        null=True, help_text="significant figures it is rounded to instead, where the limit says so"
    )
    rounding = models.CharField(max_length=10, choices=[("half_up", "half up"), ("half_even", "half even")])
    rule = models.CharField(max_length=8, choices=[("simple", "simple acceptance"), ("guard", "guard band")])
    guard_factor = models.DecimalField(max_digits=4, decimal_places=2, default=1, help_text="g = factor * U")

    class Meta:
        ordering = ["specification", "method"]
        constraints = [
            models.UniqueConstraint(fields=["specification", "method"], name="specification_limit_one_per_test"),
            models.CheckConstraint(
                condition=Q(lower__isnull=False) | Q(upper__isnull=False),
                name="specification_limit_has_a_limit",
            ),
            models.CheckConstraint(
                condition=Q(lower__isnull=True) | Q(upper__isnull=True) | Q(lower__lt=F("upper")),
                name="specification_limit_in_order",
            ),
            models.CheckConstraint(
                condition=Q(figures__isnull=True) | Q(figures__gte=1), name="specification_figures_at_least_one"
            ),
            models.CheckConstraint(condition=Q(guard_factor__gte=0), name="specification_guard_not_negative"),
        ]

    def __str__(self) -> str:
        return f"{self.method.code} in {self.specification}"
