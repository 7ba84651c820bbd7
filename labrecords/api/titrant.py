"""Titrants over the API."""

from __future__ import annotations

from typing import Any

from django.shortcuts import get_object_or_404
from drf_spectacular.utils import OpenApiParameter, extend_schema
from rest_framework import serializers
from rest_framework.decorators import api_view
from rest_framework.request import Request
from rest_framework.response import Response

from labrecords.api.recording import listed, recorded
from labrecords.models import Substance, Titrant
from labrecords.queries.register import titrants
from labrecords.services.titrant import record_titrant

RULE = (
    "code", "name", "substance", "nominal", "window_low", "window_high", "restandardization_days",
    "shelf_life_days",
    "standard_substance", "standard_titrant", "ratio", "aliquot", "standard_mass", "indicator",
    "indicator_bias",
    "indicator_u", "replicates_needed", "policy", "limit", "limit_kind", "coverage",
    "expands_like", "buoyancy", "temperature_correction", "temperature_within", "drift_u", "endpoint", "curve_quantity",
    "deciding_family", "checking_family", "fixed_reading", "agreement_limit", "system", "initial_volume",
    "blanks_needed",
)  # fmt: skip


class TitrantShape(serializers.ModelSerializer[Titrant]):
    """A kind of solution with the rule of its standardization."""

    standard_titrant = serializers.StringRelatedField[Titrant]()
    lot_count = serializers.IntegerField()
    superseded_by = serializers.StringRelatedField[Titrant]()

    class Meta:
        model = Titrant
        fields = (*RULE, "lot_count", "superseded_by")


class TitrantEntry(serializers.Serializer[Titrant]):
    """A new titrant; standardized against a substance (its id) or against another titrant (its code)."""

    code = serializers.CharField(max_length=20)
    name = serializers.CharField(max_length=120)
    substance = serializers.PrimaryKeyRelatedField(queryset=Substance.objects.filter(superseded_by=None))
    nominal = serializers.DecimalField(10, 6)
    window_low = serializers.DecimalField(10, 6)
    window_high = serializers.DecimalField(10, 6)
    restandardization_days = serializers.IntegerField(min_value=0, max_value=999_999)
    shelf_life_days = serializers.IntegerField(min_value=0, max_value=999_999)
    standard_substance = serializers.PrimaryKeyRelatedField(
        queryset=Substance.objects.filter(superseded_by=None), required=False, allow_null=True
    )
    standard_titrant = serializers.SlugRelatedField(
        "code", queryset=Titrant.objects.filter(superseded_by=None), required=False, allow_null=True
    )
    ratio = serializers.CharField(max_length=12)
    aliquot = serializers.DecimalField(10, 4, required=False, allow_null=True)
    standard_mass = serializers.DecimalField(10, 5, required=False, allow_null=True)
    indicator = serializers.CharField(max_length=120, required=False, allow_blank=True)
    indicator_bias = serializers.DecimalField(6, 4, required=False)
    indicator_u = serializers.DecimalField(6, 4, required=False)
    replicates_needed = serializers.IntegerField(min_value=0, max_value=99)
    policy = serializers.ChoiceField(Titrant._meta.get_field("policy").choices)
    limit = serializers.DecimalField(8, 4)
    limit_kind = serializers.ChoiceField(Titrant._meta.get_field("limit_kind").choices)
    coverage = serializers.ChoiceField(Titrant._meta.get_field("coverage").choices, required=False)
    expands_like = serializers.ChoiceField(Titrant._meta.get_field("expands_like").choices, required=False)
    buoyancy = serializers.BooleanField(required=False)
    temperature_correction = serializers.BooleanField(required=False)
    temperature_within = serializers.DecimalField(4, 1, required=False)
    drift_u = serializers.DecimalField(6, 2, required=False, allow_null=True)
    endpoint = serializers.ChoiceField(Titrant._meta.get_field("endpoint").choices, required=False)
    curve_quantity = serializers.ChoiceField(
        Titrant._meta.get_field("curve_quantity").choices, required=False, allow_blank=True
    )
    deciding_family = serializers.CharField(max_length=12, required=False, allow_blank=True)
    checking_family = serializers.CharField(max_length=12, required=False, allow_blank=True)
    fixed_reading = serializers.DecimalField(8, 3, required=False, allow_null=True)
    agreement_limit = serializers.DecimalField(4, 1, required=False)
    system = serializers.JSONField(required=False, allow_null=True)
    initial_volume = serializers.DecimalField(8, 2, required=False, allow_null=True)
    blanks_needed = serializers.IntegerField(min_value=0, max_value=20, required=False)

    def validate(self, attrs: dict[str, Any]) -> dict[str, Any]:
        """Both ways of standardizing are named to the service, also when one is left out."""
        return {"standard_substance": None, "standard_titrant": None} | attrs


@extend_schema(
    methods=["GET"],
    parameters=[OpenApiParameter("q")],
    responses=TitrantShape(many=True),
    operation_id="titrants",
)
@extend_schema(methods=["POST"], request=TitrantEntry, responses={201: TitrantShape}, operation_id="record_titrant")
@api_view(["GET", "POST"])
def list(request: Request) -> Response:
    """Titrants by code; POST records one."""
    if request.method == "POST":
        return recorded(
            request, roles=("administrator", "supervisor"), entry=TitrantEntry, change=record_titrant,
            found=titrants(), shown=TitrantShape,
        )  # fmt: skip
    return listed(request, titrants(q=request.query_params.get("q", "")), shown=TitrantShape)


@extend_schema(responses=TitrantShape, operation_id="titrant")
@api_view(["GET"])
def detail(request: Request, code: str) -> Response:
    """One titrant."""
    return Response(TitrantShape(get_object_or_404(titrants(), code=code)).data)
