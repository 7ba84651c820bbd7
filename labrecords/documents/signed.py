"""Signed content laid out for reading: facts first, then one table for each list."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from datetime import UTC, datetime
from typing import Any

from labrecords import writing

FACTS = "Record"
NAMING = ("kind", "number", "part", "instrument")


@dataclass(frozen=True, slots=True)
class Part:
    """One table: what it is of, its columns, and its rows; a table of facts has no columns."""

    title: str
    columns: Sequence[str]
    rows: Sequence[Sequence[str]]


def laid_out(content: Mapping[str, Any], *, zone: Any = UTC) -> list[Part]:
    """The parts of what a signature covers, every value of it; times in a zone."""
    facts = {key: value for key, value in content.items() if not isinstance(value, Mapping | list)}
    parts = [_facts(FACTS, facts, zone=zone)]
    for key, value in content.items():
        if isinstance(value, Mapping):
            parts.append(_facts(_words(key), value, zone=zone))
        elif isinstance(value, list):
            parts.append(_table(key, value, zone=zone))
    return [part for part in parts if part.rows]


def _facts(title: str, facts: Mapping[str, Any], *, zone: Any) -> Part:
    return Part(title, (), [(_words(key), _said(value, key=key, zone=zone)) for key, value in facts.items()])


def _table(key: str, rows: Sequence[Any], *, zone: Any) -> Part:
    """A row for each item; columns that are empty in every row are named in none of them."""
    if not all(isinstance(row, Mapping) for row in rows):
        return Part(_words(key), (), [(str(place), _said(row, key="", zone=zone)) for place, row in enumerate(rows, 1)])
    names = [name for name in dict.fromkeys(name for row in rows for name in row) if any(map(_known(name), rows))]
    names.sort(key=lambda name: name not in NAMING)  # what a row is stands first
    told = [[_said(row.get(name), key=name, zone=zone) for name in names] for row in rows]
    return Part(_words(key), [_words(name) for name in names], told)


def _known(name: str) -> Any:
    return lambda row: row.get(name) not in (None, "")


def _words(key: str) -> str:
    text = key.replace("_", " ").replace("sha256", "SHA-256")
    return text[:1].upper() + text[1:]


def _said(value: Any, *, key: str, zone: Any) -> str:
    """A moment is signed in microseconds since 1970; anything else as it stands."""
    if value in (None, ""):
        return "empty"
    if isinstance(value, bool):
        return "yes" if value else "no"
    if key.endswith("_at") and str(value).isdigit():
        return writing.when(datetime.fromtimestamp(int(value) / 1e6, tz=UTC).astimezone(zone))
    if isinstance(value, Mapping):
        return "; ".join(f"{name}: {_said(item, key=name, zone=zone)}" for name, item in value.items())
    if isinstance(value, list):
        return ", ".join(_said(item, key="", zone=zone) for item in value)
    return str(value)
