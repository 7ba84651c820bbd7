"""How numbers, units and moments are written, the same on pages, in figures and on paper."""

from __future__ import annotations

import math
from datetime import date, datetime
from decimal import ROUND_HALF_UP, Decimal

MINUS = "\N{MINUS SIGN}"
PLUS_MINUS = "\N{PLUS-MINUS SIGN}"
FIGURE_SPACE = "\N{FIGURE SPACE}"
PUNCTUATION_SPACE = "\N{PUNCTUATION SPACE}"
NO_BREAK = "\N{NO-BREAK SPACE}"
MONTHS = ("Jan", "Feb", "Mar", "Apr", "May", "Jun", "Jul", "Aug", "Sep", "Oct", "Nov", "Dec")

Number = Decimal | float | int | str


def as_decimal(value: Number) -> Decimal:
    """The shortest decimal that is this number; a float is taken as it is printed."""
    return value if isinstance(value, Decimal) else Decimal(str(value))


def places(value: Number, *, digits: int) -> str:
    """``value`` with so many decimals, a half rounded up, for display only."""
    number = as_decimal(value)
    if not number.is_finite():
        return "not a number"
    rounded = number.quantize(Decimal(1).scaleb(-digits), rounding=ROUND_HALF_UP)
    return _signed(f"{abs(rounded):f}", negative=rounded < 0)


def reading(value: Number) -> str:
    """A reading with the digits that were typed."""
    number = as_decimal(value)
    return _signed(f"{abs(number):f}", negative=number < 0)


def short(value: Number) -> str:
    """A stored number without the zeros that only its column adds: 0.2500 is written 0.25, 50.0000 is 50."""
    return reading(as_decimal(value).normalize())


def limit(value: Number, *, digits: int) -> str:
    """A limit with the decimals it is compared at, or with more where it has more."""
    return max(short(value), places(value, digits=digits), key=len)


def pointed(value: Number, *, digits: int) -> str:
    """A number padded with spaces as wide as figures, so that a right-aligned column meets at the point."""
    text = reading(value)
    after = len(text.partition(".")[2])
    point = "" if "." in text or digits == 0 else PUNCTUATION_SPACE
    return text + point + FIGURE_SPACE * max(0, digits - after)


def digits_allowed(uncertainty: Number) -> int:
    """Decimals at which an uncertainty shows two significant figures."""
    size = abs(as_decimal(uncertainty))
    if size == 0 or not size.is_finite():
        return 0
    digits = 1 - size.adjusted()
    rounded = size.quantize(Decimal(1).scaleb(-digits), rounding=ROUND_HALF_UP)
    return max(0, 1 - rounded.adjusted())


def result(value: Number, *, expanded: Number | None, unit: str = "") -> str:
    """``6.113 ± 0.034 g/100 mL``: a value with the digits that its expanded uncertainty allows."""
    tail = f"{NO_BREAK}{unit}" if unit else ""
    if expanded is None:
        return f"{reading(value)}{tail}"
    digits = digits_allowed(expanded)
    return f"{value_part(value, expanded=expanded)} {PLUS_MINUS} {places(expanded, digits=digits)}{tail}"


def value_part(value: Number, *, expanded: Number) -> str:
    """The value alone, with the digits that its expanded uncertainty allows."""
    return places(value, digits=digits_allowed(expanded))


def significant(value: Number, *, figures: int = 2) -> str:
    """``value`` with so many significant figures and no exponent."""
    number = as_decimal(value)
    if number == 0:
        return "0"
    return places(number, digits=max(0, figures - 1 - number.adjusted()))


def percent(share: Number, *, digits: int = 0) -> str:
    """A share of one in per cent."""
    return f"{places(as_decimal(share) * 100, digits=digits)}{NO_BREAK}%"


def probability(value: Number) -> str:
    """A probability in per cent with one decimal, which never claims certainty."""
    number = as_decimal(value)
    if number >= Decimal("0.9995"):
        return f"over 99.9{NO_BREAK}%"
    if number < Decimal("0.0005"):
        return f"under 0.1{NO_BREAK}%"
    return percent(number, digits=1)


def day(value: date) -> str:
    """24 Nov 2026"""
    return f"{value.day}{NO_BREAK}{MONTHS[value.month - 1]}{NO_BREAK}{value.year}"


def when(value: datetime) -> str:
    """24 Nov 2026 09:42 GMT: an aware moment with the name of its zone."""
    zone = value.tzname() or "no zone"
    return f"{day(value)} {value:%H:%M}{NO_BREAK}{zone}"


def steps(low: float, high: float, *, about: int) -> list[float]:
    """Round numbers from ``low`` to ``high``, about so many, for the ticks of a scale."""
    span = high - low
    if not (math.isfinite(span) and span > 0):
        return [low]
    raw = span / about
    power = 10.0 ** math.floor(math.log10(raw))
    step = next(power * m for m in (1, 2, 5, 10) if power * m >= raw * 0.999)
    first = math.ceil(low / step - 1e-9)
    last = math.floor(high / step + 1e-9)
    return [round(index * step, 12) for index in range(first, last + 1)]


def _signed(text: str, *, negative: bool) -> str:
    return f"{MINUS}{text}" if negative else text
