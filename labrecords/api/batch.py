"""Batches over the API: read with the state of every required test."""

from __future__ import annotations

from django.shortcuts import get_object_or_404
from drf_spectacular.utils import OpenApiParameter, extend_schema
from rest_framework import serializers
from rest_framework.decorators import api_view
from rest_framework.request import Request
from rest_framework.response import Response

from labrecords.api.recording import listed
from labrecords.models import Batch
from labrecords.queries.batch import RequiredTest, batches, batches_found, required_tests


class BatchShape(serializers.ModelSerializer[Batch]):
    """A batch."""

    state = serializers.CharField()
    product = serializers.CharField(source="product.code")
    specification = serializers.IntegerField(source="specification.number")

    class Meta:
        model = Batch
        fields = ("number", "product", "specification", "made_on", "size", "state", "disposition_reason")


class TestShape(serializers.Serializer[RequiredTest]):
    """A required test: where it stands, and the run that says so."""

    method = serializers.CharField(source="limit.method.code")
    lower = serializers.DecimalField(12, 6, source="limit.lower", allow_null=True)
    upper = serializers.DecimalField(12, 6, source="limit.upper", allow_null=True)
    unit = serializers.CharField(source="limit.unit")
    status = serializers.CharField()
    run = serializers.CharField(source="run.number", default=None)


class BatchWithTestsShape(BatchShape):
    """A batch with its required tests."""

    tests = TestShape(many=True)

    class Meta(BatchShape.Meta):
        fields = (*BatchShape.Meta.fields, "tests")


@extend_schema(
    parameters=[OpenApiParameter("q"), OpenApiParameter("state")],
    responses=BatchShape(many=True),
    operation_id="batches",
)
@api_view(["GET"])
def list(request: Request) -> Response:
    """Batches, the newest first."""
    q, state = request.query_params.get("q", ""), request.query_params.get("state", "")
    return listed(request, batches_found(q=q, state=state), shown=BatchShape)


@extend_schema(responses=BatchWithTestsShape, operation_id="batch")
@api_view(["GET"])
def detail(request: Request, number: str) -> Response:
    """One batch with every required test."""
    batch = get_object_or_404(batches(), number=number)
    tests = TestShape(required_tests(batch), many=True).data
    return Response(BatchShape(batch).data | {"tests": tests})
