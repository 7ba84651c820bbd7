"""Reviewing the trail: an auditor signs that the sealed events so far were looked at."""

from __future__ import annotations

from django.db import transaction
from django.utils import timezone

from labrecords.errors import refuse_if
from labrecords.models import AuditCheckpoint, Meaning, Signature, User
from labrecords.queries.trail import review_as_signed, reviewed_to
from labrecords.rules.trail import objections_to_reviewing_trail
from labrecords.services import audit
from labrecords.services.signature import Credentials, sign


@transaction.atomic(durable=True)
def review_trail(*, by: User, credentials: Credentials, tree_size: int, remarks: str) -> Signature:
    """Sign a review of everything from the last one up to the checkpoint of this size."""
    checkpoint, start = AuditCheckpoint.objects.filter(tree_size=tree_size).first(), reviewed_to()
    refuse_if(objections_to_reviewing_trail(checkpoint, by=by, start=start, remarks=remarks))
    assert checkpoint is not None
    number = f"places {start} to {tree_size - 1}"
    with audit.event("trail.review", by=by, subject=number, reason=remarks):
        return sign(
            Meaning.TRAIL_REVIEWED, by=by, credentials=credentials, noun="trail", record_id=tree_size,
            number=number, content=review_as_signed(checkpoint, start=start, remarks=remarks),
            reason=remarks, zone=timezone.get_current_timezone_name(),
        )  # fmt: skip
