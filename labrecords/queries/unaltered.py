"""Is the trail whole, and is every row what it says? The database may have been opened from below."""

from __future__ import annotations

import json
from collections.abc import Iterator
from pathlib import Path
from typing import Any

from django.apps import apps
from django.conf import settings
from django.db import connection

from labrecords.models import (
    AuditChange,
    AuditCheckpoint,
    AuditEvent,
    AuditLeaf,
    CalculationRequest,
    MonteCarloCheck,
    NumberSeries,
)
from labrecords.queries.seal import leaf_hash, leaves, mark, root_hash

# Columns that came with a later migration: a row from before has their value of then, and the trail says nothing of it.
ADDED_LATER: dict[str, dict[str, str | None]] = {
    "labrecords_titrant": {
        "expands_like": "water", "buoyancy": "false", "temperature_correction": "false", "temperature_within": "0.0",
        "drift_u": None, "endpoint": "indicator", "curve_quantity": "", "deciding_family": "", "checking_family": "",
        "fixed_reading": None, "first_fixed_reading": None, "endpoints_expected": "1", "endpoint_chosen": "1",
        "agreement_limit": "3.0", "system": None, "initial_volume": None, "blanks_needed": "1",
    },
    "labrecords_methodversion": {
        "first_fixed_reading": None, "sample_density": None, "temperature_correction": "false",
        "temperature_within": "0.0", "loss_u": "0.000", "parts": "[]", "drift_u": None,
    },
    "labrecords_replicate": {"first_end": None, "drift": None, "minutes": None},
    "labrecords_controlchart": {"method_id": None, "instrument_id": None},
    "labrecords_controllimits": {
        "also": "[]", "ewma_weight": "0.2", "ewma_width": "2.962", "cusum_reference": "0.5", "cusum_interval": "5",
    },
    "labrecords_specificationlimit": {"figures": None},
}  # fmt: skip
HASHED = "ARRAY['content', 'inputs', 'outputs', 'volumes', 'readings', 'password']"


def altered_leaves() -> Iterator[str]:
    """Recompute each leaf from its event; the first that differs is named."""
    rows = AuditLeaf.objects.select_related("event").prefetch_related("event__changes").order_by("position")
    for expected, leaf in enumerate(rows.iterator(chunk_size=2000)):
        if leaf.position != expected:
            yield f"Place {expected} of the sealed trail is missing."
            return
        if leaf_hash(leaf.event) != bytes(leaf.leaf_hash):
            what = f"Event {leaf.event_id} ({leaf.event})"
            yield f"{what} was altered after it was sealed at place {leaf.position}."
            return


def broken_checkpoints() -> Iterator[str]:
    """Roots from the stored leaves, marks from the sealing key, and the lines of the anchor file."""
    known, anchored = list(leaves()), anchors(settings.ANCHOR_FILE)
    checkpoints = list(AuditCheckpoint.objects.order_by("tree_size"))
    for checkpoint in [*checkpoints[:-1][-20:], *checkpoints[-1:]]:
        size, root = checkpoint.tree_size, bytes(checkpoint.root_hash)
        if size > len(known) or root_hash(known[:size]) != root:
            yield f"The root at {size} events is not the one that was sealed."
        if mark(size, root, checkpoint.written_at) != bytes(checkpoint.mark):
            yield f"The mark of the checkpoint at {size} events is not this laboratory's."
    stored = {item.tree_size: bytes(item.root_hash).hex() for item in checkpoints}
    for size, root_text in anchored.items():
        if size not in stored:
            yield f"The anchor file has a checkpoint at {size} events, and the database has none."
        elif stored[size] != root_text:
            yield f"The anchor file has another root at {size} events than the database."


def altered_records() -> Iterator[str]:
    """Replay the changes of each table and compare every row as it stands."""
    for table in recorded_tables():
        replayed = _replayed(table)
        for key, row in _rows(table):
            if key not in replayed:
                yield f"Row {key} of {table} stands outside the trail."
            elif ADDED_LATER.get(table, {}) | replayed.pop(key) != row:
                yield f"Row {key} of {table} is not what the trail says it became."
        for key in replayed:
            yield f"Row {key} of {table} is on the trail and gone from the table."


def missing_triggers() -> Iterator[str]:
    """A table without its trigger, or with one that is switched off, would take changes off the trail."""
    with connection.cursor() as cursor:
        cursor.execute(
            "SELECT tgrelid::regclass::text FROM pg_trigger WHERE tgname = 'write_change' AND tgenabled = 'O'"
        )
        written = {table for (table,) in cursor.fetchall()}
    for table in recorded_tables():
        if table not in written:
            yield f"Changes of {table} are not written on the trail: its trigger is gone or switched off."


def recorded_tables() -> list[str]:
    """Every table whose changes are written on the trail."""
    unwritten = {
        AuditEvent,
        AuditChange,
        AuditLeaf,
        AuditCheckpoint,
        CalculationRequest,
        MonteCarloCheck,
        NumberSeries,
    }
    models = apps.get_app_config("labrecords").get_models()
    return sorted(model._meta.db_table for model in models if model not in unwritten)


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


def anchors(path: Path) -> dict[int, str]:
    """The root at each size as the anchor file has it; a line that cannot be read is no checkpoint's."""
    if not path.exists():
        return {}
    lines = (line.split() for line in path.read_text(errors="replace").splitlines())
    return {
        int(parts[0]) if parts[0].isdigit() else -1: parts[1] if len(parts) == 4 else "" for parts in lines if parts
    }
