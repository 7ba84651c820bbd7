"""The chemistry of a titration, as data: what the model of a curve is told."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any

KINDS = ("acid_base", "precipitation")
MOST_ANALYTES = 3


@dataclass(frozen=True, slots=True)
class Analyte:
    """One analyte: its pKa values from the most acidic on (none: a strong acid or base), its charge when fully
    protonated, and for a precipitate the pK of its solubility product."""

    name: str
    pKa: tuple[float, ...]
    charge: int
    pKs: float | None = None


@dataclass(frozen=True, slots=True)
class System:
    """A titration system.

    Attributes
    ----------
    kind : str
        acid_base or precipitation.
    titrant : str
        "base" or "acid" for acid_base; the name of the titrant's ion otherwise.
    titrant_concentration : float
        [mol/L].
    sample_volume : float
        Volume in the vessel at the start [mL].
    analytes : tuple of Analyte
        One to three.
    carbonate : float
        Fraction of the titrant's concentration that is carbonate (a base titrant).
    activity : bool
        Whether activity coefficients (Davies) are applied.
    """

    kind: str
    titrant: str
    titrant_concentration: float
    sample_volume: float
    analytes: tuple[Analyte, ...]
    carbonate: float = 0.0
    activity: bool = True

    def __post_init__(self) -> None:
        if self.kind not in KINDS:
            raise ValueError(f"Kind of system is {self.kind!r}; expected one of {', '.join(KINDS)}.")
        for name in ("titrant_concentration", "sample_volume"):
            value = getattr(self, name)
            if not (value > 0 and math.isfinite(value)):
                raise ValueError(f"{name.replace('_', ' ').capitalize()} is {value}; a number above 0 is expected.")
        if not 1 <= len(self.analytes) <= MOST_ANALYTES:
            raise ValueError(f"{len(self.analytes)} analytes are given; 1 to {MOST_ANALYTES} are expected.")
        if self.kind == "acid_base" and self.titrant not in ("base", "acid"):
            raise ValueError(f"Titrant is {self.titrant!r}; expected base or acid.")

    def to_json(self) -> dict[str, Any]:
        """Plain data that ``from_json`` takes back."""
        return {
            "kind": self.kind, "titrant": self.titrant, "titrant_concentration": self.titrant_concentration,
            "sample_volume": self.sample_volume, "carbonate": self.carbonate, "activity": self.activity,
            "analytes": [
                {"name": item.name, "pKa": list(item.pKa), "charge": item.charge, "pKs": item.pKs}
                for item in self.analytes
            ],
        }  # fmt: skip

    @classmethod
    def from_json(cls, data: Mapping[str, Any]) -> System:
        """A system from plain data; numbers may be text. ValueError names what is missing or wrong."""
        try:
            analytes = tuple(_analyte(item) for item in data["analytes"])
            return cls(
                kind=str(data["kind"]), titrant=str(data["titrant"]), analytes=analytes,
                titrant_concentration=float(data["titrant_concentration"]),
                sample_volume=float(data["sample_volume"]), carbonate=float(data.get("carbonate") or 0.0),
                activity=bool(data.get("activity", True)),
            )  # fmt: skip
        except KeyError as missing:
            raise ValueError(f"The chemistry says nothing about {missing.args[0]!r}.") from missing
        except TypeError as problem:
            raise ValueError(f"The chemistry cannot be read: {problem}.") from problem


def _analyte(item: Mapping[str, Any]) -> Analyte:
    constants = tuple(sorted(float(value) for value in item.get("pKa") or []))
    solubility = item.get("pKs")
    return Analyte(
        name=str(item["name"]), pKa=constants, charge=int(item.get("charge", 0)),
        pKs=None if solubility is None else float(solubility),
    )  # fmt: skip
