"""Runs over the API: read with their results, verdicts and what they rest on."""

from __future__ import annotations

from django.shortcuts import get_object_or_404
from drf_spectacular.utils import OpenApiParameter, extend_schema, extend_schema_field
from rest_framework import serializers
from rest_framework.decorators import api_view
from rest_framework.request import Request
from rest_framework.response import Response

from labrecords.api.recording import listed
from labrecords.models import Calculation, Replicate, Run
from labrecords.queries.run import runs, runs_found


class PartShape(serializers.Serializer[dict[str, object]]):
    """One further result of a run, in the unit of the whole."""

    name = serializers.CharField()
    value = serializers.FloatField()
    expanded_uncertainty = serializers.FloatField(source="U")
    coverage_factor = serializers.FloatField(source="k")
    unit = serializers.CharField()


class ResultShape(serializers.ModelSerializer[Calculation]):
    """A result, never without its uncertainty and its unit."""

    parts = serializers.SerializerMethodField()

    @extend_schema_field(PartShape(many=True))
    def get_parts(self, calculation: Calculation) -> object:
        """The results of two endpoints beside the whole."""
        return PartShape(calculation.outputs.get("parts", []), many=True).data

    class Meta:
        model = Calculation
        fields = (
            "number", "value", "standard_uncertainty", "expanded_uncertainty", "coverage_factor",
            "degrees_of_freedom", "unit", "is_acceptable", "needs_person", "outcome", "engine_version",
            "inputs_sha256", "computed_at", "parts",
        )  # fmt: skip


class RunShape(serializers.ModelSerializer[Run]):
    """A run with the calculation that was submitted."""

    state = serializers.CharField()
    sample = serializers.CharField(source="sample.number")
    batch = serializers.CharField(source="sample.batch.number", default=None)
    method = serializers.CharField(source="method_version.method.code")
    method_version = serializers.IntegerField(source="method_version.number")
    lot = serializers.CharField(source="standardization.lot.number")
    standardization = serializers.CharField(source="standardization.number")
    started_by = serializers.CharField(source="started_by.username")
    is_in_question = serializers.IntegerField(source="open_questions")
    result = ResultShape(source="calculation", allow_null=True)

    class Meta:
        model = Run
        fields = (
            "number", "state", "sample", "batch", "method", "method_version", "lot", "standardization", "started_by",
            "started_at", "is_in_question", "result",
        )  # fmt: skip


class ReplicateShape(serializers.ModelSerializer[Replicate]):
    """One titration; readings are text, with the digits that were typed."""

    kind = serializers.CharField()
    amount = serializers.CharField(allow_null=True)
    start = serializers.CharField(allow_null=True)
    first_end = serializers.CharField(allow_null=True)
    end = serializers.CharField(allow_null=True)
    temperature = serializers.CharField(allow_null=True)
    drift = serializers.CharField(allow_null=True)
    minutes = serializers.CharField(allow_null=True)

    class Meta:
        model = Replicate
        fields = (
            "kind", "number", "amount", "start", "first_end", "end", "temperature", "drift", "minutes",
            "is_excluded", "exclusion_cause",
        )  # fmt: skip


class RunWithReadingsShape(RunShape):
    """A run with its readings."""

    replicates = ReplicateShape(many=True)

    class Meta(RunShape.Meta):
        fields = (*RunShape.Meta.fields, "replicates")


@extend_schema(
    parameters=[OpenApiParameter("q"), OpenApiParameter("state")], responses=RunShape(many=True), operation_id="runs"
)
@api_view(["GET"])
def list(request: Request) -> Response:
    """Runs, the newest first."""
    q, state = request.query_params.get("q", ""), request.query_params.get("state", "")
    return listed(request, runs_found(q=q, state=state), shown=RunShape)


@extend_schema(responses=RunWithReadingsShape, operation_id="run")
@api_view(["GET"])
def detail(request: Request, number: str) -> Response:
    """One run with its readings as typed."""
    return Response(RunWithReadingsShape(get_object_or_404(runs(), number=number)).data)
