"""From the text of a file to rows of cells: comments, separator, quotation marks."""

from __future__ import annotations

import csv
import re
from collections.abc import Iterator
from dataclasses import dataclass

from labrecords.errors import Refused
from labrecords.rules.number import shown

MOST_ROWS = 20_000
MOST_LINES = 2 * MOST_ROWS
MOST_COLUMNS = 30
SAMPLE_LINES = 200
SEPARATORS = {"\t": "tab", ";": "semicolon", ",": "comma"}
COMMENT = re.compile(r"\s*(#|//|%|!)(?!\s*[\t;,])")
DIGIT_FIRST = re.compile(r'[\s"]*[+-]?[.,]?[0-9]')
SEPARATOR_LINE = re.compile(r'"?sep=(.)"?\s*', re.IGNORECASE)


@dataclass(frozen=True, slots=True)
class Row:
    """The cells of one row, spaces trimmed, with the number of its first line in the file."""

    number: int
    cells: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class Layout:
    """A file cut into rows without the empty ones; comments are kept apart, for headings among them."""

    separator: str
    rows: tuple[Row, ...]
    comments: tuple[Row, ...]


def cut(text: str, *, name: str) -> Layout:
    """Cut a text into rows of cells."""
    if max(text.count("\n"), text.count("\r")) > MOST_LINES:
        count = f"more than {MOST_LINES:,} lines, the most that is read"
        raise Refused([f"File {name} has {count}. Export fewer points of the curve."])
    lines = re.split(r"(?<=\n)|(?<=\r)(?!\n)", text)
    separator = _separator_of(lines, name=name)
    told = 1 if SEPARATOR_LINE.fullmatch(lines[0]) else 0
    comments = tuple(
        Row(number, _cells(line[COMMENT.match(line).end() :], separator))  # type: ignore[union-attr]
        for number, line in enumerate(lines, start=1)
        if COMMENT.match(line)
    )
    content = ["\n" if index < told or COMMENT.match(line) else line for index, line in enumerate(lines)]
    filled = tuple(row for row in _rows(content, separator=separator, name=name) if any(row.cells))
    if not filled:
        raise Refused([f"File {name} has no rows; a column of volume and one of readings are expected."])
    return Layout(separator=separator, rows=filled, comments=comments)


def _separator_of(lines: list[str], *, name: str) -> str:
    """The first of tab, semicolon and comma that cuts most lines; a comma may be a decimal mark, so last."""
    told = SEPARATOR_LINE.fullmatch(lines[0])
    if told is not None and told[1] in SEPARATORS:
        return told[1]
    filled = [line for line in lines if line.strip() and not COMMENT.match(line)]
    sample = [line for line in filled if DIGIT_FIRST.match(line)][:SAMPLE_LINES] or filled[:SAMPLE_LINES]
    shares = {mark: sum(len(_cells(line, mark)) > 1 for line in sample) for mark in SEPARATORS}
    for mark, share in shares.items():
        if share * 2 >= len(sample) and share:
            return mark
    best = max(shares, key=lambda mark: shares[mark])
    if filled and not shares[best]:
        expected = "two or more columns separated by comma, semicolon or tab are expected"
        raise Refused([f"File {name} has one column, such as {shown(sample[0])}; {expected}."])
    return best


def _cells(line: str, separator: str) -> tuple[str, ...]:
    try:
        cells = next(csv.reader([line], delimiter=separator, skipinitialspace=True), [])
    except csv.Error:
        return ()
    return tuple(cell.strip() for cell in cells)


def _rows(lines: list[str], *, separator: str, name: str) -> Iterator[Row]:
    reader = csv.reader(lines, delimiter=separator, skipinitialspace=True, strict=True)
    number, filled = 1, 0
    try:
        for cells in reader:
            row = Row(number, tuple(cell.strip() for cell in cells))
            number, filled = reader.line_num + 1, filled + any(row.cells)
            if len(cells) > MOST_COLUMNS and any(row.cells[MOST_COLUMNS:]):
                count = f"{len(cells)} columns; at most {MOST_COLUMNS} are expected"
                raise Refused([f"Row {row.number} of {name} has {count}."])
            if filled > MOST_ROWS:
                count = f"more than {MOST_ROWS:,} rows, the most that is read"
                raise Refused([f"File {name} has {count}. Export fewer points of the curve."])
            yield row
    except csv.Error as error:
        what = "a quotation mark that is not closed, or a cell that is far too long"
        raise Refused([f"Row {number} of {name} has {what}. Export it again."]) from error
