"""Whether a reading is plausible: objections refuse it, remarks only ask for a second look."""

from __future__ import annotations

from datetime import date
from decimal import Decimal
from itertools import pairwise

from labrecords.rules.number import places_of, plain, shortest

# A slip of the unit is a factor of a thousand; a sample twenty times off the usual one is no choice any more.
WRONG_UNIT = Decimal(20)
COMMON_SLIPS = {
    "g": (("mg", Decimal(1000)), ("kg", Decimal("0.001"))),
    "mL": (("µL", Decimal(1000)), ("L", Decimal("0.001"))),
    "mol/L": (("mmol/L", Decimal(1000)),),
}
TEMPERATURE = (Decimal(5), Decimal(40))
ROOM = (Decimal(15), Decimal(30))
PH = (Decimal(0), Decimal(14))
MILLIVOLTS = (Decimal(-2000), Decimal(2000))
SLOPE_PERCENT = (Decimal(50), Decimal(120))
PURITY = (Decimal("0.5"), Decimal("1.01"))
# Longer than any bottle, certificate or instrument of a working laboratory lasts.
YEARS_BACK = 50
YEARS_AHEAD = 30


def objections_to_burette_reading(
    start: Decimal | None,
    end: Decimal | None,
    *,
    capacity: Decimal,
    resolution: Decimal,
    burette: str,
    first: Decimal | None = None,
) -> list[str]:
    """Each reading lies on the burette with places that can be read, and none is below the one before it."""
    found = []
    for field, value in (("Start", start), ("First endpoint", first), ("End", end)):
        if value is not None:
            found += _objections_to_burette_mark(
                value, field=field, capacity=capacity, resolution=resolution, burette=burette
            )
    return found or _objections_to_falling([("start", start), ("first endpoint", first), ("end", end)])


def _objections_to_falling(readings: list[tuple[str, Decimal | None]]) -> list[str]:
    there = [(name, value) for name, value in readings if value is not None]
    return [
        f"{name.capitalize()} is {plain(value)} mL, below the {before} at {plain(lower)} mL; a burette's reading only "
        "rises. Check whether the two were swapped."
        for (before, lower), (name, value) in pairwise(there)
        if value < lower
    ]


def _objections_to_burette_mark(
    value: Decimal, *, field: str, capacity: Decimal, resolution: Decimal, burette: str
) -> list[str]:
    if not value.is_finite():
        return [_no_number(field, value, expected="a burette reading such as 12.30 mL")]
    if value < 0:
        return [f"{field} is {plain(value)} mL; a burette reading is 0 mL or more."]
    if value > capacity:
        end = f"{field} is {plain(value)} mL; burette {burette} ends at {shortest(capacity)} mL."
        return [f"{end} Read it again; if it was refilled, repeat the titration with a smaller sample."]
    readable = places_of(Decimal(shortest(resolution)))
    if places_of(value) > readable:
        read_to = f"read to {shortest(resolution)} mL, which is {_places(readable)}"
        return [f"{field} is {plain(value)} mL; burette {burette} is {read_to}. Write what was read."]
    return []


def remarks_on_burette_reading(value: Decimal | None, *, field: str, resolution: Decimal) -> list[str]:
    """Fewer places than the burette gives: the reading may have been cut short."""
    readable = places_of(Decimal(shortest(resolution)))
    if value is None or not value.is_finite() or places_of(value) >= readable:
        return []
    return [f"{field} is {plain(value)} mL with {_places(places_of(value))}; the burette is read to {readable}."]


def objections_to_sample_amount(
    amount: Decimal | None,
    *,
    unit: str,
    expected: Decimal | None = None,
    capacity: Decimal | None = None,
    field: str = "Sample amount",
) -> list[str]:
    """Positive, within what its instrument takes, and not as far from the usual as a wrong unit is."""
    if amount is None:
        return []
    about = f"about {shortest(expected)} {unit}" if expected else f"an amount in {unit}"
    if not amount.is_finite():
        return [_no_number(field, amount, expected=about)]
    if amount <= 0:
        return [f"{field} is {plain(amount)} {unit}; {about} is expected, more than 0."]
    found = []
    if expected and not 1 / WRONG_UNIT <= amount / expected <= WRONG_UNIT:
        slip = _slip(amount, unit=unit, expected=expected)
        found.append(f"{field} is {plain(amount)} {unit}; {about} is expected. {slip}")
    elif capacity is not None and amount > capacity:
        found.append(f"{field} is {plain(amount)} {unit}; the instrument takes up to {shortest(capacity)} {unit}.")
    return found


def remarks_on_sample_amount(
    amount: Decimal | None, *, unit: str, expected: Decimal | None, field: str = "Sample amount"
) -> list[str]:
    """More than half away from the usual amount: possible, and worth a second look."""
    if amount is None or not expected or not amount.is_finite() or abs(amount - expected) <= expected / 2:
        return []
    return [f"{field} is {plain(amount)} {unit}, more than 50 % away from the usual {shortest(expected)} {unit}."]


def objections_to_temperature(value: Decimal | None, *, field: str = "Temperature") -> list[str]:
    """A solution in a burette is between 5 and 40 degrees Celsius; kelvin and Fahrenheit are recognized."""
    if value is None:
        return []
    low, high = TEMPERATURE
    found = _objections_to_range(value, field=field, unit="°C", low=low, high=high)
    if not found or not value.is_finite():
        return found
    for scale, celsius in (("kelvin", value - Decimal("273.15")), ("°F", (value - 32) / Decimal("1.8"))):
        if low <= celsius <= high:
            return [f"{found[0]} {plain(value)} {scale} would be {celsius:.1f} °C."]
    return found


def objections_to_drift(drift: Decimal | None, minutes: Decimal | None) -> list[str]:
    """A cell that is ready drifts by less than 100 µL/min, and a titration ends within hours (common practice)."""
    found = []
    if drift is not None:
        found += _objections_to_range(drift, field="Drift", unit="µL/min", low=Decimal(0), high=Decimal(100))
    if minutes is not None:
        found += _objections_to_range(minutes, field="Duration", unit="min", low=Decimal(0), high=Decimal(600))
    return found


def remarks_on_temperature(value: Decimal | None, *, field: str = "Temperature") -> list[str]:
    """Unusual for a room."""
    if value is None or not value.is_finite() or ROOM[0] <= value <= ROOM[1]:
        return []
    return [f"{field} is {plain(value)} °C; a laboratory is usually at {ROOM[0]} to {ROOM[1]} °C."]


def objections_to_ph(value: Decimal | None, *, field: str = "pH") -> list[str]:
    """A typed pH is 0 to 14; a meter left on millivolts is recognized."""
    if value is None:
        return []
    found = _objections_to_range(value, field=field, unit="", low=PH[0], high=PH[1])
    if found and value.is_finite() and abs(value) >= 20:
        return [f"{found[0]} It looks like millivolts."]
    return found


def objections_to_millivolts(value: Decimal | None, *, field: str = "Potential") -> list[str]:
    """No electrode in water gives more than two volts."""
    if value is None:
        return []
    return _objections_to_range(value, field=field, unit="mV", low=MILLIVOLTS[0], high=MILLIVOLTS[1])


def objections_to_slope(value: Decimal | None, *, field: str = "Electrode slope") -> list[str]:
    """The slope of an electrode in percent of the theoretical one."""
    if value is None:
        return []
    return _objections_to_range(value, field=field, unit="%", low=SLOPE_PERCENT[0], high=SLOPE_PERCENT[1])


def objections_to_purity(value: Decimal | None, *, field: str = "Purity") -> list[str]:
    """The purity of a standard as a mass fraction; a percentage is recognized."""
    if value is None:
        return []
    found = _objections_to_range(value, field=field, unit="", low=PURITY[0], high=PURITY[1])
    if found and value.is_finite() and PURITY[0] <= value / 100 <= PURITY[1]:
        return [f"{found[0]} {plain(value)} % is written {plain(value / 100)}."]
    return found


def objections_to_concentration(value: Decimal | None, *, nominal: Decimal, field: str = "Concentration") -> list[str]:
    """A concentration in mol/L within twenty times of the nominal one; mmol/L is recognized."""
    return objections_to_sample_amount(value, unit="mol/L", expected=nominal, field=field)


def objections_to_date(value: date | None, *, today: date, field: str, may_be_future: bool) -> list[str]:
    """Not in the future where that makes no sense, and in no far century."""
    if value is None:
        return []
    if value > today and not may_be_future:
        return [f"{field} is {day(value)}, after today, {day(today)}. A day up to today is expected."]
    if value.year < today.year - YEARS_BACK:
        return [f"{field} is {day(value)}, more than {YEARS_BACK} years ago. Check the year."]
    if value.year > today.year + YEARS_AHEAD:
        return [f"{field} is {day(value)}, more than {YEARS_AHEAD} years ahead. Check the year."]
    return []


def objections_to_order(earlier: date | None, later: date | None, *, earlier_field: str, later_field: str) -> list[str]:
    """The later of two days comes after the earlier one."""
    if earlier is None or later is None or later > earlier:
        return []
    return [f"{later_field} is {day(later)}; a day after {earlier_field.lower()}, {day(earlier)}, is expected."]


def day(value: date) -> str:
    """A day as it is written everywhere: 24 Nov 2026."""
    return f"{value.day} {value:%b} {value.year:04d}"


def _objections_to_range(value: Decimal, *, field: str, unit: str, low: Decimal, high: Decimal) -> list[str]:
    tail = f" {unit}" if unit else ""
    expected = f"{plain(low)} to {plain(high)}{tail}"
    if not value.is_finite():
        return [_no_number(field, value, expected=expected)]
    return [] if low <= value <= high else [f"{field} is {plain(value)}{tail}; {expected} is expected."]


def _slip(amount: Decimal, *, unit: str, expected: Decimal) -> str:
    for other, factor in COMMON_SLIPS.get(unit, ()):
        if 1 / WRONG_UNIT <= amount / factor / expected <= WRONG_UNIT:
            return f"{plain(amount)} {other} would be {plain(amount / factor)} {unit}: check the unit."
    return "Check the value and its unit."


def _places(count: int) -> str:
    return {0: "no decimals", 1: "one decimal", 2: "two decimals"}.get(count, f"{count} decimals")


def _no_number(field: str, value: Decimal, *, expected: str) -> str:
    return f"{field} is {value}, which is no number; {expected} is expected."
