"""Reading one titrant lot: how much of it was used, and by what."""

from __future__ import annotations

from dataclasses import dataclass
from decimal import Decimal
from typing import Any

from labrecords.models import Calculation, RecordState, TitrantLot


@dataclass(frozen=True, slots=True)
class VolumeBalance:
    """What was prepared, what the recorded titrations used, and what should be left [mL]."""

    prepared: Decimal
    used: float
    titrations: int

    @property
    def left(self) -> float:
        return float(self.prepared) - self.used


def volume_balance(lot: TitrantLot) -> VolumeBalance:
    """The volume of a lot against every titration that was computed with it, void ones too."""
    outputs: dict[tuple[str, int], Any] = {}
    by_run = Calculation.objects.filter(run__standardization__lot=lot).order_by("number")
    by_standardization = Calculation.objects.filter(standardization__lot=lot).order_by("number")
    for pk, data in by_run.values_list("run_id", "outputs"):
        outputs[("run", pk)] = data
    for pk, data in by_standardization.values_list("standardization_id", "outputs"):
        outputs[("standardization", pk)] = data
    titres = [line["titre"] for data in outputs.values() for line in data["titrations"] if line["titre"]]
    return VolumeBalance(prepared=lot.volume, used=sum(titres), titrations=len(titres))


def runs_on_lot(lot: TitrantLot) -> int:
    """How many runs rest on the lot's concentration, void ones not counted."""
    return lot.standardizations.exclude(runs__isnull=True).exclude(runs__state=RecordState.VOID).values("runs").count()
