"""Test methods and their versions."""

from __future__ import annotations

from django.db import models
from django.db.models import Q

from labrecords.models.endpoint_rule import EndpointRule


class VersionState(models.TextChoices):
    DRAFT = "draft", "draft"
    EFFECTIVE = "effective", "effective"
    SUPERSEDED = "superseded", "superseded"


class Titration(models.TextChoices):
    DIRECT = "direct", "direct"
    BLANK_DIFFERENCE = "blank_difference", "blank difference"
    BACK = "back", "back"


class Quantity(models.TextChoices):
    AMOUNT_CONCENTRATION = "amount_concentration", "amount concentration"
    MASS_CONCENTRATION = "mass_concentration", "mass concentration"
    MASS_FRACTION = "mass_fraction", "mass fraction"
    TITRANT_EQUIVALENT = "titrant_equivalent", "titrant equivalent per mass"


class Method(models.Model):
    """A test, known by its code; the recipe is in its versions."""

    code = models.CharField(max_length=20, unique=True)
    title = models.CharField(max_length=120)

    class Meta:
        ordering = ["code"]

    def __str__(self) -> str:
        return self.code


class MethodVersion(EndpointRule):
    """A recipe; once effective it never changes."""

    method = models.ForeignKey(Method, on_delete=models.PROTECT, related_name="versions")
    number = models.PositiveSmallIntegerField()
    state = models.CharField(max_length=10, choices=VersionState, default=VersionState.DRAFT)
    effective_from = models.DateField(null=True)
    reason = models.TextField(blank=True, help_text="why this version was made")
    titrant = models.ForeignKey("Titrant", on_delete=models.PROTECT, related_name="+")
    expressed_as = models.ForeignKey("Substance", on_delete=models.PROTECT, related_name="+")
    titration = models.CharField(max_length=16, choices=Titration)
    ratio = models.CharField(max_length=12, help_text="mol expressed-as substance per mol titrant")
    excess_titrant = models.ForeignKey("Titrant", on_delete=models.PROTECT, null=True, related_name="+")
    excess_volume = models.DecimalField(max_digits=8, decimal_places=3, null=True, help_text="mL, back titration")
    sample_by = models.CharField(max_length=6, choices=[("volume", "volume"), ("mass", "mass")])
    sample_unit = models.CharField(max_length=4, choices=[("mL", "mL"), ("g", "g")])
    sample_amount = models.DecimalField(max_digits=10, decimal_places=4, help_text="nominal, in the unit")
    dilutions = models.JSONField(default=list, help_text='[{"flask": "100.0", "aliquot": "10.00"}, ...] mL')
    replicates_needed = models.PositiveSmallIntegerField()
    blanks_needed = models.PositiveSmallIntegerField(default=0)
    policy = models.CharField(max_length=12, choices=[("concordance", "concordance"), ("all", "all replicates")])
    limit = models.DecimalField(max_digits=8, decimal_places=4)
    limit_kind = models.CharField(max_length=12, choices=[("range_mL", "range, mL"), ("rsd_percent", "RSD, %")])
    quantity = models.CharField(max_length=24, choices=Quantity)
    unit = models.CharField(max_length=16)
    places = models.PositiveSmallIntegerField(help_text="decimals of the reported result")
    basis = models.CharField(
        max_length=10,
        choices=[("as_is", "as is"), ("dried", "dried"), ("anhydrous", "anhydrous")],
        default="as_is",
    )
    coverage = models.CharField(
        max_length=10,
        choices=[("k2", "k = 2"), ("effective", "from the effective degrees of freedom")],
        default="k2",
    )
    sample_density = models.DecimalField(
        max_digits=8, decimal_places=4, null=True, help_text="g/cm3, where weighings are corrected for buoyancy"
    )
    loss_u = models.DecimalField(
        max_digits=6, decimal_places=3, default=0, help_text="standard uncertainty of the loss on drying, % (m/m)"
    )
    parts = models.JSONField(
        default=list, help_text='further results of two endpoints, [{"name": "carbonate", "takes": "first", ...}, ...]'
    )
    instructions = models.TextField(blank=True)

    class Meta:
        ordering = ["method", "-number"]
        constraints = [
            models.UniqueConstraint(fields=["method", "number"], name="method_version_number_once"),
            models.UniqueConstraint(
                fields=["method"], condition=Q(state="effective"), name="method_one_effective_version"
            ),
            models.CheckConstraint(condition=Q(state__in=VersionState.values), name="method_version_state_known"),
            models.CheckConstraint(
                condition=Q(state="draft") | Q(effective_from__isnull=False),
                name="method_version_effective_is_dated",
            ),
            models.CheckConstraint(
                condition=~Q(titration="back") | Q(excess_titrant__isnull=False, excess_volume__gt=0),
                name="method_version_back_has_an_excess",
            ),
            models.CheckConstraint(
                condition=~Q(endpoint="curve") | (~Q(curve_quantity="") & ~Q(deciding_family="")),
                name="method_version_curve_says_how",
            ),
            models.CheckConstraint(
                condition=~Q(endpoint="indicator") | ~Q(indicator=""), name="method_version_indicator_named"
            ),
            models.CheckConstraint(
                condition=Q(sample_amount__gt=0, limit__gt=0, replicates_needed__gte=1),
                name="method_version_amounts_positive",
            ),
            models.CheckConstraint(
                condition=Q(sample_by="volume", sample_unit="mL") | Q(sample_by="mass", sample_unit="g"),
                name="method_version_sample_unit_fits",
            ),
            models.CheckConstraint(
                condition=~Q(titration="blank_difference") | Q(blanks_needed__gte=1),
                name="method_version_blank_difference_has_blanks",
            ),
        ]

    def __str__(self) -> str:
        return f"{self.method.code}, version {self.number}"

    @property
    def reads_two_ends(self) -> bool:
        """Whether a burette is read at two endpoints."""
        return bool(self.parts) and not self.takes_curve
