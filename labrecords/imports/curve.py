"""A recorded curve taken from two columns of a table, every cell checked."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

from labrecords.errors import Refused
from labrecords.imports.cell import THOUSANDS, number_in, why_no_number
from labrecords.imports.layout import Row
from labrecords.imports.mapping import UNITS_OF, Mapping, chosen_mapping, found_columns
from labrecords.imports.table import Column, Table
from labrecords.rules.number import SIGNS, shown

LEAST_POINTS = 3
MOST_SENTENCES = 5
# Lowest and highest value that a recording of the quantity can hold, in the unit shown.
RANGES = {
    "volume": (-0.001, 1000.0, "mL"),
    "pH": (-2.0, 16.0, ""),
    "mV": (-2000.0, 2000.0, "mV"),
    "conductivity": (0.0, 2_000_000.0, ""),
    "temperature": (-20.0, 150.0, "°C"),
    "absorbance": (-1.0, 10.0, ""),
}


@dataclass(frozen=True, slots=True)
class RecordedCurve:
    """Volumes [mL] and readings in their written digits, decimal mark a point; ``notes`` say how read."""

    volume: tuple[str, ...]
    reading: tuple[str, ...]
    quantity: str
    notes: tuple[str, ...]


def extract_curve(table: Table, *, mapping: Mapping) -> RecordedCurve:
    """Take the two columns of a mapping; raises Refused naming row, column, value and what is expected."""
    chosen_mapping(table, volume=mapping.volume, reading=mapping.reading, quantity=mapping.quantity)
    volume = table.columns[mapping.volume - 1]
    reading = table.columns[mapping.reading - 1]
    _refuse_units(table, volume=volume, reading=reading, quantity=mapping.quantity)
    rows, blank = _rows_with_readings(table, mapping)
    bad = _bad_cells(rows, volume, quantity="volume")
    _refuse(bad + _bad_cells(rows, reading, quantity=mapping.quantity))
    _refuse_doubtful_marks(table, rows, columns=(volume, reading), quantity=mapping.quantity)
    if len(rows) < LEAST_POINTS:
        count = f"{len(rows)} point{'' if len(rows) == 1 else 's'}"
        raise Refused([f"File {table.name} has {count}; a curve has at least {LEAST_POINTS}."])
    notes = [f"Rows without volume and reading left out: {blank}."] if blank else []
    return RecordedCurve(
        volume=_digits(rows, volume),
        reading=_digits(rows, reading),
        quantity=mapping.quantity,
        notes=(*table.notes, f"Volume from {volume}; {mapping.quantity} from {reading}.", *notes),
    )


def curve_fields(table: Table, *, mapping: Mapping, curve: RecordedCurve) -> dict[str, Any]:
    """Plain content of a curve for its record: quantity, mapping, volumes, readings and notes."""
    how = {
        "volume_column": str(table.columns[mapping.volume - 1]),
        "reading_column": str(table.columns[mapping.reading - 1]),
        "volume": mapping.volume,
        "reading": mapping.reading,
        "confidence": mapping.confidence,
        "why": mapping.why,
        "encoding": table.encoding,
        "separator": table.separator,
        "decimal_mark": table.decimal_mark,
        "sha256": table.sha256,
    }
    return {
        "quantity": curve.quantity,
        "mapping": how,
        "volumes": list(curve.volume),
        "readings": list(curve.reading),
        "notes": list(curve.notes),
    }


def _refuse_units(table: Table, *, volume: Column, reading: Column, quantity: str) -> None:
    found = []
    for column, wanted in ((volume, "volume"), (reading, quantity)):
        if column.unit and column.unit not in UNITS_OF[wanted]:
            expected = f"{wanted} in {' or '.join(UNITS_OF[wanted])} is expected"
            found.append(f"C{str(column)[1:]} is in {column.unit}; {expected}. Found: {found_columns(table)}.")
    _refuse(found)


def _rows_with_readings(table: Table, mapping: Mapping) -> tuple[list[Row], int]:
    """Rows that have anything in the two columns; a row with only one of them is refused later."""
    rows = [row for row in table.rows if row.cells[mapping.volume - 1] or row.cells[mapping.reading - 1]]
    return rows, len(table.rows) - len(rows)


def _bad_cells(rows: list[Row], column: Column, *, quantity: str) -> list[str]:
    low, high, unit = RANGES[quantity]
    found: list[str] = []
    for row in rows:
        cell = row.cells[column.place - 1]
        number = number_in(cell)
        if number is None:
            found.append(f"Row {row.number}, {column}: {quantity} {why_no_number(cell)}.")
        elif not low <= float(number.text) <= high:
            between = f"{round(low):d} to {high:.0f} {unit}".rstrip()
            hint = " It looks like mV." if quantity == "pH" and abs(float(number.text)) >= 20 else ""
            found.append(f"Row {row.number}, {column}: {quantity} is {shown(cell)}; {between} is expected.{hint}")
    return found


def _refuse_doubtful_marks(table: Table, rows: list[Row], *, columns: tuple[Column, Column], quantity: str) -> None:
    """Two kinds of decimal mark, or marks that may as well group thousands, are asked about."""
    first: dict[str, str] = {}
    proven = False
    for row in rows:
        for column in columns:
            cell = row.cells[column.place - 1]
            number = number_in(cell)
            if number is not None and number.mark:
                first.setdefault(number.mark, f"row {row.number}, {column}, is {shown(cell)}")
                proven = proven or not THOUSANDS.fullmatch(cell.translate(SIGNS))
    if len(first) == 2:
        both = f"{first[',']}, and {first['.']}"
        raise Refused([f"Two decimal marks: {both}. One decimal mark in the whole file is expected."])
    doubtful = "," in first or (table.separator == "semicolon" and quantity not in ("pH", "absorbance"))
    if first and not proven and doubtful:
        mark, where = next(iter(first.items()))
        said = f"The {'comma' if mark == ',' else 'point'} may be a decimal mark or group thousands: {where}"
        advice = "Export with two or four decimals, or without thousands separators."
        raise Refused([f"{said}, and no cell tells which. {advice}"])


def _refuse(sentences: list[str]) -> None:
    if not sentences:
        return
    more = len(sentences) - MOST_SENTENCES
    rest = [f"There are {more} more like these."] if more > 0 else []
    raise Refused([*sentences[:MOST_SENTENCES], *rest])


def _digits(rows: list[Row], column: Column) -> tuple[str, ...]:
    found = [number_in(row.cells[column.place - 1]) for row in rows]
    return tuple(number.text for number in found if number is not None)
