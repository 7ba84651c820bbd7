"""A record's sheet: its rows, the present result, and what the worker owes."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Any

from labrecords.models import Calculation, CalculationRequest, Replicate, ReplicateKind, Run, Standardization
from labrecords.queries.calculation import latest_calculation, latest_request
from labrecords.queries.replicate import replicates_of

Record = Run | Standardization


@dataclass(frozen=True, slots=True)
class SheetRow:
    """One titration on the sheet, with what was computed of it (None before that)."""

    replicate: Replicate
    titration: Mapping[str, Any] | None

    @property
    def is_blank(self) -> bool:
        return self.replicate.kind == ReplicateKind.BLANK

    @property
    def label(self) -> str:
        return f"Blank {self.replicate.number}" if self.is_blank else str(self.replicate.number)

    @property
    def is_outside(self) -> bool:
        """Outside the concordant set, or excluded: struck through but never hidden."""
        if self.replicate.is_excluded:
            return True
        return self.titration is not None and not self.is_blank and self.titration["in_set"] is False


@dataclass(frozen=True, slots=True)
class Sheet:
    """Everything a sheet shows; ``outputs`` are those of the newest calculation, or of the preview."""

    record: Record
    rows: Sequence[SheetRow]
    calculation: Calculation | None
    request: CalculationRequest | None
    outputs: Mapping[str, Any] | None

    @property
    def is_waiting(self) -> bool:
        return self.request is not None and self.request.state == "waiting"


def sheet_of(record: Record, *, outputs: Mapping[str, Any] | None = None) -> Sheet:
    """The sheet of a run or a standardization, with the preview's outputs when they are given."""
    calculation = record.calculation or latest_calculation(record)
    shown = outputs if outputs is not None else (calculation.outputs if calculation else None)
    computed = {(line["blank"], line["number"]): line for line in (shown or {}).get("titrations", [])}
    rows = [
        SheetRow(replicate=item, titration=computed.get((item.kind == ReplicateKind.BLANK, item.number)))
        for item in replicates_of(record)
    ]
    return Sheet(record=record, rows=rows, calculation=calculation, request=latest_request(record), outputs=shown)
