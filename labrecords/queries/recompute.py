"""Does every stored result come out again from its stored inputs?"""

from __future__ import annotations

import json
import math
from collections.abc import Iterator
from dataclasses import dataclass
from typing import Any

from analysis import VERSION
from analysis.determination import compute
from labrecords.models import Calculation

AGREEMENT = 1e-12  # relative; the same machine gives the same bits


@dataclass(frozen=True, slots=True)
class Recomputed:
    """One stored calculation computed again: "same", "agrees" within 1e-12, "differs" or "other version"."""

    label: str
    verdict: str
    finding: str = ""


def recomputed() -> Iterator[Recomputed]:
    """Every stored calculation, oldest first, computed again from its canonical inputs."""
    rows = Calculation.objects.select_related("run", "standardization").order_by("id")
    for row in rows.iterator(chunk_size=100):
        label = f"calculation {row.number} of {row.run or row.standardization}"
        if row.engine_version != VERSION:
            yield Recomputed(label, "other version", f"computed by version {row.engine_version}, this is {VERSION}")
            continue
        yield _compared(label, row.outputs, row.inputs)


def _compared(label: str, stored: Any, inputs: str) -> Recomputed:
    try:
        found = json.loads(json.dumps(compute(json.loads(inputs))))
    except ValueError as problem:
        return Recomputed(label, "differs", str(problem))
    if found == stored:
        return Recomputed(label, "same")
    place = first_difference(stored, found)
    return Recomputed(label, "differs", place) if place else Recomputed(label, "agrees")


def first_difference(stored: Any, found: Any, *, place: str = "") -> str:
    """Where two outputs differ by more than 1e-12 relative, or an empty text."""
    if isinstance(stored, dict) and isinstance(found, dict):
        keys = sorted(stored.keys() | found.keys())
        parts = ((key, stored.get(key), found.get(key)) for key in keys)
        return next((text for key, a, b in parts if (text := first_difference(a, b, place=f"{place}.{key}"))), "")
    if isinstance(stored, list) and isinstance(found, list) and len(stored) == len(found):
        pairs = enumerate(zip(stored, found, strict=True))
        return next((text for n, (a, b) in pairs if (text := first_difference(a, b, place=f"{place}[{n}]"))), "")
    if isinstance(stored, int | float) and isinstance(found, int | float):
        close = math.isclose(stored, found, rel_tol=AGREEMENT, abs_tol=1e-300)
        return "" if close else f"{place.lstrip('.')} was {stored!r} and is {found!r}"
    return "" if stored == found else f"{place.lstrip('.')} was {stored!r} and is {found!r}"
