"""Substances over the API."""

from __future__ import annotations

from django.shortcuts import get_object_or_404
from drf_spectacular.utils import OpenApiParameter, extend_schema
from rest_framework import serializers
from rest_framework.decorators import api_view
from rest_framework.request import Request
from rest_framework.response import Response

from labrecords.api.recording import listed, recorded
from labrecords.models import Hazard, Substance
from labrecords.queries.register import substances
from labrecords.services.substance import record_substance


class SubstanceShape(serializers.ModelSerializer[Substance]):
    """A substance as it stands."""

    superseded_by = serializers.StringRelatedField[Substance]()

    class Meta:
        model = Substance
        fields = (
            "id", "name", "formula", "molar_mass", "molar_mass_u", "atomic_weights_edition", "density",
            "hazards",
            "superseded_by",
        )  # fmt: skip


class SubstanceEntry(serializers.Serializer[Substance]):
    """A new substance; its molar mass comes from the formula."""

    name = serializers.CharField(max_length=120)
    formula = serializers.CharField(max_length=120)
    density = serializers.DecimalField(8, 4, required=False, allow_null=True)
    hazards = serializers.ListField(child=serializers.ChoiceField(Hazard.choices), required=False)


@extend_schema(
    methods=["GET"],
    parameters=[OpenApiParameter("q")],
    responses=SubstanceShape(many=True),
    operation_id="substances",
)
@extend_schema(
    methods=["POST"], request=SubstanceEntry, responses={201: SubstanceShape}, operation_id="record_substance"
)
@api_view(["GET", "POST"])
def list(request: Request) -> Response:
    """Substances by name; POST records one."""
    if request.method == "POST":
        return recorded(
            request, roles=("administrator", "supervisor"), entry=SubstanceEntry, change=record_substance,
            found=substances(), shown=SubstanceShape,
        )  # fmt: skip
    return listed(request, substances(q=request.query_params.get("q", "")), shown=SubstanceShape)


@extend_schema(responses=SubstanceShape, operation_id="substance")
@api_view(["GET"])
def detail(request: Request, pk: int) -> Response:
    """One substance."""
    return Response(SubstanceShape(get_object_or_404(substances(), pk=pk)).data)
