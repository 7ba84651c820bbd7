"""From a chemical formula to a molar mass and its standard uncertainty."""

from __future__ import annotations

import re
from collections.abc import Mapping
from dataclasses import dataclass

from analysis.atomic_weights import EDITION, WEIGHTS

TOKEN = re.compile(r"([A-Z][a-z]?)|(\d+)|([(\[])|([)\]])")
HYDRATE = re.compile(r"[·*.•]")
LONGEST = 120


@dataclass(frozen=True, slots=True)
class MolarMass:
    """A molar mass and what it came from.

    Attributes
    ----------
    formula : str
        The formula as given.
    composition : tuple of (str, int)
        Elements and their counts, in the order of their symbols.
    value : float
        Molar mass [g/mol].
    standard_uncertainty : float
        Standard uncertainty [g/mol].
    edition : str
        The table of atomic weights.
    """

    formula: str
    composition: tuple[tuple[str, int], ...]
    value: float
    standard_uncertainty: float
    edition: str


def molar_mass(formula: str, *, weights: Mapping[str, tuple[float, float]] = WEIGHTS) -> MolarMass:
    """Molar mass of a substance from its formula.

    The half-width of each atomic weight is taken as rectangular; the atoms of one element share one weight, so
    their contributions add before they are squared, and elements are combined in quadrature.

    Parameters
    ----------
    formula : str
        Such as ``C8H5KO4``, ``Ca(OH)2`` or ``Na2S2O3·5H2O``; a point, an asterisk or a middle dot begins a hydrate.
    weights : mapping
        Element to (value, half-width) [g/mol].

    Returns
    -------
    MolarMass

    Raises
    ------
    ValueError
        When the formula is empty, too long, unbalanced, or names an element that is not in the table.

    References
    ----------
    Ellison, Williams (eds.), Eurachem/CITAC Guide QUAM:2012.P1, example A2, step 3 (molar mass of KHP).
    """
    composition = parse_formula(formula, known=weights)
    value = sum(weights[element][0] * count for element, count in composition)
    variance = sum((weights[element][1] * count) ** 2 / 3 for element, count in composition)
    return MolarMass(
        formula=formula,
        composition=composition,
        value=value,
        standard_uncertainty=variance**0.5,
        edition=EDITION,
    )


def parse_formula(formula: str, *, known: Mapping[str, object] = WEIGHTS) -> tuple[tuple[str, int], ...]:
    """Elements and their counts; ValueError names the place that cannot be read."""
    text = "".join(formula.split())
    if not text or len(text) > LONGEST:
        raise ValueError(f"Formula is {formula!r}: 1 to {LONGEST} characters are expected, such as C8H5KO4.")
    totals: dict[str, int] = {}
    for part in HYDRATE.split(text):
        factor, rest = _leading_number(part, formula)
        for element, count in _group(rest, formula, known=known).items():
            totals[element] = totals.get(element, 0) + factor * count
    return tuple(sorted(totals.items()))


def _leading_number(part: str, formula: str) -> tuple[int, str]:
    match = re.match(r"\d+", part)
    digits = match.group() if match else ""
    if not part[len(digits) :]:
        raise ValueError(f"Formula is {formula!r}: a part without an element; write hydrates as Na2S2O3·5H2O.")
    return int(digits or 1), part[len(digits) :]


def _group(text: str, formula: str, *, known: Mapping[str, object]) -> dict[str, int]:
    stack: list[dict[str, int]] = [{}]
    last: dict[str, int] = {}
    position = 0
    while position < len(text):
        token = TOKEN.match(text, position)
        if token is None:
            raise ValueError(f"Formula is {formula!r}: {text[position]!r} at place {position + 1} is not expected.")
        element, number, opened, _ = token.groups()
        if element and element not in known:
            raise ValueError(f"Formula is {formula!r}: {element} is not an element with a standard atomic weight.")
        if number:
            _times(stack[-1], last, int(number), formula)
            last = {}
        elif opened:
            stack.append({})
            last = {}
        else:
            last = {element: 1} if element else _closed(stack, formula)
            _add(stack[-1], last)
        position = token.end()
    if len(stack) != 1:
        raise ValueError(f"Formula is {formula!r}: a bracket is opened and not closed.")
    return stack[0]


def _closed(stack: list[dict[str, int]], formula: str) -> dict[str, int]:
    if len(stack) == 1 or not stack[-1]:
        raise ValueError(f"Formula is {formula!r}: a bracket is closed that was not opened, or is empty.")
    return stack.pop()


def _add(total: dict[str, int], part: Mapping[str, int]) -> None:
    for element, count in part.items():
        total[element] = total.get(element, 0) + count


def _times(total: dict[str, int], last: Mapping[str, int], number: int, formula: str) -> None:
    if not last or number == 0 or number > 9999:
        raise ValueError(f"Formula is {formula!r}: the number {number} does not follow an element or a bracket.")
    _add(total, {element: count * (number - 1) for element, count in last.items()})
