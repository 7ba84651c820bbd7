"""One cell of a sheet."""

from __future__ import annotations

from decimal import Decimal

from labrecords.errors import Refused
from labrecords.rules.number import parse_number

LABELS = {
    "amount": "Amount",
    "start": "Start",
    "first_end": "First endpoint",
    "end": "End",
    "temperature": "Temperature",
    "drift": "Drift",
    "minutes": "Duration",
    "loss": "Loss on drying",
}


def clean_cell(field: str, text: str) -> Decimal | None:
    """A typed number with its places, or None when the cell is empty; Refused naming cell and value."""
    typed = text.strip()
    if not typed:
        return None
    try:
        return parse_number(typed, field=LABELS.get(field, field))
    except ValueError as problem:
        raise Refused([str(problem)]) from problem


def clean_observation(text: str) -> str:
    """What was seen, in a few words."""
    typed = text.strip()
    if len(typed) > 120:
        raise Refused([f"Observation has {len(typed)} characters; 120 at most."])
    return typed


def clean_preview_cell(text: str) -> str | None:
    """A typed cell for the preview: what is no number yet counts as not yet typed."""
    try:
        return str(parse_number(text.strip())) if text.strip() else None
    except ValueError:
        return None
