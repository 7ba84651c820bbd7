"""Does the database still say what was recorded? Each check returns the sentences of what it found wrong."""

from __future__ import annotations

import json
from collections.abc import Callable, Iterator
from pathlib import Path
from typing import Any

from django.conf import settings
from django.db import connection

from labrecords.canonical import sha256_of
from labrecords.models import (
    AuditChange, AuditCheckpoint, AuditEvent, AuditLeaf, Calculation, NumberSeries, RecordState, Run, Signature,
    Standardization,
)  # fmt: skip
from labrecords.queries.audit import contributor_ids
from labrecords.queries.seal import leaf_hash, leaves, mark, root_hash

HASHED = "ARRAY['content', 'inputs', 'outputs', 'volumes', 'readings', 'password']"
SERIES = {"R": "labrecords_run", "S": "labrecords_standardization", "I": "labrecords_investigation"}


def checks() -> dict[str, Callable[[], Iterator[str]]]:
    """Every check by the sentence that says what must hold."""
    return {
        "Every sealed event still has the hash it was sealed with": altered_leaves,
        "Every checkpoint still has its root, its mark and its anchor": broken_checkpoints,
        "Every record is what the trail says it became": altered_records,
        "Every signature still covers its stored content": altered_signatures,
        "Every calculation still has the inputs it was made from": altered_calculations,
        "Every approved record was signed by a second person": unsigned_approvals,
        "Every out-of-specification result has its investigation": uninvestigated_results,
        "Every number of every series is there": missing_numbers,
    }


def simulated_events() -> int:
    """How many events were written with a simulated clock: the demo's history, never a laboratory's."""
    return AuditEvent.objects.filter(is_simulated=True).count()


def altered_leaves() -> Iterator[str]:
    """Recompute each leaf from its event; the first that differs is named."""
    rows = AuditLeaf.objects.select_related("event").prefetch_related("event__changes").order_by("position")
    for expected, leaf in enumerate(rows.iterator(chunk_size=2000)):
        if leaf.position != expected:
            yield f"Place {expected} of the sealed trail is missing."
            return
        if leaf_hash(leaf.event) != bytes(leaf.leaf_hash):
            yield f"Event {leaf.event_id} ({leaf.event}) was altered after it was sealed at place {leaf.position}."
            return


def broken_checkpoints() -> Iterator[str]:
    """Roots from the stored leaves, marks from the sealing key, and the lines of the anchor file."""
    known, anchored = list(leaves()), _anchors(settings.ANCHOR_FILE)
    checkpoints = list(AuditCheckpoint.objects.order_by("tree_size"))
    for checkpoint in [*checkpoints[:-1][-20:], *checkpoints[-1:]]:
        size, root = checkpoint.tree_size, bytes(checkpoint.root_hash)
        if size > len(known) or root_hash(known[:size]) != root:
            yield f"The root at {size} events is not the one that was sealed."
        if mark(size, root, checkpoint.written_at) != bytes(checkpoint.mark):
            yield f"The mark of the checkpoint at {size} events is not this laboratory's."
    stored = {item.tree_size: bytes(item.root_hash).hex() for item in checkpoints}
    for size, root_text in anchored.items():
        if stored.get(size) != root_text:
            yield f"The anchor file has another root at {size} events than the database."


def altered_records() -> Iterator[str]:
    """Replay the changes of each table and compare every row as it stands."""
    tables = AuditChange.objects.order_by("table_name").values_list("table_name", flat=True).distinct()
    for table in list(tables):
        replayed = _replayed(table)
        for key, row in _rows(table):
            if key not in replayed:
                yield f"Row {key} of {table} stands outside the trail."
            elif replayed.pop(key) != row:
                yield f"Row {key} of {table} is not what the trail says it became."
        for key in replayed:
            yield f"Row {key} of {table} is on the trail and gone from the table."


def altered_signatures() -> Iterator[str]:
    """The hash of a signature is that of its content."""
    for signature in Signature.objects.order_by("id").iterator(chunk_size=500):
        if sha256_of(signature.content) != signature.content_sha256:
            yield f"Signature {signature.pk} on {signature.record_number} does not cover its stored content."


def altered_calculations() -> Iterator[str]:
    """The digest of a calculation is that of its inputs."""
    for pk, inputs, digest in Calculation.objects.values_list("pk", "inputs", "inputs_sha256").iterator():
        if sha256_of(inputs) != digest:
            yield f"Calculation {pk} has other inputs than it was made from."


def unsigned_approvals() -> Iterator[str]:
    """An approval is signed by a person who entered, corrected and computed no part of the record."""
    for noun, model in (("run", Run), ("standardization", Standardization)):
        for record in model.objects.filter(state=RecordState.APPROVED):
            signers = Signature.objects.filter(noun=noun, record_id=record.pk, meaning="reviewed by")
            ids = set(signers.values_list("signer_id", flat=True))
            if not ids - contributor_ids(record):
                yield f"{record.number} is approved without the signature of a second person."


def uninvestigated_results() -> Iterator[str]:
    """Submitted and approved results out of specification are investigated; void ones too."""
    runs = Run.objects.filter(calculation__outcome="does_not_conform", investigations__isnull=True, retest_for__isnull=True)
    for run in runs.exclude(state=RecordState.OPEN):
        yield f"{run.number} is out of specification and was never investigated."


def missing_numbers() -> Iterator[str]:
    """Each series counts from one to its last number without a gap."""
    for series in NumberSeries.objects.filter(series__in=SERIES):
        prefix = f"{series.series}-{series.year % 100:02d}-"
        with connection.cursor() as cursor:
            cursor.execute(f"SELECT count(*) FROM {SERIES[series.series]} WHERE number LIKE %s", [f"{prefix}%"])
            (count,) = cursor.fetchone()
        if count != series.last:
            yield f"Series {prefix} gave {series.last} numbers and {count} records have one."


def _replayed(table: str) -> dict[str, dict[str, Any]]:
    rows: dict[str, dict[str, Any]] = {}
    changes = AuditChange.objects.filter(table_name=table).order_by("id").values_list(
        "record_key", "operation", "after"
    )  # fmt: skip
    for key, operation, after in changes.iterator(chunk_size=5000):
        if operation == "DELETE":
            rows.pop(key, None)
        else:
            rows.setdefault(key, {}).update(after or {})
    return rows


def _rows(table: str) -> Iterator[tuple[str, dict[str, Any]]]:
    with connection.cursor() as cursor:
        quoted = connection.ops.quote_name(table)
        cursor.execute(f"SELECT t.id::text, labrecords_row_as_text(to_jsonb(t), {HASHED})::text FROM {quoted} AS t")
        for key, row in cursor.fetchall():
            yield key, json.loads(row)


def _anchors(path: Path) -> dict[int, str]:
    if not path.exists():
        return {}
    lines = (line.split() for line in path.read_text().splitlines())
    return {int(parts[0]): parts[1] for parts in lines if len(parts) == 4}
