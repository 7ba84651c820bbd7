"""Tables as text that a spreadsheet opens without running anything."""

from __future__ import annotations

import csv
import io
import re
from collections.abc import Iterable, Iterator, Sequence

PLAIN_NUMBER = re.compile(r"-\d+([.,]\d+)?")
FORMULA_STARTS = ("=", "+", "-", "@", "＝", "＋", "－", "＠")  # the wide forms start one in some languages
SPACES_CUT = ("\t", "\r", "\n")  # cut by some spreadsheets before they look


def safe_cell(value: object) -> str:
    """A cell that no spreadsheet takes for a formula; a plain negative number such as -0.12 stays as it is."""
    text = "" if value is None else str(value)
    starts_one = text.startswith(SPACES_CUT) or text.lstrip().startswith(FORMULA_STARTS)
    if starts_one and not PLAIN_NUMBER.fullmatch(text):
        return f"'{text}"
    return text


def csv_lines(header: Sequence[str], rows: Iterable[Sequence[object]]) -> Iterator[str]:
    """The lines of a CSV file, one after the other."""
    for row in _chained(header, rows):
        out = io.StringIO()
        csv.writer(out, lineterminator="\r\n").writerow([safe_cell(cell) for cell in row])
        yield out.getvalue()


def _chained(header: Sequence[str], rows: Iterable[Sequence[object]]) -> Iterator[Sequence[object]]:
    yield header
    yield from rows
