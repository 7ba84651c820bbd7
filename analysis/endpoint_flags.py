"""The sentences that the analyst reads about a curve and its endpoints."""

from __future__ import annotations

import numpy as np

from analysis.curve import Curve
from analysis.endpoint_rule import CurveSettings, Endpoint, begins_beyond
from analysis.equilibrium import Fit


def direction_of(curve: Curve) -> str:
    """What a pH curve's direction says of the titration."""
    if curve.quantity != "pH":
        return ""
    if curve.reading[-1] < curve.reading[0]:
        return "Falling curve: a base titrated with acid."
    return "Rising curve: an acid titrated with base."


def flags_of_direction(curve: Curve, settings: CurveSettings) -> list[str]:
    """A curve that goes the other way than the method's titrant takes it is of another titration."""
    if settings.system is None or settings.system.kind != "acid_base" or curve.quantity != "pH":
        return []
    falls = bool(curve.reading[-1] < curve.reading[0])
    if falls == (settings.system.titrant == "acid"):
        return []
    return [f"{direction_of(curve)} The method titrates with {settings.system.titrant}: is this its curve?"]


def flags_of_curve(curve: Curve) -> list[str]:
    """Where the reading goes the wrong way."""
    steps = np.diff(curve.reading)
    rising = curve.reading[-1] >= curve.reading[0]
    against = -steps if rising else steps
    limit = {"pH": 0.2, "mV": 15.0}.get(curve.quantity)
    found = []
    if limit is not None and against.size and against.max() > limit:
        at = int(against.argmax())
        found.append(f"The reading reverses by {against[at]:.2g} {curve.quantity} at {curve.volume[at + 1]:.2f} mL.")
    return found


def flags_of_endpoints(
    curve: Curve, settings: CurveSettings, near: list[float], decided: Endpoint, checked: Endpoint | None,
    agreement: float | None, fit: Fit | None, problems: dict[str, str],
) -> list[str]:  # fmt: skip
    """Too many or too few endpoints, a coarse step, families that disagree, and what the fit says of itself."""
    found = []
    if near and len(near) != settings.expected:
        found.append(f"{len(near)} endpoints found, {settings.expected} expected.")
    if begins_beyond(curve, settings):
        found.append(
            f"The curve begins at {curve.quantity} {curve.reading[0]:.2f}, beyond {settings.first_fixed_reading:g}: "
            "the first endpoint is where it begins."
        )
    at = int(np.clip(np.searchsorted(curve.volume, decided.volume), 1, curve.volume.size - 1))
    step = float(curve.volume[at] - curve.volume[at - 1])
    if step > 0.3 and decided.family in ("derivative", "parabola", "polynomial"):
        found.append(
            f"Volume step at the endpoint {step:.2f} mL: a derivative endpoint is uncertain by {step / 2:.2f} mL."
        )
    if agreement is not None and checked is not None and agreement > settings.agreement_limit:
        found.append(
            f"{decided.family.capitalize()} and {checked.family} differ "
            f"by {agreement:.1f} combined standard uncertainties."
        )
    if settings.checking and checked is None:
        found.append(
            f"The checking family {settings.checking} finds no endpoint: "
            f"{problems.get(settings.checking, 'nothing to go by')}"
        )
    return found + (list(fit.flags) if fit else [])
