"""Instruments and their calibrations over the API."""

from __future__ import annotations

from django.db.models import QuerySet
from django.shortcuts import get_object_or_404
from django.utils import timezone
from drf_spectacular.utils import OpenApiParameter, extend_schema
from rest_framework import serializers
from rest_framework.decorators import api_view
from rest_framework.request import Request
from rest_framework.response import Response

from labrecords.api.recording import listed, recorded
from labrecords.models import Instrument, InstrumentCalibration, InstrumentKind
from labrecords.queries.instrument import calibrations_of
from labrecords.queries.register import instruments
from labrecords.services.instrument import record_calibration, record_instrument


class InstrumentShape(serializers.ModelSerializer[Instrument]):
    """An instrument with the last day its calibration holds."""

    due_on = serializers.DateField(allow_null=True)
    superseded_by = serializers.StringRelatedField[Instrument]()

    class Meta:
        model = Instrument
        fields = (
            "identifier", "kind", "description", "capacity", "unit", "resolution", "tolerance", "place",
            "due_on",
            "withdrawn_at", "withdrawn_reason", "superseded_by",
        )  # fmt: skip


class InstrumentEntry(serializers.Serializer[Instrument]):
    """A new instrument."""

    identifier = serializers.CharField(max_length=20)
    kind = serializers.ChoiceField(InstrumentKind.choices)
    description = serializers.CharField(max_length=160, required=False, allow_blank=True)
    capacity = serializers.DecimalField(12, 4, required=False, allow_null=True)
    unit = serializers.CharField(max_length=8)
    resolution = serializers.DecimalField(12, 6)
    tolerance = serializers.DecimalField(12, 6)
    place = serializers.CharField(max_length=80, required=False, allow_blank=True)


class CalibrationShape(serializers.ModelSerializer[InstrumentCalibration]):
    """A calibration; its certificate by the hash of its file."""

    certificate_sha256 = serializers.CharField(source="certificate.sha256", default=None)

    class Meta:
        model = InstrumentCalibration
        fields = (
            "id", "calibrated_on", "due_on", "performed_by", "uncertainty", "corrections", "slope_percent",
            "remarks",
            "certificate_sha256", "withdrawn_at", "withdrawn_reason",
        )  # fmt: skip


class CalibrationEntry(serializers.Serializer[InstrumentCalibration]):
    """A new calibration; corrections are pairs of a reading and what is added to it, as text."""

    calibrated_on = serializers.DateField()
    due_on = serializers.DateField()
    performed_by = serializers.CharField(max_length=120)
    uncertainty = serializers.DecimalField(12, 6, required=False, allow_null=True)
    corrections = serializers.ListField(
        child=serializers.ListField(child=serializers.CharField(max_length=40), max_length=2),
        required=False, max_length=200,
    )  # fmt: skip
    slope_percent = serializers.DecimalField(5, 1, required=False, allow_null=True)
    remarks = serializers.CharField(max_length=2000, required=False, allow_blank=True)


@extend_schema(
    methods=["GET"], parameters=[OpenApiParameter("q"), OpenApiParameter("kind")],
    responses=InstrumentShape(many=True), operation_id="instruments",
)  # fmt: skip
@extend_schema(
    methods=["POST"],
    request=InstrumentEntry,
    responses={201: InstrumentShape},
    operation_id="record_instrument",
)
@api_view(["GET", "POST"])
def list(request: Request) -> Response:
    """Instruments by identifier; POST records one."""
    if request.method == "POST":
        return recorded(
            request, roles=("administrator", "supervisor"), entry=InstrumentEntry, change=record_instrument,
            found=_instruments(), shown=InstrumentShape,
        )  # fmt: skip
    q, kind = request.query_params.get("q", ""), request.query_params.get("kind", "")
    return listed(request, _instruments(q=q, kind=kind), shown=InstrumentShape)


@extend_schema(responses=InstrumentShape, operation_id="instrument")
@api_view(["GET"])
def detail(request: Request, identifier: str) -> Response:
    """One instrument."""
    return Response(InstrumentShape(get_object_or_404(_instruments(), identifier=identifier)).data)


@extend_schema(methods=["GET"], responses=CalibrationShape(many=True), operation_id="calibrations")
@extend_schema(
    methods=["POST"],
    request=CalibrationEntry,
    responses={201: CalibrationShape},
    operation_id="record_calibration",
)
@api_view(["GET", "POST"])
def calibrations(request: Request, identifier: str) -> Response:
    """The calibrations of an instrument, the newest first; POST records one."""
    instrument = get_object_or_404(_instruments(), identifier=identifier)
    if request.method == "POST":
        return recorded(
            request, roles=("administrator", "supervisor", "analyst"), entry=CalibrationEntry,
            change=lambda **typed: record_calibration(instrument, **typed),
            found=InstrumentCalibration.objects.all(), shown=CalibrationShape,
        )  # fmt: skip
    return Response(CalibrationShape(calibrations_of(instrument), many=True).data)


def _instruments(*, q: str = "", kind: str = "") -> QuerySet[Instrument]:
    return instruments(day=timezone.localdate(), q=q, kind=kind)
