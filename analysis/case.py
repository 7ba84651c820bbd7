"""Cases: a calculation, its inputs, what should come out, how near, and who says so.

A case is a JSON object with the keys

* ``id``: any text, once in a file;
* ``calculation``: a name of the catalogue;
* ``inputs``: an object with the inputs of that calculation;
* ``expected``: a number, text, truth value, list, or object of these; an object may leave out outputs;
* ``tolerance``: the largest absolute difference: one number, or the shape of ``expected``;
* ``source``: where the expected value comes from;
* ``provenance``: found (the printed source was seen), memory, mixed, common practice, or one's own word;
* ``note`` (may be left out): anything a reader should know.
"""

from __future__ import annotations

import math
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass
from typing import Any

from analysis.catalogue import calculate

NEEDED = ("id", "calculation", "inputs", "expected", "tolerance", "source", "provenance")


@dataclass(frozen=True, slots=True)
class Case:
    """One case as read; see the module for its keys."""

    id: str
    calculation: str
    inputs: Mapping[str, Any]
    expected: Any
    tolerance: Any
    source: str
    provenance: str
    note: str = ""


@dataclass(frozen=True, slots=True)
class CheckedCase:
    """A case with what was found, and a sentence for every miss (none when all is as expected)."""

    case: Case
    found: Any
    misses: tuple[str, ...]

    @property
    def is_met(self) -> bool:
        """Whether everything expected was found."""
        return not self.misses


def case_from(data: Any, *, place: int) -> Case:
    """A case from JSON data; ValueError that names what is missing or of the wrong kind."""
    where = f"Case {place}"
    if not isinstance(data, Mapping):
        raise ValueError(f"{where} is {type(data).__name__}; an object is expected.")
    missing = [key for key in NEEDED if key not in data]
    if missing:
        raise ValueError(f"{where} has no {missing[0]!r}; it is needed.")
    unknown = sorted(set(data) - {*NEEDED, "note"})
    if unknown:
        raise ValueError(f"{where} has a key {unknown[0]!r}; expected {', '.join([*NEEDED, 'note'])}.")
    for key in ("id", "calculation", "source", "provenance"):
        if not isinstance(data[key], str) or not data[key].strip():
            raise ValueError(f"{where} has {data[key]!r} as {key}; some text is expected.")
    if not isinstance(data["inputs"], Mapping):
        raise ValueError(f"{where} has inputs of type {type(data['inputs']).__name__}; an object is expected.")
    return Case(**data)


def cases_from(data: Any) -> tuple[Case, ...]:
    """All cases of a file's JSON data, a list; ValueError when it is not, or an id is used twice."""
    if not isinstance(data, Sequence) or isinstance(data, str):
        raise ValueError(f"The file holds a {type(data).__name__}; a list of cases is expected.")
    cases = tuple(case_from(each, place=place) for place, each in enumerate(data, start=1))
    seen: set[str] = set()
    for case in cases:
        if case.id in seen:
            raise ValueError(f"Case id {case.id!r} is used twice; each id may be used once.")
        seen.add(case.id)
    return cases


def check_case(case: Case) -> CheckedCase:
    """Run the calculation of a case and compare; a refusal is a miss with its sentence."""
    try:
        found = calculate(case.calculation, case.inputs)
    except ValueError as refusal:
        return CheckedCase(case, None, (f"refused: {refusal}",))
    try:
        return CheckedCase(case, found, tuple(_misses(case.expected, found, case.tolerance, where="")))
    except (ValueError, IndexError) as problem:
        return CheckedCase(case, found, (f"cannot be compared: {problem}",))


def asked_part(found: Any, expected: Any) -> Any:
    """What was found, less the outputs that the case does not ask about."""
    if isinstance(expected, Mapping) and isinstance(found, Mapping):
        return {key: asked_part(found.get(key), value) for key, value in expected.items()}
    return found


def _misses(expected: Any, found: Any, tolerance: Any, *, where: str) -> Iterator[str]:
    at = f"{where}: " if where else ""
    if isinstance(expected, Mapping):
        yield from _misses_in_object(expected, found, tolerance, where=where)
    elif isinstance(expected, list | tuple):
        if not isinstance(found, list | tuple) or len(found) != len(expected):
            yield f"{at}expected {len(expected)} values, found {found!r}"
            return
        for place, (one, other) in enumerate(zip(expected, found, strict=True)):
            part = tolerance[place] if isinstance(tolerance, list | tuple) else tolerance
            yield from _misses(one, other, part, where=f"{where}[{place + 1}]")
    elif _is_number(expected):
        if not _is_number(found) or not abs(found - expected) <= _number(tolerance, where=where):
            yield f"{at}expected {expected!r} within {tolerance!r}, found {found!r}"
    elif expected != found:
        yield f"{at}expected {expected!r}, found {found!r}"


def _misses_in_object(expected: Mapping[str, Any], found: Any, tolerance: Any, *, where: str) -> Iterator[str]:
    for key, value in expected.items():
        inside = f"{where}.{key}" if where else key
        if not isinstance(found, Mapping) or key not in found:
            yield f"{inside}: not among what was found"
            continue
        part = tolerance.get(key) if isinstance(tolerance, Mapping) else tolerance
        yield from _misses(value, found[key], part, where=inside)


def _is_number(value: Any) -> bool:
    return isinstance(value, int | float) and not isinstance(value, bool)


def _number(tolerance: Any, *, where: str) -> float:
    if not _is_number(tolerance) or not tolerance >= 0 or math.isinf(tolerance):
        raise ValueError(
            f"Tolerance{f' of {where}' if where else ''} is {tolerance!r}; a number not below 0 is expected."
        )
    return float(tolerance)
