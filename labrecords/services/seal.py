"""Sealing the trail: events get their place in the tree, checkpoints are marked and anchored outside the database."""

from __future__ import annotations

import os

from django.conf import settings
from django.db import connection, transaction
from django.utils import timezone

from labrecords.models import AuditCheckpoint, AuditLeaf
from labrecords.queries.seal import leaf_hash, leaves, mark, root_hash, unsealed_events

LOCK = 7_301_104  # of this work, so that a second sealer waits outside
MOST_EVENTS = 20_000


@transaction.atomic(durable=True)
def seal_trail() -> AuditCheckpoint | None:
    """Give every event without a place the next one and write a marked checkpoint; None when nothing is new.

    Only one sealer works at a time; another returns at once. The anchor line is written after the checkpoint is safe.
    """
    with connection.cursor() as cursor:
        cursor.execute("SELECT pg_try_advisory_xact_lock(%s)", [LOCK])
        if not cursor.fetchone()[0]:
            return None
    events = list(unsealed_events(limit=MOST_EVENTS))
    if not events:
        return None
    size = AuditLeaf.objects.count()
    AuditLeaf.objects.bulk_create(
        AuditLeaf(position=size + offset, event=event, leaf_hash=leaf_hash(event))
        for offset, event in enumerate(events)
    )
    known = list(leaves())
    root, now = root_hash(known), timezone.now()
    checkpoint = AuditCheckpoint.objects.create(
        tree_size=len(known), root_hash=root, mark=mark(len(known), root, now), written_at=now
    )
    transaction.on_commit(lambda: anchor(checkpoint))
    return checkpoint


def anchor(checkpoint: AuditCheckpoint) -> None:
    """Append the checkpoint to the anchor file: size, root, time and mark on one line."""
    line = " ".join(
        [
            str(checkpoint.tree_size),
            bytes(checkpoint.root_hash).hex(),
            checkpoint.written_at.isoformat(),
            bytes(checkpoint.mark).hex(),
        ]
    )
    settings.ANCHOR_FILE.parent.mkdir(parents=True, exist_ok=True)
    handle = os.open(settings.ANCHOR_FILE, os.O_WRONLY | os.O_APPEND | os.O_CREAT, 0o640)
    try:
        os.write(handle, f"{line}\n".encode())
        os.fsync(handle)
    finally:
        os.close(handle)
