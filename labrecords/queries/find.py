"""Find by any number or code, exact or in part."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from labrecords.models import (
    Batch,
    ControlChart,
    ControlSample,
    Instrument,
    Investigation,
    Method,
    Product,
    ReferenceStandard,
    Run,
    Sample,
    Standardization,
    Titrant,
    TitrantLot,
)  # fmt: skip

MOST = 15
KINDS = [
    ("run", Run, "number", "run-sheet"),
    ("standardization", Standardization, "number", "standardization-sheet"),
    ("titrant lot", TitrantLot, "number", "titrant_lot-detail"),
    ("batch", Batch, "number", "batch-detail"),
    ("sample", Sample, "number", "sample-detail"),
    ("reference standard", ReferenceStandard, "number", "standard-detail"),
    ("instrument", Instrument, "identifier", "instrument-detail"),
    ("investigation", Investigation, "number", "investigation-detail"),
    ("method", Method, "code", "method-detail"),
    ("product", Product, "code", "product-detail"),
    ("titrant", Titrant, "code", "titrant-detail"),
    ("control sample", ControlSample, "code", "control_sample-detail"),
    ("control chart", ControlChart, "code", "control_chart-detail"),
]


def as_typed(text: str) -> str:
    """What was typed or scanned without what no number has: spaces around it, signs that do not print."""
    return "".join(sign for sign in text if sign.isprintable()).strip()[:200]


@dataclass(frozen=True, slots=True)
class Match:
    """A record that was found: what it is, its number, and the name of its page."""

    kind: str
    number: str
    page: str


def exact_match(text: str) -> Match | None:
    """The record whose number or code is exactly this, upper or lower case."""
    for kind, model, field, page in KINDS:
        same = model._default_manager.filter(**{f"{field}__iexact": text})
        found = same.values_list(field, flat=True).first()
        if found is not None:
            return Match(kind=kind, number=found, page=page)
    return None


def partial_matches(text: str) -> Sequence[Match]:
    """Records whose number or code has the text, some of each kind."""
    found: list[Match] = []
    for kind, model, field, page in KINDS:
        numbers = model._default_manager.filter(**{f"{field}__icontains": text}).order_by(f"-{field}")
        some = numbers.values_list(field, flat=True)[:MOST]
        found += [Match(kind=kind, number=number, page=page) for number in some]
    return found
