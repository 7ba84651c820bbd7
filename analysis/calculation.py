"""Calculations that can be named from outside: inputs with their units, and the function behind."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from typing import Any

Inputs = Mapping[str, Any]


@dataclass(frozen=True, slots=True)
class Field:
    """One input: its name, its unit (empty for none), what it means, and whether it must be given."""

    name: str
    unit: str
    meaning: str
    is_needed: bool = True


@dataclass(frozen=True, slots=True)
class Calculation:
    """A calculation by name.

    Attributes
    ----------
    name : str
        The word a case uses.
    title : str
        What it does, in a line.
    fields : tuple of Field
    gives : str
        What comes out, with units: one value, or named values.
    run : callable
        Takes the inputs as plain data and returns plain data.
    """

    name: str
    title: str
    fields: tuple[Field, ...]
    gives: str
    run: Callable[[Inputs], Any]

    def __call__(self, inputs: Inputs) -> Any:
        """Run it; ValueError for an input that is missing or not known."""
        known = {field.name for field in self.fields}
        unknown = sorted(set(inputs) - known)
        if unknown:
            raise ValueError(f"{self.name}: input {unknown[0]!r} is not known; expected {', '.join(sorted(known))}.")
        missing = [field.name for field in self.fields if field.is_needed and inputs.get(field.name) is None]
        if missing:
            raise ValueError(f"{self.name}: input {missing[0]!r} is missing.")
        try:
            return self.run(inputs)
        except (TypeError, KeyError, AttributeError, IndexError, ArithmeticError) as problem:
            what = f"{type(problem).__name__} {problem}".strip()
            raise ValueError(f"{self.name}: an input is not of the kind expected ({what}).") from problem


def optional(name: str, unit: str, meaning: str) -> Field:
    """An input that may be left out."""
    return Field(name, unit, meaning, is_needed=False)


def table_of(*calculations: Calculation) -> dict[str, Calculation]:
    """Calculations by name; ValueError when two have the same."""
    found = {each.name: each for each in calculations}
    if len(found) != len(calculations):
        raise ValueError("Two calculations have the same name; each needs its own.")
    return found
