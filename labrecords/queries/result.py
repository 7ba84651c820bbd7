"""Results of several records used together: what they share, their mean, how far they differ."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from analysis.together import Result, Together, result_of, use_together
from labrecords.errors import Refused
from labrecords.models import Calculation, RecordState, Run, Standardization
from labrecords.queries.calculation import latest_calculation

Record = Run | Standardization
MOST = 12
AGREES, DOUBTFUL = 2.0, 3.0  # zeta, ISO 13528


@dataclass(frozen=True, slots=True)
class Compared:
    """Records with their results and what these say together; ``shared`` names the common inputs in words."""

    records: Sequence[Record]
    calculations: Sequence[Calculation]
    together: Together
    shared: Sequence[str]

    @property
    def unit(self) -> str:
        return self.calculations[0].unit

    @property
    def sentences(self) -> list[str]:
        """How far each pair differs, in words."""
        return [
            f"{item.first} and {item.second} differ by {abs(item.zeta):.1f} standard uncertainties of their "
            f"difference: {_judged(abs(item.zeta))}."
            for item in self.together.differences
        ]


def results_together(numbers: Sequence[str]) -> Compared:
    """The results of runs or standardizations by their numbers; Refused with the sentences that say why not."""
    if len(numbers) > MOST:
        raise Refused([f"{len(numbers)} numbers are given; up to {MOST} are compared at once."])
    known = _known(numbers)
    records = [known[number] for number in numbers if number in known]
    found = [(item, _calculation(item)) for item in records]
    reasons = [f"{number} is no run and no standardization." for number in numbers if number not in known]
    reasons += [f"{item.number} is void; a void result is not compared." for item in records if item.state == "void"]
    reasons += [f"{item.number} has no result yet." for item, calculation in found if calculation is None]
    if reasons:
        raise Refused(reasons)
    pairs = [(item.number, calculation) for item, calculation in found if calculation is not None]
    try:
        together = use_together([_result(number, calculation) for number, calculation in pairs])
    except ValueError as problem:
        raise Refused([str(problem)]) from problem
    calculations = [calculation for _, calculation in pairs]
    labels = {line["key"]: line["label"] for item in calculations for line in item.outputs["budget"]}
    return Compared(records, calculations, together, [labels.get(key, key) for key in together.shared])


def comparable_numbers(records: Sequence[Record]) -> list[str]:
    """Numbers of the records with a result that still stands, where there are two or more."""
    found = [item.number for item in records if item.calculation and item.state != RecordState.VOID][:MOST]
    return found if len(found) > 1 else []


def _known(numbers: Sequence[str]) -> dict[str, Record]:
    known: dict[str, Record] = {}
    for model in (Run, Standardization):
        known |= {item.number: item for item in model.objects.filter(number__in=numbers)}
    return known


def _calculation(record: Record) -> Calculation | None:
    found = record.calculation or latest_calculation(record)
    return found if found is not None and found.value is not None else None


def _judged(zeta: float) -> str:
    if zeta <= AGREES:
        return "they agree"
    return "look again" if zeta < DOUBTFUL else "they do not agree"


def _result(number: str, calculation: Calculation) -> Result:
    assert calculation.value is not None
    return result_of(number, value=calculation.value, unit=calculation.unit, budget=calculation.outputs["budget"])
