"""The chemistry of a titration, as data: what the model of a curve is told."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import asdict, dataclass, fields
from typing import Any

TITRANTS: dict[str, tuple[str, ...]] = {
    "acid_base": ("base", "acid"),
    "precipitation": ("silver", "halide"),
    "redox": ("oxidant", "reductant"),
    "complex": ("ligand",),
}
MOST_ANALYTES, MOST_STEPS = 3, 6
LOWEST_PKA, HIGHEST_PKA = -3.0, 16.0


@dataclass(frozen=True, slots=True)
class Analyte:
    """One substance that is titrated.

    Attributes
    ----------
    name : str
    pKa : tuple of float
        From the most acidic step on; empty for a strong acid or base. Thermodynamic constants when activity
        is on.
    charge : int
        When fully protonated; the charge of the metal ion for a complex.
    lost : int or None
        Protons already lost in the form that is weighed: 1 for hydrogen phthalate. None: no proton for a base
        titrant, every proton for an acid titrant.
    pKs : float or None
        Precipitation: pK of the solubility product.
    log_K : float or None
        Complex: logarithm of the conditional constant at the pH of the titration.
    potential : float or None
        Redox: formal potential in the medium of the titration, against the electrode used [mV].
    electrons : int
        Redox: electrons an ion gives or takes.
    """

    name: str
    pKa: tuple[float, ...] = ()
    charge: int = 0
    lost: int | None = None
    pKs: float | None = None
    log_K: float | None = None
    potential: float | None = None
    electrons: int = 1

    def __post_init__(self) -> None:
        if len(self.pKa) > MOST_STEPS:
            raise ValueError(f"{self.name} has {len(self.pKa)} pKa values; at most {MOST_STEPS} are expected.")
        for value in self.pKa:
            if not LOWEST_PKA <= value <= HIGHEST_PKA:
                raise ValueError(
                    f"pKa of {self.name} is {value:g}; {LOWEST_PKA:g} to {HIGHEST_PKA:g} is expected "
                    "(none at all for a strong acid or base)."
                )
        if self.lost is not None and not 0 <= self.lost <= len(self.pKa):
            raise ValueError(f"Protons lost of {self.name} are {self.lost}; 0 to {len(self.pKa)} is expected.")
        if self.electrons < 1:
            raise ValueError(f"Electrons of {self.name} are {self.electrons}; 1 or more are expected.")


@dataclass(frozen=True, slots=True)
class System:
    """A titration system.

    Attributes
    ----------
    kind : str
        acid_base, precipitation, redox or complex.
    titrant : str
        base or acid; silver or halide; oxidant or reductant; ligand.
    titrant_concentration : float
        [mol/L].
    sample_volume : float
        Volume in the vessel at the start [mL].
    analytes : tuple of Analyte
        One to three (one for a complex or a halide titrant).
    carbonate : float
        Fraction of a base titrant's concentration that is carbonate.
    activity : bool
        Whether activity coefficients (Davies) are applied; acid-base only.
    temperature : float
        [degC].
    background : float
        Ionic strength of an added neutral salt in the vessel at the start [mol/L].
    titrant_potential, titrant_electrons
        Redox: formal potential [mV] and electrons of the titrant.
    """

    kind: str
    titrant: str
    titrant_concentration: float
    sample_volume: float
    analytes: tuple[Analyte, ...]
    carbonate: float = 0.0
    activity: bool = True
    temperature: float = 25.0
    background: float = 0.0
    titrant_potential: float | None = None
    titrant_electrons: int = 1

    def __post_init__(self) -> None:
        if self.kind not in TITRANTS:
            raise ValueError(f"Kind of system is {self.kind!r}; expected one of {', '.join(TITRANTS)}.")
        if self.titrant not in TITRANTS[self.kind]:
            raise ValueError(f"Titrant is {self.titrant!r}; expected {' or '.join(TITRANTS[self.kind])}.")
        for name in ("titrant_concentration", "sample_volume"):
            value = getattr(self, name)
            if not (value > 0 and math.isfinite(value)):
                raise ValueError(f"{name.replace('_', ' ').capitalize()} is {value}; a number above 0 is expected.")
        _check_range("Carbonate", self.carbonate, low=0.0, high=0.5)
        _check_range("Temperature", self.temperature, low=0.0, high=60.0)
        _check_range("Background", self.background, low=0.0, high=1.0)
        _check_analytes(self)

    def to_json(self) -> dict[str, Any]:
        """Plain data that ``from_json`` takes back."""
        data = asdict(self)
        data["analytes"] = [{**item, "pKa": list(item["pKa"])} for item in data["analytes"]]
        return data

    @classmethod
    def from_json(cls, data: Mapping[str, Any]) -> System:
        """A system from plain data; numbers may be text. ValueError names what is missing or wrong."""
        try:
            return cls(
                kind=str(data["kind"]), titrant=str(data["titrant"]),
                titrant_concentration=_number(data["titrant_concentration"], name="Titrant concentration"),
                sample_volume=_number(data["sample_volume"], name="Sample volume"),
                analytes=tuple(_analyte(item) for item in data["analytes"]), **_optional(data),
            )  # fmt: skip
        except KeyError as missing:
            raise ValueError(f"The chemistry says nothing about {missing.args[0]!r}.") from missing
        except TypeError as problem:
            raise ValueError(f"The chemistry cannot be read: {problem}.") from problem


def _optional(data: Mapping[str, Any]) -> dict[str, Any]:
    known = {field.name for field in fields(System)}
    unknown = sorted(set(data) - known)
    if unknown:
        raise ValueError(f"The chemistry has {unknown[0]!r}; expected are {', '.join(sorted(known))}.")
    potential = data.get("titrant_potential")
    return {
        "carbonate": _number(data.get("carbonate") or 0.0, name="Carbonate"),
        "activity": bool(data.get("activity", True)),
        "temperature": _number(data.get("temperature", 25.0), name="Temperature"),
        "background": _number(data.get("background") or 0.0, name="Background"),
        "titrant_potential": None if potential is None else _number(potential, name="Titrant potential"),
        "titrant_electrons": int(data.get("titrant_electrons", 1)),
    }


def _analyte(item: Mapping[str, Any]) -> Analyte:
    name = str(item["name"])
    lost = item.get("lost")
    constants = {
        key: None if item.get(key) is None else _number(item[key], name=f"{key} of {name}")
        for key in ("pKs", "log_K", "potential")
    }
    return Analyte(
        name=name,
        pKa=tuple(sorted(_number(value, name=f"pKa of {name}") for value in item.get("pKa") or [])),
        charge=int(item.get("charge", 0)), lost=None if lost is None else int(lost),
        electrons=int(item.get("electrons", 1)), **constants,
    )  # fmt: skip


def _number(value: Any, *, name: str) -> float:
    try:
        number = float(value)
    except ValueError as problem:
        raise ValueError(f"{name} is {value!r}; a number is expected.") from problem
    if not math.isfinite(number):
        raise ValueError(f"{name} is {value!r}; a finite number is expected.")
    return number


def _check_range(name: str, value: float, *, low: float, high: float) -> None:
    if not low <= value <= high:
        raise ValueError(f"{name} is {value}; {low:g} to {high:g} is expected.")


def _check_analytes(system: System) -> None:
    most = 1 if system.kind == "complex" or system.titrant == "halide" else MOST_ANALYTES
    if not 1 <= len(system.analytes) <= most:
        raise ValueError(f"{len(system.analytes)} analytes are given; 1 to {most} are expected.")
    wanted = {"precipitation": "pKs", "redox": "potential", "complex": "log_K"}.get(system.kind)
    for item in system.analytes:
        if wanted and getattr(item, wanted) is None:
            raise ValueError(f"{wanted} of {item.name} is not given; the model of {system.kind} needs it.")
    if system.kind == "redox" and system.titrant_potential is None:
        raise ValueError("Titrant potential is not given; the model of redox needs it [mV].")
    if system.titrant_electrons < 1:
        raise ValueError(f"Titrant electrons are {system.titrant_electrons}; 1 or more are expected.")
