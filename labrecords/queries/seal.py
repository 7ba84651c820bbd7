"""The sealed tree over the trail (RFC 9162): what a leaf is, and what the root of so many leaves is."""

from __future__ import annotations

import hashlib
import hmac
from collections.abc import Iterable, Sequence
from datetime import datetime
from typing import Any

from django.conf import settings
from django.db.models import QuerySet

from labrecords.canonical import canonical_json
from labrecords.models import AuditEvent, AuditLeaf

LEAF, NODE = b"\x00", b"\x01"


def leaf_hash(event: AuditEvent) -> bytes:
    """SHA-256 of an event with its changes, in canonical form, behind the prefix of a leaf."""
    return hashlib.sha256(LEAF + canonical_json(content_of(event)).encode()).digest()


def content_of(event: AuditEvent) -> dict[str, Any]:
    """What a leaf covers: the event and every change written under it."""
    return {
        "id": event.pk,
        "actor": event.actor_id,
        "actor_name": event.actor_name,
        "action": event.action,
        "subject": event.subject,
        "reason": event.reason,
        "occurred_at": event.occurred_at,
        "is_simulated": event.is_simulated,
        "changes": [
            {
                "table": change.table_name,
                "key": change.record_key,
                "operation": change.operation,
                "before": change.before,
                "after": change.after,
            }
            for change in event.changes.all()
        ],
    }


def root_hash(leaves: Sequence[bytes]) -> bytes:
    """The root of RFC 9162, section 2.1.1: of the leaves so far, an odd one is carried up unchanged."""
    if not leaves:
        return hashlib.sha256(b"").digest()
    level = list(leaves)
    while len(level) > 1:
        pairs = [hashlib.sha256(NODE + level[at] + level[at + 1]).digest() for at in range(0, len(level) - 1, 2)]
        level = pairs + ([level[-1]] if len(level) % 2 else [])
    return level[0]


def mark(tree_size: int, root: bytes, written_at: datetime) -> bytes:
    """HMAC-SHA-256 with the laboratory's sealing key over size, root and time in microseconds."""
    moment = int(written_at.timestamp()) * 1_000_000 + written_at.microsecond
    text = f"{tree_size} {root.hex()} {moment}"
    return hmac.new(settings.SEALING_KEY.encode(), text.encode(), hashlib.sha256).digest()


def unsealed_events(*, limit: int) -> QuerySet[AuditEvent]:
    """Events that have no place in the tree yet, oldest first; late commits are found like any other."""
    return AuditEvent.objects.filter(leaf__isnull=True).prefetch_related("changes").order_by("id")[:limit]


def leaves() -> Iterable[bytes]:
    """The stored leaf hashes in their order."""
    return (bytes(row) for row in AuditLeaf.objects.order_by("position").values_list("leaf_hash", flat=True))
