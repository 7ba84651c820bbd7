"""Numbers as people type them: the digits are kept, anything doubtful is asked about."""

from __future__ import annotations

import re
from decimal import Decimal

MOST_WHOLE_DIGITS = 15
MOST_PLACES = 15
NUMBER = re.compile(r"([+-]?)([0-9]*)(?:[.,]([0-9]*))?")
EXPONENT = re.compile(r"[+-]?[0-9.,]+[eE][+-]?[0-9]+")
WITH_UNIT = re.compile(r"([+-]?[0-9][0-9.,]*)\s*([^\W\d_]|[%°µ‰])[\s\S]*")
WORDS = {"nan", "inf", "infinity", "none", "null"}
# Minus, dashes and spaces that a phone or a spreadsheet puts in place of the plain ones.
SIGNS = str.maketrans({"\u2212": "-", "\u2013": "-", "\u2010": "-", "\u2011": "-"})


def parse_number(text: str, *, field: str = "The value") -> Decimal:
    """A typed number with its typed places; a decimal comma is understood.

    Raises ValueError with a sentence that names the field, what was typed and what is expected.
    """
    typed = text.strip().translate(SIGNS)
    found = NUMBER.fullmatch(typed)
    if found is None or not re.search("[0-9]", typed):
        raise ValueError(_why_not_a_number(typed, field=field))
    sign, whole, places = found.groups()
    if places == "":
        raise ValueError(f"{field} is {shown(text)}: it ends in a decimal mark. Write {whole} or {whole}.0.")
    if len(whole.lstrip("0")) > MOST_WHOLE_DIGITS or len(whole) > 40 or len(places or "") > MOST_PLACES:
        raise ValueError(
            f"{field} is {shown(text)}: at most {MOST_WHOLE_DIGITS} digits before "
            f"and {MOST_PLACES} after the decimal mark are expected."
        )
    value = Decimal(f"{sign}{whole or '0'}" + (f".{places}" if places else ""))
    return value if value else value.copy_abs()


def shown(text: str) -> str:
    """What was typed, in quotation marks and cut to a length that fits a sentence."""
    line = " ".join(text.split())
    line = "".join(mark if mark.isprintable() else "\N{REPLACEMENT CHARACTER}" for mark in line)
    return f"“{line}”" if len(line) <= 40 else f"“{line[:39]}…”"


def plain(value: Decimal) -> str:
    """A decimal in plain digits, with the places it was read with."""
    return format(value, "f")


def shortest(value: Decimal) -> str:
    """A decimal in plain digits without needless zeros: a capacity of 50.0000 is 50."""
    return format(value.normalize(), "f")


def places_of(value: Decimal) -> int:
    """How many decimals a value was written with; 0.05 has two."""
    exponent = value.as_tuple().exponent
    return max(0, -exponent) if isinstance(exponent, int) else 0


def _why_not_a_number(typed: str, *, field: str) -> str:
    start = f"{field} is {shown(typed)}"
    if not typed:
        return f"{field} is empty; a number such as 12.30 is expected."
    if typed.lstrip("+-").lower() in WORDS:
        return f"{start}, which is no number. Write the digits that were read, or leave it empty."
    if EXPONENT.fullmatch(typed):
        return f"{start}, written with an exponent. Write it in full, such as 0.00123."
    if typed[0] in "=@":
        return f"{start}, which begins like a formula. Write the number itself, such as 12.30."
    if typed.count(".") + typed.count(",") > 1 and re.fullmatch(r"[+-]?[0-9.,\s]+", typed):
        return f"{start}: it has more than one decimal mark. Write one number with one mark, such as 1234.50."
    unit = WITH_UNIT.fullmatch(typed)
    if unit is not None:
        return f"{start}. Write the number without its unit: {unit[1]}. The unit is in the heading."
    if re.fullmatch(r"[+-]?[0-9.,]+(\s+[0-9.,]+)+", typed):
        return f"{start}: it has a space inside. Write one number without spaces, such as 1234.50."
    return f"{start}, which is not a number. A number such as 12.30 is expected."
