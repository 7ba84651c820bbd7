"""One cell of a recorded table: a number as written, or the sentence why not."""

from __future__ import annotations

import re
from dataclasses import dataclass

from labrecords.rules.number import SIGNS, shown

MARKED = re.compile(r"[+-]?[0-9]*([.,])[0-9]+")
NUMBER = re.compile(r"[+-]?(?=[.,]?[0-9])[0-9]{0,15}(?:[.,][0-9]{0,15})?(?:[eE][+-]?[0-9]{1,2})?")
THOUSANDS = re.compile(r"[+-]?[1-9][0-9]{0,2}([.,])[0-9]{3}")
GROUPED = re.compile(r"[+-]?[0-9]{1,3}(?:[ '’\u00a0\u2009\u202f][0-9]{3})+(?:[.,][0-9]+)?")
NO_NUMBER = re.compile(r"[+-]?(?:nan|inf|infinity|1\.#\w+|#\w+[!?/]?\w*[!?]?)", re.IGNORECASE)
UNIT_BEHIND = re.compile(r"([+-]?[0-9]+(?:[.,][0-9]+)?)\s*([^\W\d_]|[%°µ])[^;]*")


@dataclass(frozen=True, slots=True)
class Number:
    """A number in its written digits, with the mark that was used ("" for none)."""

    text: str
    mark: str


def number_in(cell: str) -> Number | None:
    """The number a cell holds, decimal mark made a point and every digit kept; None when it holds none."""
    typed = cell.strip().translate(SIGNS)
    if not NUMBER.fullmatch(typed):
        return None
    found = MARKED.match(typed)
    return Number(text=typed.replace(",", "."), mark=found[1] if found else "")


def looks_numeric(cell: str) -> bool:
    """A number, or what stands for a missing or spoilt one: a row of them belongs to the table."""
    return number_in(cell) is not None or bool(NO_NUMBER.fullmatch(cell) or GROUPED.fullmatch(cell))


def why_no_number(cell: str) -> str:
    """The end of a sentence that begins with the name of the cell."""
    typed = cell.strip().translate(SIGNS)
    if not typed:
        return "is empty; a number is expected"
    said = f"is {shown(cell)}"
    if NO_NUMBER.fullmatch(typed):
        return f"{said}, which is no number; a number is expected"
    if typed[0] in "=@" or re.match(r"[+-][^0-9.,]", typed):
        return f"{said}, which looks like a formula; its value is expected"
    if GROUPED.fullmatch(typed):
        return f"{said}, which is written with thousands separators; a number without them is expected"
    if re.fullmatch(r"[+-]?[0-9.,]+", typed) and typed.count(".") + typed.count(",") > 1:
        return f"{said}, which has more than one decimal mark; a number with one, such as 1234.5, is expected"
    if UNIT_BEHIND.fullmatch(typed):
        return f"{said}; a number without its unit is expected, the unit in the heading"
    if re.fullmatch(r"[+-]?[0-9.,]+(?:[eE][+-]?[0-9]+)?", typed):
        return f"{said}, which is far too long or too large; a reading is expected"
    return f"{said}, which is text; a number is expected"
