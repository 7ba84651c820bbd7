"""Titrations of a determination as read, and the inputs that come with their titres."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from typing import Any

from analysis.curve_titre import curve_titre
from analysis.titration_inputs import Titration, burette_titre, number, optional
from analysis.uncertainty import Input
from analysis.water import water_expansion
from analysis.weighing import GLASS, SOLUTIONS, volume_at

Inputs = Mapping[str, Any]
SQRT_12, SQRT_6, SQRT_3 = math.sqrt(12), math.sqrt(6), math.sqrt(3)
REFERENCE = 20.0  # [degC] at which volumes are stated, ISO 385 and ISO 4787
End = tuple[float, float]


def read_titrations(inputs: Inputs) -> list[Titration]:
    """Every titration and blank, with its titre in mL from readings or from its recorded curve."""
    lines = [(line, True) for line in inputs.get("blanks") or []]
    lines += [(line, False) for line in inputs.get("replicates") or []]
    return [_titration(line, inputs, is_blank=is_blank) for line, is_blank in lines]


def blank_of(titrations: Sequence[Titration]) -> float | None:
    """Mean titre of the accepted blanks [mL], or None when there is none."""
    blanks = [float(item.titre or 0.0) for item in _blanks(titrations)]
    return sum(blanks) / len(blanks) if blanks else None


def _blanks(titrations: Sequence[Titration]) -> list[Titration]:
    return [item for item in titrations if item.is_blank and not item.is_excluded and item.is_complete]


def titre_inputs(
    inputs: Inputs, inside: Sequence[Titration], titrations: Sequence[Titration], blank: float | None
) -> list[Input]:
    """The inputs of the titres that count: burette, reading or endpoint, blank and indicator.

    The burette's tolerance is one physical shift of the delivered volume, triangular (QUAM:2012.P1, A2); it is the
    same in every titre, and in the standardization where the same burette was used. Each reading is rounded to the
    burette's resolution, rectangular, two readings a titre (common practice). Overshoot of an indicator is
    subtracted only where no blank does; it is one habit wherever the same method is done.
    """
    burette, method = inputs["burette"], inputs["method"]
    tolerance = number(burette["tolerance"], name="Tolerance of the burette")
    bias = optional(method.get("indicator_bias_mL"), name="Indicator bias") or 0.0
    bias_u = optional(method.get("indicator_u_mL"), name="u of the indicator") or 0.0
    random = math.sqrt(sum(item.titre_u**2 for item in inside)) / len(inside) if inside else 0.0
    blanks = _blanks(titrations)
    blank_u = math.sqrt(sum(item.titre_u**2 for item in blanks)) / len(blanks) if blanks else 0.0
    from_curve = any(item.endpoint for item in inside)
    label = "endpoint of the curve" if from_curve else "reading the burette"
    return [
        Input(
            "volume",
            burette["key"],
            f"burette {burette['identifier']}",
            0.0,
            tolerance / SQRT_6,
            "mL",
            "triangular",
        ),
        Input("reading", "reading", label, 0.0, random, "mL", "normal" if from_curve else "rectangular"),
        Input("blank", "blank", "blank", blank or 0.0, blank_u, "mL", "rectangular"),
        Input(
            "bias",
            str(method.get("indicator_key") or "indicator"),
            f"indicator past equivalence{_of(method)}",
            0.0 if blank is not None else bias,
            bias_u,
            "mL",
        ),
        Input("other_end", "other_end", "the other endpoint", 0.0, 0.0, "mL"),
        _temperature(inputs),
        _unsure_drift(inputs),
    ]


def _of(method: Inputs) -> str:
    """Whose indicator it is, where the inputs say so."""
    return ", " + str(method["indicator_key"]).partition(":")[2] if method.get("indicator_key") else ""


def _temperature(inputs: Inputs) -> Input:
    """How far the solution may be from the temperature written, or from 20 degC where none is corrected.

    Rectangular about it (QUAM:2012.P1, A2); the titre follows by the expansion of its solution less that of the glass.
    """
    settings = inputs.get("temperature") or {}
    within = number(settings.get("within") or 0, name="Temperature within")
    return Input("temperature", "temperature", "temperature of the titrant", 0.0, within / SQRT_3, "°C", "rectangular")


def _unsure_drift(inputs: Inputs) -> Input:
    """The drift [uL/min] is one reading before a titration; how well it is known is the method's word."""
    u = number((inputs.get("drift") or {}).get("u") or 0, name="u of the drift")
    return Input("drift", "drift", "drift", 0.0, u, "µL/min")


def _titration(line: Inputs, inputs: Inputs, *, is_blank: bool) -> Titration:
    where = f"titration {line['number']}"
    amount = optional(line.get("amount"), name=f"Amount of {where}")
    if amount is not None and amount <= 0:
        raise ValueError(f"Amount of {where} is {line['amount']}; a number above 0 is expected.")
    temperature = optional(line.get("temperature"), name=f"Temperature of {where}")
    settings = inputs.get("temperature") or {}
    is_corrected = bool(settings.get("correct"))
    stretch, expansion = _stretch(settings, temperature if is_corrected else None, where=where)
    used, minutes, lacks = _drift(line, inputs, where=where)
    endpoint, titre, ends = _ends(line, inputs, where=where)
    scaled = tuple((volume * stretch - used, u) for volume, u in ends)
    titre = None if titre is None else (titre[0] * stretch - used, titre[1])
    if is_corrected and temperature is None:
        lacks = ("temperature", *lacks)
    return Titration(
        number=int(line["number"]), is_blank=is_blank, is_excluded=bool(line.get("excluded")), amount=amount,
        titre=titre and titre[0], titre_u=titre[1] if titre else 0.0, temperature=temperature, endpoint=endpoint,
        ends=scaled, expansion=expansion, minutes=minutes, lacks=lacks,
    )  # fmt: skip


def _ends(line: Inputs, inputs: Inputs, *, where: str) -> tuple[dict[str, Any] | None, End | None, tuple[End, ...]]:
    """What a curve says, the titre that counts with its u, and every endpoint in order [mL]."""
    if line.get("curve"):
        found = curve_titre(line["curve"], settings=inputs["method"].get("curve") or {}, where=where)
        ends = tuple((end["volume"], end["u"]) for end in found["all"][found["family"]])
        return found, (found["volume"], found["u"]), ends
    burette = inputs["burette"]
    u = number(burette["resolution"], name="Resolution of the burette") / SQRT_12 * math.sqrt(2)
    titre, first = burette_titre(line, burette), burette_titre(line, burette, to="first_end")
    if titre is None:
        return None, None, ()
    if first is None:
        return None, (titre, u), ((titre, u),)
    if first > titre:
        raise ValueError(
            f"Readings of {where} are {line['first_end']} mL at the first endpoint and {line['end']} mL at the "
            "second; the second must not be below the first."
        )
    return None, (titre, u), ((first, u), (titre, u))


def _drift(line: Inputs, inputs: Inputs, *, where: str) -> tuple[float, float, tuple[str, ...]]:
    """What was used without a sample while it was titrated [mL], how long that took [min], and what was not read."""
    if not inputs.get("drift"):
        return 0.0, 0.0, ()
    drift = optional(line.get("drift"), name=f"Drift of {where}")
    minutes = optional(line.get("minutes"), name=f"Duration of {where}")
    if minutes is not None and minutes < 0:
        raise ValueError(f"Duration of {where} is {line['minutes']} min; a number not below 0 is expected.")
    if drift is None or minutes is None:
        return 0.0, 0.0, (*(("drift",) if drift is None else ()), *(("duration",) if minutes is None else ()))
    return drift * minutes / 1000, minutes, ()


def _stretch(settings: Inputs, temperature: float | None, *, where: str) -> tuple[float, float]:
    """Volume at 20 degC over volume as read, and how fast a volume changes with temperature [1/K]."""
    if not settings:
        return 1.0, 0.0
    glass, solution = settings.get("glass", "borosilicate"), settings.get("solution", "water")
    if glass not in GLASS:
        raise ValueError(f"Glass is {glass!r}; expected one of {', '.join(GLASS)}.")
    if solution != "water" and solution not in SOLUTIONS:
        raise ValueError(f"Solution expands like {solution!r}; expected one of water, {', '.join(SOLUTIONS)}.")
    at = REFERENCE if temperature is None else temperature
    try:
        liquid = SOLUTIONS.get(solution)
        factor = volume_at(1.0, temperature=at, glass=GLASS[glass], liquid=liquid)
        return factor, (water_expansion(at) if liquid is None else liquid) - GLASS[glass]
    except ValueError as problem:
        raise ValueError(f"Temperature of {where}: {problem}") from problem
