"""A recorded table: from the bytes of a file to columns with names, units and cells as written."""

from __future__ import annotations

import hashlib
import re
from collections import Counter
from dataclasses import dataclass

from labrecords.errors import Refused
from labrecords.imports.cell import looks_numeric, number_in
from labrecords.imports.encoding import decode, refuse_size
from labrecords.imports.layout import SEPARATORS, Layout, Row, cut
from labrecords.imports.unit import split_heading, unit_of
from labrecords.rules.number import shown

LONGEST_HEADING = 80
MARKS = {
    "point": "a point as decimal mark",
    "comma": "a comma as decimal mark",
    "mixed": "both marks in use",
    "none": "no decimals",
}


@dataclass(frozen=True, slots=True)
class Column:
    """One column: its place from 1, its heading without the unit ("" for none), its unit ("" for none)."""

    place: int
    name: str
    unit: str

    def __str__(self) -> str:
        unit = f" [{self.unit}]" if self.unit and self.unit != self.name else ""
        return f"column {self.place}" + (f", {shown(self.name)}{unit}" if self.name else unit)


@dataclass(frozen=True, slots=True)
class Table:
    """A file as it was read; ``rows`` are the data rows alone, every one as wide as ``columns``."""

    name: str
    size: int
    sha256: str
    encoding: str
    separator: str
    decimal_mark: str
    columns: tuple[Column, ...]
    rows: tuple[Row, ...]
    notes: tuple[str, ...]

    def cells(self, place: int) -> list[str]:
        """The cells of a column, counted from 1."""
        return [row.cells[place - 1] for row in self.rows]


def read_table(content: bytes, *, name: str) -> Table:
    """Read a file of readings; raises Refused with sentences for the reader."""
    name = file_name(name)
    refuse_size(len(content), name=name)
    text, encoding = decode(content, name=name)
    layout = cut(text, name=name)
    first = _first_data_row(layout.rows)
    data = layout.rows[first:]
    headings, units, before = _headings(layout, first=first)
    width = _width(data, headings)
    _refuse_mixed_up_commas(data, headings=headings, separator=layout.separator)
    _refuse_wide_rows(data, width=width)
    decimal_mark = _decimal_mark(data)
    return Table(
        name=name,
        size=len(content),
        sha256=hashlib.sha256(content).hexdigest(),
        encoding=encoding,
        separator=SEPARATORS[layout.separator],
        decimal_mark=decimal_mark,
        columns=tuple(_column(place, headings, units) for place in range(1, width + 1)),
        rows=tuple(Row(row.number, _padded(row.cells, width)) for row in data),
        notes=(
            f"Read as {encoding}, {SEPARATORS[layout.separator]} between columns, {MARKS[decimal_mark]}.",
            *_notes(layout, first=first, before=before),
        ),
    )


def file_name(name: str) -> str:
    """The last part of a file's name, fit to be shown."""
    last = re.split(r"[\\/]", name)[-1].strip()
    return shown("".join(mark for mark in last if mark.isprintable()) or "without a name")


def _first_data_row(rows: tuple[Row, ...]) -> int:
    """Where the table begins: two rows of numbers of one width, then upwards over rows that hold a number."""
    numeric = [index for index, row in enumerate(rows) if _is_data(row)]
    if not numeric:
        first_row = shown(" | ".join(rows[0].cells))
        expected = "A column of volume and one of readings are expected."
        raise Refused([f"No row of numbers was found; the first row is {first_row}. {expected}"])
    widths = Counter(len(rows[index].cells) for index in numeric)
    usual = widths.most_common(1)[0][0]
    first = next(index for index in numeric if len(rows[index].cells) == usual)
    while first and len(rows[first - 1].cells) == usual and any(map(looks_numeric, rows[first - 1].cells)):
        first -= 1
    return first


def _is_data(row: Row) -> bool:
    return sum(map(looks_numeric, row.cells)) >= min(2, len(row.cells))


def _headings(layout: Layout, *, first: int) -> tuple[tuple[str, ...], tuple[str, ...], int]:
    """Headings, units line, and the place where they begin among the rows."""
    above = list(layout.rows[:first])
    usual = len(layout.rows[first].cells)
    units: tuple[str, ...] = ()
    if above and _is_units(above[-1], usual=usual):
        units = above.pop().cells
    if above and len(above[-1].cells) >= min(2, usual):
        return above[-1].cells, units, len(above) - 1
    if units and not above:
        return units, (), 0
    start = layout.rows[first].number
    comments = [row for row in layout.comments if row.number < start and len(row.cells) == usual]
    return (comments[-1].cells if comments else ()), units, len(above)


def _is_units(row: Row, *, usual: int) -> bool:
    filled = [cell for cell in row.cells if cell]
    return len(row.cells) <= usual and bool(filled) and all(unit_of(cell) is not None for cell in filled)


def _width(data: tuple[Row, ...], headings: tuple[str, ...]) -> int:
    usual = Counter(len(_trimmed(row.cells)) for row in data).most_common(1)[0][0]
    return max(usual, len(_trimmed(headings)), 1)


def _refuse_mixed_up_commas(data: tuple[Row, ...], *, headings: tuple[str, ...], separator: str) -> None:
    """A comma between columns and in the numbers at once cannot be told apart."""
    cells = [cell for row in data for cell in row.cells]
    if separator != "," or any("." in cell or "," in cell for cell in cells):
        return
    digits = any(re.fullmatch(r"0[0-9]+", cell) for row in data for cell in row.cells[1:])
    names, width = len(_trimmed(headings)), len(data[0].cells)
    if digits or (names >= 2 and width == 2 * names):
        said = f"Row {data[0].number} is {shown(','.join(data[0].cells))}"
        doubt = "the comma seems to stand both between the columns and in the numbers"
        advice = "Export with semicolons between the columns, or with decimal points."
        raise Refused([f"{said}: {doubt}. {advice}"])


def _refuse_wide_rows(data: tuple[Row, ...], *, width: int) -> None:
    for row in data:
        if any(row.cells[width:]):
            said = f"Row {row.number} has {len(_trimmed(row.cells))} cells, {shown(' | '.join(row.cells))}"
            advice = "Check for a decimal comma in a table separated by commas."
            raise Refused([f"{said}; {width} are expected. {advice}"])


def _decimal_mark(data: tuple[Row, ...]) -> str:
    found = [number_in(cell) for row in data for cell in row.cells]
    marks = {number.mark for number in found if number is not None} - {""}
    names = {".": "point", ",": "comma"}
    return "mixed" if len(marks) == 2 else names[marks.pop()] if marks else "none"


def _column(place: int, headings: tuple[str, ...], units: tuple[str, ...]) -> Column:
    name, unit = split_heading(headings[place - 1][:LONGEST_HEADING]) if place <= len(headings) else ("", "")
    below = unit_of(units[place - 1]) if place <= len(units) else None
    return Column(place=place, name=name, unit=below or unit)


def _trimmed(cells: tuple[str, ...]) -> tuple[str, ...]:
    last = max((index for index, cell in enumerate(cells, start=1) if cell), default=0)
    return cells[:last]


def _padded(cells: tuple[str, ...], width: int) -> tuple[str, ...]:
    return (*cells, *[""] * (width - len(cells)))[:width]


def _notes(layout: Layout, *, first: int, before: int) -> list[str]:
    notes = []
    if layout.comments:
        lines = ", ".join(str(row.number) for row in layout.comments[:5])
        notes.append(f"Comment lines left out: {len(layout.comments)}, in row {lines}.")
    if before:
        last = layout.rows[before - 1].number
        notes.append(f"What comes before the table was left out, row {layout.rows[0].number} to {last}.")
    empty = layout.rows[-1].number - layout.rows[first].number - (len(layout.rows) - first - 1)
    between = sum(layout.rows[first].number < row.number < layout.rows[-1].number for row in layout.comments)
    if empty - between > 0:
        notes.append(f"Empty rows between the others left out: {empty - between}.")
    return notes
