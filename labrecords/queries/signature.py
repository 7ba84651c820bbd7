"""Reading signatures."""

from __future__ import annotations

from django.db.models import QuerySet

from labrecords.models import Signature


def signatures_of(noun: str, record_id: int) -> QuerySet[Signature]:
    """The signatures on one record, oldest first."""
    return Signature.objects.filter(noun=noun, record_id=record_id).select_related("signer").order_by("id")
