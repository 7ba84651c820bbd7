"""Which column is the volume and which the reading: proposed with the reason, confirmed by a person."""

from __future__ import annotations

import re
from dataclasses import dataclass
from itertools import pairwise

from labrecords.errors import Refused
from labrecords.imports.cell import number_in
from labrecords.imports.table import Column, Table

QUANTITIES = ("pH", "mV", "conductivity", "temperature", "absorbance")
UNITS_OF = {
    "volume": ("mL",),
    "pH": ("pH",),
    "mV": ("mV",),
    "conductivity": ("µS/cm", "mS/cm", "µS", "mS", "S/m", "mS/m"),
    "temperature": ("°C",),
    "absorbance": ("AU",),
}
# A heading says what is in its column; what is not listed is judged by unit and values.
WORDS = {
    "volume": re.compile(r"\b(volume|vol|titrant|volumen|added|dosed|v|ml)\b"),
    "pH": re.compile(r"\bph\b"),
    "mV": re.compile(r"\b(mv|potential|emf|voltage|orp|redox|e|u)\b"),
    "conductivity": re.compile(r"\b(conductivity|conductance|cond|kappa|κ)\b"),
    "temperature": re.compile(r"\b(temperature|temp|t)\b"),
    "absorbance": re.compile(r"\b(absorbance|abs|extinction|a)\b"),
}
OTHER = re.compile(r"\b(time|index|no|nr|number|point|step|row|rate|drift|deriv\w*|d\w+/d\w+)\b|#")
JUDGED_ROWS = 1000
OTHER_UNITS = ("s", "min", "h", "%", "pH/mL", "mV/mL")


@dataclass(frozen=True, slots=True)
class Mapping:
    """Places of the two columns, counted from 1, the quantity read, how sure that is and why."""

    volume: int
    reading: int
    quantity: str
    confidence: str
    why: str


@dataclass(frozen=True, slots=True)
class _Evidence:
    """What speaks for a column being one quantity: points, and whether heading or unit name it."""

    column: Column
    quantity: str
    points: int
    named: tuple[str, ...]


def propose_mapping(table: Table, *, wanted: str | None = None) -> Mapping:
    """The likeliest columns; ``wanted`` is the quantity of the method, preferred where several fit.

    Confidence is "sure" (headings or units name both), "likely" (they name one) or "a guess" (values alone).
    """
    numeric = [column for column in table.columns if _is_numeric(table, column)]
    if len(numeric) < 2:
        raise Refused([_too_few(table, numeric)])
    volumes = [_evidence(table, column, quantity="volume") for column in numeric]
    readings = [_evidence(table, column, quantity=name) for name in QUANTITIES for column in numeric]
    volume, reading = max(
        ((one, other) for one in volumes for other in readings if one.column != other.column),
        key=lambda pair: pair[0].points + pair[1].points + _preference(pair[1], wanted=wanted),
    )
    named = bool(volume.named) + bool(reading.named)
    return Mapping(
        volume=volume.column.place,
        reading=reading.column.place,
        quantity=reading.quantity,
        confidence=("a guess", "likely", "sure")[named],
        why=f"{_because(volume)}; {_because(reading)}.",
    )


def chosen_mapping(table: Table, *, volume: int, reading: int, quantity: str) -> Mapping:
    """The columns a person chose, counted from 1; raises Refused when they cannot be."""
    found = []
    for field, place in (("Volume column", volume), ("Reading column", reading)):
        if not 1 <= place <= len(table.columns):
            found.append(f"{field} is {place}; expected 1 to {len(table.columns)}: {found_columns(table)}.")
    if volume == reading:
        found.append(f"Volume and reading are both column {volume}; choose two columns.")
    if quantity not in QUANTITIES:
        found.append(f"Quantity is {quantity!r}; expected one of {', '.join(QUANTITIES)}.")
    if found:
        raise Refused(found)
    return Mapping(volume, reading, quantity, confidence="chosen", why="Chosen by hand.")


def found_columns(table: Table) -> str:
    """The columns of a table in words, for a sentence."""
    return "; ".join(str(column) for column in table.columns)


def _is_numeric(table: Table, column: Column) -> bool:
    return len(_values(table, column)) * 2 >= min(len(table.rows), JUDGED_ROWS)


def _too_few(table: Table, numeric: list[Column]) -> str:
    count = {0: "no column", 1: "only one column"}[len(numeric)]
    return (
        f"File {table.name} has {count} of numbers; a column of volume [mL] and one of pH, mV, conductivity, "
        f"temperature or absorbance are expected. Found: {found_columns(table)}."
    )


def _preference(reading: _Evidence, *, wanted: str | None) -> int:
    if reading.quantity != wanted:
        return 0
    return 10 if reading.named else 1


def _evidence(table: Table, column: Column, *, quantity: str) -> _Evidence:
    points, named = 0, []
    name = re.sub(r"[_\s]+", " ", column.name.lower())
    if OTHER.search(name) or column.unit in OTHER_UNITS:
        points -= 6
    elif WORDS[quantity].search(name):
        points, named = points + 4, ["its heading"]
    if column.unit in UNITS_OF[quantity]:
        points, named = points + 4, [*named, "its unit"]
    elif column.unit:
        points -= 4
    fit = _fit_of_volumes if quantity == "volume" else _fit_of_readings
    points += fit(_values(table, column), quantity=quantity, columns=len(table.columns))
    return _Evidence(column, quantity, points, tuple(named))


def _values(table: Table, column: Column) -> list[float]:
    found = [number_in(row.cells[column.place - 1]) for row in table.rows[:JUDGED_ROWS]]
    return [float(number.text) for number in found if number is not None]


def _fit_of_volumes(values: list[float], *, quantity: str, columns: int) -> int:
    """How well values fit a volume: they rise from about zero; counting 1, 2, 3 beside others is an index."""
    low, high = min(values), max(values)
    rises = high > low and all(after >= before for before, after in pairwise(values))
    index = columns > 2 and _counts(values)
    return 3 * rises + (low >= 0) - (high > 200) - index - 3 * (low < 0)


def _fit_of_readings(values: list[float], *, quantity: str, columns: int) -> int:
    """How well values fit a quantity: pH is within 0 to 14, mV goes beyond; the others need their names."""
    low, high = min(values), max(values)
    if low == high or _counts(values):
        return -2
    if quantity == "pH":
        return 2 if low >= 0 and high <= 14 else -3
    if quantity == "mV":
        return 2 if (low < 0 or high > 14) and low >= -2000 and high <= 2000 else -1
    return 0 if low >= 0 or quantity == "temperature" else -3


def _counts(values: list[float]) -> bool:
    return values[0] in (0, 1) and all(after - before == 1 for before, after in pairwise(values))


def _because(evidence: _Evidence) -> str:
    reasons = " and ".join(evidence.named) or "its values"
    quantity = "Volume" if evidence.quantity == "volume" else evidence.quantity
    return f"{quantity} is {evidence.column}, by {reasons}"
