"""Reading the canonical inputs of a determination: text to numbers, each refusal naming input and value."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from itertools import pairwise
from typing import Any

Inputs = Mapping[str, Any]


@dataclass(frozen=True, slots=True)
class Titration:
    """One titration as read: amount in the sample's unit, titre in mL (None when it is not complete yet).

    ``ends`` are all its endpoints in order, volume and u [mL]; ``expansion`` is that of its solution less that of the
    glass [1/K]; ``minutes`` it took, where drift is taken off; ``lacks`` names what a correction needs.
    """

    number: int
    is_blank: bool
    is_excluded: bool
    amount: float | None
    titre: float | None
    titre_u: float
    temperature: float | None
    endpoint: Mapping[str, Any] | None
    ends: tuple[tuple[float, float], ...] = ()
    expansion: float = 0.0
    minutes: float = 0.0
    lacks: tuple[str, ...] = ()

    @property
    def is_complete(self) -> bool:
        """Whether it has all that a result needs."""
        has_amount = self.is_blank or self.amount is not None
        return self.titre is not None and has_amount and not self.lacks


def number(value: Any, *, name: str) -> float:
    """A finite number from its text; ValueError naming the input."""
    try:
        found = float(value)
    except (TypeError, ValueError) as problem:
        raise ValueError(f"{name} is {value!r}; a number is expected.") from problem
    if not math.isfinite(found):
        raise ValueError(f"{name} is {value}; a finite number is expected.")
    return found


def positive(value: Any, *, name: str) -> float:
    """A number above zero."""
    found = number(value, name=name)
    if found <= 0:
        raise ValueError(f"{name} is {value}; a number above 0 is expected.")
    return found


def optional(value: Any, *, name: str) -> float | None:
    """A number, or None where nothing was read."""
    return None if value in (None, "") else number(value, name=name)


def choice(value: Any, known: Sequence[str], *, name: str) -> str:
    """One of the known words."""
    if value not in known:
        raise ValueError(f"{name} is {value!r}; expected one of {', '.join(known)}.")
    return str(value)


def correction_at(reading: float, table: Sequence[Sequence[Any]]) -> float:
    """Correction of a burette [mL] at a reading, linear between the points of its table, flat outside them."""
    points = sorted((number(at, name="Table reading"), number(add, name="Correction")) for at, add in table)
    if not points:
        return 0.0
    if reading <= points[0][0]:
        return points[0][1]
    for (low, below), (high, above) in pairwise(points):
        if reading <= high:
            return below + (above - below) * (reading - low) / (high - low)
    return points[-1][1]


def burette_titre(line: Inputs, burette: Inputs, *, to: str = "end") -> float | None:
    """Titre [mL] from two readings as typed, each corrected by the burette's table; None while one is missing.

    ``to`` is "end", or "first_end" for the first of two endpoints.
    """
    where = f"titration {line['number']}"
    start = optional(line["start"], name=f"Start of {where}")
    end = optional(line.get(to), name=f"End of {where}" if to == "end" else f"First endpoint of {where}")
    if start is None or end is None:
        return None
    if start < 0 or end < start:
        raise ValueError(
            f"Readings of {where} are {line['start']} and {line[to]} mL; the end must not be below the start."
        )
    table = burette.get("table") or []
    return round(end - start, 9) + correction_at(end, table) - correction_at(start, table)
