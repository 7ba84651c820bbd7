"""Reference standards over the API."""

from __future__ import annotations

import base64
import binascii
from typing import Any

from django.db.models import QuerySet
from django.shortcuts import get_object_or_404
from django.utils import timezone
from drf_spectacular.types import OpenApiTypes
from drf_spectacular.utils import OpenApiParameter, extend_schema, extend_schema_field
from rest_framework import serializers
from rest_framework.decorators import api_view
from rest_framework.request import Request
from rest_framework.response import Response

from labrecords.api.recording import listed, recorded
from labrecords.models import ReferenceStandard, Substance
from labrecords.queries.standard import standards_found
from labrecords.rules.certificate import media_type_of
from labrecords.services.standard import record_standard


@extend_schema_field(OpenApiTypes.BYTE)
class Base64Field(serializers.CharField):
    """The bytes of a file as base64."""

    def to_internal_value(self, data: Any) -> Any:
        """The bytes, or a sentence."""
        try:
            return base64.b64decode(super().to_internal_value(data), validate=True)
        except (binascii.Error, ValueError) as problem:
            raise serializers.ValidationError("The file's bytes in base64 are expected.") from problem


class StandardShape(serializers.ModelSerializer[ReferenceStandard]):
    """A lot of a primary standard; its certificate by the hash of its file."""

    substance = serializers.CharField(source="substance.name")
    state = serializers.CharField(source="shown_state")
    certificate_sha256 = serializers.CharField(source="certificate.sha256", default=None)
    standardizations = serializers.IntegerField(source="uses")
    superseded_by = serializers.StringRelatedField[ReferenceStandard]()

    class Meta:
        model = ReferenceStandard
        fields = (
            "number", "substance", "supplier_lot", "purity", "purity_expanded", "purity_k", "drying",
            "received_on",
            "expires_on", "certificate_sha256", "state", "withdrawn_reason", "standardizations",
            "superseded_by",
        )  # fmt: skip


class CertificateEntry(serializers.Serializer[Any]):
    """A certificate's file: PDF, PNG or JPEG up to 5 MB."""

    name = serializers.CharField(max_length=200)
    content = Base64Field()

    def validate(self, attrs: dict[str, Any]) -> Any:
        """The file as the service takes it."""
        return attrs["name"], media_type_of(attrs["content"]) or "", attrs["content"]


class StandardEntry(serializers.Serializer[ReferenceStandard]):
    """A new lot; purity and its U are mass fractions."""

    number = serializers.CharField(max_length=30)
    substance = serializers.PrimaryKeyRelatedField(queryset=Substance.objects.all())
    supplier_lot = serializers.CharField(max_length=80)
    purity = serializers.DecimalField(9, 7)
    purity_expanded = serializers.DecimalField(9, 7)
    purity_k = serializers.DecimalField(4, 2)
    drying = serializers.CharField(max_length=160, required=False, allow_blank=True)
    received_on = serializers.DateField()
    expires_on = serializers.DateField()
    certificate = CertificateEntry(required=False)


@extend_schema(
    methods=["GET"], parameters=[OpenApiParameter("q"), OpenApiParameter("state")],
    responses=StandardShape(many=True), operation_id="standards",
)  # fmt: skip
@extend_schema(methods=["POST"], request=StandardEntry, responses={201: StandardShape}, operation_id="record_standard")
@api_view(["GET", "POST"])
def list(request: Request) -> Response:
    """Lots by number; POST records one into quarantine."""
    if request.method == "POST":
        return recorded(
            request, roles=("analyst", "supervisor"), entry=StandardEntry, change=record_standard,
            found=_standards(), shown=StandardShape,
        )  # fmt: skip
    q, state = request.query_params.get("q", ""), request.query_params.get("state", "")
    return listed(request, _standards(q=q, state=state), shown=StandardShape)


@extend_schema(responses=StandardShape, operation_id="standard")
@api_view(["GET"])
def detail(request: Request, number: str) -> Response:
    """One lot."""
    return Response(StandardShape(get_object_or_404(_standards(), number=number)).data)


def _standards(*, q: str = "", state: str = "") -> QuerySet[ReferenceStandard]:
    return standards_found(day=timezone.localdate(), q=q, state=state)
