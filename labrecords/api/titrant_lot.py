"""Titrant lots over the API."""

from __future__ import annotations

from typing import Any

from django.db.models import QuerySet
from django.shortcuts import get_object_or_404
from django.utils import timezone
from drf_spectacular.utils import OpenApiParameter, extend_schema
from rest_framework import serializers
from rest_framework.decorators import api_view
from rest_framework.request import Request
from rest_framework.response import Response

from labrecords.api.recording import listed, recorded
from labrecords.models import Standardization, Titrant, TitrantLot, User
from labrecords.queries.register import titrant_lots
from labrecords.queries.standardization import in_force
from labrecords.services.titrant import record_lot


class ConcentrationShape(serializers.ModelSerializer[Standardization]):
    """A concentration in force, never without its uncertainty and its unit."""

    standardization = serializers.CharField(source="number")
    value = serializers.FloatField(source="calculation.value")
    expanded_uncertainty = serializers.FloatField(source="calculation.expanded_uncertainty")
    coverage_factor = serializers.FloatField(source="calculation.coverage_factor")
    unit = serializers.CharField(source="calculation.unit")

    class Meta:
        model = Standardization
        fields = (
            "standardization", "value", "expanded_uncertainty", "coverage_factor", "unit", "in_force_from",
            "in_force_until",
        )  # fmt: skip


class LotShape(serializers.ModelSerializer[TitrantLot]):
    """A bottle or tank."""

    titrant = serializers.CharField(source="titrant.code")
    prepared_by = serializers.CharField(source="prepared_by.username")
    state = serializers.CharField(source="shown_state")
    standardizations = serializers.IntegerField(source="attempts")

    class Meta:
        model = TitrantLot
        fields = (
            "number", "titrant", "prepared_on", "prepared_by", "reagent_lot", "volume", "expires_on", "state",
            "withdrawn_reason", "standardizations",
        )  # fmt: skip


class LotWithConcentrationShape(LotShape):
    """A bottle or tank with the concentration it has now."""

    concentration = ConcentrationShape(allow_null=True)

    class Meta(LotShape.Meta):
        fields = (*LotShape.Meta.fields, "concentration")


class LotEntry(serializers.Serializer[TitrantLot]):
    """A new lot of a titrant (its code), prepared by a person (the name for signing in)."""

    titrant = serializers.SlugRelatedField("code", queryset=Titrant.objects.select_related("superseded_by"))
    number = serializers.CharField(max_length=30)
    prepared_on = serializers.DateField()
    prepared_by = serializers.SlugRelatedField("username", queryset=User.objects.filter(is_active=True))
    reagent_lot = serializers.CharField(max_length=80)
    volume = serializers.DecimalField(10, 1)
    expires_on = serializers.DateField(required=False, allow_null=True)


@extend_schema(
    methods=["GET"], parameters=[OpenApiParameter("q"), OpenApiParameter("state")],
    responses=LotShape(many=True),
    operation_id="titrant_lots",
)  # fmt: skip
@extend_schema(methods=["POST"], request=LotEntry, responses={201: LotShape}, operation_id="record_titrant_lot")
@api_view(["GET", "POST"])
def list(request: Request) -> Response:
    """Lots, the newest first; POST records one into quarantine."""
    if request.method == "POST":
        return recorded(
            request,
            roles=("analyst", "supervisor"),
            entry=LotEntry,
            change=_record,
            found=_lots(),
            shown=LotShape,
        )
    q, state = request.query_params.get("q", ""), request.query_params.get("state", "")
    return listed(request, _lots(q=q, state=state), shown=LotShape)


@extend_schema(responses=LotWithConcentrationShape, operation_id="titrant_lot")
@api_view(["GET"])
def detail(request: Request, number: str) -> Response:
    """One lot with its concentration in force, if it has one."""
    lot = get_object_or_404(_lots(), number=number)
    held = in_force(lot, at=timezone.now())
    concentration = ConcentrationShape(held).data if held else None
    return Response(LotShape(lot).data | {"concentration": concentration})


def _record(*, by: User, titrant: Titrant, **typed: Any) -> TitrantLot:
    return record_lot(titrant, by=by, **typed)


def _lots(*, q: str = "", state: str = "") -> QuerySet[TitrantLot]:
    return titrant_lots(day=timezone.localdate(), q=q, state=state)
