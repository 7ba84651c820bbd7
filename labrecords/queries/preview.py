"""What the present readings mean: the same function as the official calculation, nothing stored."""

from __future__ import annotations

import json
from collections.abc import Mapping
from typing import Any

from analysis.determination import compute
from labrecords.canonical import canonical_json
from labrecords.models import Run, Standardization
from labrecords.queries.calculation_inputs import inputs_for_run, inputs_for_standardization
from labrecords.queries.replicate import replicates_of

Record = Run | Standardization


def inputs_for(record: Record) -> dict[str, Any]:
    """The inputs of a record's calculation as it stands now."""
    return inputs_for_run(record) if isinstance(record, Run) else inputs_for_standardization(record)


def computed(record: Record) -> tuple[str, dict[str, Any]]:
    """Canonical inputs of a record and what analysis makes of them; ValueError with the sentence."""
    text = canonical_json(inputs_for(record))
    return text, compute(json.loads(text))


def preview(record: Record, *, typed: Mapping[tuple[int, str], str | None]) -> dict[str, Any]:
    """Outputs with what is typed but not yet kept, by replicate id and field; never raises for odd readings."""
    inputs = inputs_for(record)
    ids = {(item.kind, item.number): item.pk for item in replicates_of(record)}
    for kind, lines in (("sample", inputs["replicates"]), ("blank", inputs["blanks"])):
        for line in lines:
            pk = ids[(kind, line["number"])]
            for field in ("amount", "start", "first_end", "end", "temperature", "drift", "minutes"):
                if (pk, field) in typed:
                    line[field] = typed[(pk, field)]
    try:
        return compute(json.loads(canonical_json(inputs)))
    except ValueError as error:
        return {
            "titrations": [],
            "value": None,
            "reasons": [str(error)],
            "flags": [],
            "verdict": None,
            "problem": True,
        }
