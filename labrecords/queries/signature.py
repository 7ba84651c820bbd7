"""Reading signatures."""

from __future__ import annotations

from django.db.models import QuerySet

from labrecords.models import Run, Signature, Standardization


def signatures_of(noun: str, record_id: int) -> QuerySet[Signature]:
    """The signatures on one record, oldest first."""
    return Signature.objects.filter(noun=noun, record_id=record_id).select_related("signer").order_by("id")


def record_signed(signature: Signature) -> Run | Standardization | None:
    """The run or the standardization that a signature is on."""
    if signature.noun == "run":
        return Run.objects.filter(pk=signature.record_id).first()
    if signature.noun == "standardization":
        return Standardization.objects.filter(pk=signature.record_id).first()
    return None
