"""From curves of one system to the arrays of the fit: padding, decimal units, noise, first guess, priors."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from analysis.acid_base import AcidBase
from analysis.activity import nernst
from analysis.balance import NUISANCE, Chemistry, Parameter, PriorOf, prior_of
from analysis.curve import Curve
from analysis.electrode import Electrode, electrode
from analysis.explicit import Complex, Precipitation, Redox
from analysis.fit_likelihood import Observed
from analysis.fit_start import anchor, first_amounts
from analysis.scatter import scatter
from analysis.system import System

FloatArray = npt.NDArray[np.float64]
VOLUME_SD = 0.003  # mL; without it a point in a steep jump would count for more than a burette can do
LEAST_SD = {"pH": 0.004, "mV": 0.2}  # an electrode's reading is no better
MODELS: dict[str, Callable[..., Chemistry]] = {
    "acid_base": AcidBase,
    "precipitation": Precipitation,
    "redox": Redox,
    "complex": Complex,
}
GLASS_OFFSET = 0.5  # prior deviation of a pH electrode read in mV [pH]


@dataclass(frozen=True, slots=True)
class FitSettings:
    """How curves are fitted.

    Attributes
    ----------
    nuisance : tuple of str
        Groups of parameters fitted beside the amounts; the others are held at their stated values.
    priors : dict
        Standard deviations that replace the usual ones, by group.
    noise : float or None
        Standard deviation of a reading [pH or mV]; None: from each curve.
    volume_sd : float
        Standard deviation of a delivered volume [mL].
    robust : bool
        Whether single bad readings are given less weight (Huber).
    centres : mapping
        What is known of a group beforehand, 0 otherwise: {"slope": -0.015} for an electrode that calibrates
        at 98.5 %.
    """

    nuisance: tuple[str, ...] = NUISANCE
    priors: Mapping[str, float] | None = None
    noise: float | None = None
    volume_sd: float = VOLUME_SD
    robust: bool = True
    centres: Mapping[str, float] | None = None


@dataclass(frozen=True, slots=True)
class Problem:
    """The arrays of a fit: curves by points, curves by parameters."""

    chemistry: Chemistry
    observed: Observed
    reading: FloatArray
    start: FloatArray
    centre: FloatArray
    priors: FloatArray
    names: tuple[str, ...]
    groups: tuple[str, ...]
    points: FloatArray
    noise: FloatArray
    is_noise_known: bool
    unit: float  # reading per decimal unit; negative where the reading falls as x rises
    least_sd: float  # of a reading [decimal units]
    system: System
    is_reversed: npt.NDArray[np.bool_]  # curves that go the wrong way

    @property
    def precision(self) -> FloatArray:
        """1/variance of each parameter's prior; 0 without a prior."""
        return np.where(np.isfinite(self.priors), self.priors, np.inf) ** -2.0


def prepare(curves: Sequence[Curve], *, system: System, guess: float | None, settings: FitSettings) -> Problem:
    """Check the curves against the system and lay them out."""
    _check(curves, system=system, guess=guess, settings=settings)
    volume, reading, mask, points = _rows(curves)
    _check_rows(volume, reading, mask)
    prior = prior_of((*settings.nuisance, *(settings.centres or {})), dict(settings.priors or {}))
    noise = _noise(volume, reading, mask, curves[0].quantity, settings)
    unit = _unit(system, curves[0].quantity)
    chemistry: Chemistry = MODELS[system.kind](system, prior=prior)
    linear = reading / unit
    amounts = first_amounts(system, volume, linear, guess)
    electrode_, offset = _electrode(
        chemistry, system, curves[0].quantity, prior, volume, linear, points, amounts.sum(axis=1)
    )
    observed = Observed(volume, electrode_, noise[:, None] / abs(unit), settings.volume_sd, mask)
    parameters: tuple[Parameter, ...] = (*chemistry.parameters, *electrode_.parameters)
    count = chemistry.count
    centre = np.zeros((len(curves), count + len(parameters)))
    centre[:, :count] = amounts
    for name, value in (settings.centres or {}).items():
        for k, item in enumerate(parameters):
            centre[:, count + k] += value * (item.group == name)
    if offset is not None:
        centre[:, electrode_.first + [item.group for item in electrode_.parameters].index("offset")] = offset
    names = (*(f"V({item.name})" for item in system.analytes), *(item.name for item in parameters))
    priors = np.array([np.inf] * count + [item.prior for item in parameters])
    groups = ("volume",) * count + tuple(item.group for item in parameters)
    return Problem(
        chemistry, observed, reading, centre.copy(), centre, priors, names, groups, points, noise,
        settings.noise is not None, unit, LEAST_SD[curves[0].quantity] / abs(unit),
        system, _is_reversed(reading, quantity=curves[0].quantity, system=system),
    )  # fmt: skip


def _check(curves: Sequence[Curve], *, system: System, guess: float | None, settings: FitSettings) -> None:
    if not curves:
        raise ValueError("No curve is given; at least one is expected.")
    wanted = ("pH", "mV") if system.kind == "acid_base" else ("mV",)
    for curve in curves:
        if curve.quantity not in wanted or curve.quantity != curves[0].quantity:
            raise ValueError(
                f"The curve is of {curve.quantity}; the model of {system.kind.replace('_', ' ')} takes "
                f"{' or '.join(wanted)}, the same for all curves."
            )
        if curve.volume.size < 8:
            raise ValueError(f"The curve has {curve.volume.size} points; the model needs at least 8.")
    for name, value in (("Guess", guess), ("Noise", settings.noise), ("Volume sd", settings.volume_sd)):
        if value is not None and not (value > 0 and np.isfinite(value)):
            raise ValueError(f"{name} is {value}; a finite number above 0 is expected.")


def _check_rows(volume: FloatArray, reading: FloatArray, mask: FloatArray | None) -> None:
    for name, values in (("Volume", volume), ("Reading", reading)):
        if not np.isfinite(values).all():
            row, at = np.argwhere(~np.isfinite(values))[0]
            raise ValueError(f"{name} {at + 1} is {values[row, at]}; a finite number is expected.")
    forward = np.diff(volume, axis=1) > 0
    if mask is not None:
        forward |= mask[:, 1:] == 0
    if not forward.all() or volume[:, 0].min() < 0:
        raise ValueError("The volumes do not rise from point to point, from 0 on; a cleaned curve is expected.")


def _is_reversed(reading: FloatArray, *, quantity: str, system: System) -> npt.NDArray[np.bool_]:
    """Whether each curve goes the wrong way: a base raises the pH, an acid lowers it; in mV a glass
    electrode goes the other way.
    """
    part = max(reading.shape[1] // 4, 1)
    rise = reading[:, -part:].mean(axis=1) - reading[:, :part].mean(axis=1)
    is_base = (rise > 0) == (quantity == "pH")
    return np.asarray((system.kind == "acid_base") & (rise != 0) & (is_base != (system.titrant == "base")))


def _rows(curves: Sequence[Curve]) -> tuple[FloatArray, FloatArray, FloatArray | None, FloatArray]:
    """Curves as rows; shorter ones are padded with their last point, which the mask leaves out."""
    sizes = np.array([curve.volume.size for curve in curves])
    if sizes.min() == sizes.max():
        return (
            np.stack([c.volume for c in curves]),
            np.stack([c.reading for c in curves]),
            None,
            sizes.astype(float),
        )
    take = np.minimum(np.arange(sizes.max())[None, :], sizes[:, None] - 1)
    volume = np.stack([curve.volume[at] for curve, at in zip(curves, take, strict=True)])
    reading = np.stack([curve.reading[at] for curve, at in zip(curves, take, strict=True)])
    return (
        volume,
        reading,
        (np.arange(sizes.max())[None, :] < sizes[:, None]).astype(float),
        sizes.astype(float),
    )


def _noise(
    volume: FloatArray, reading: FloatArray, mask: FloatArray | None, quantity: str, settings: FitSettings
) -> FloatArray:
    if settings.noise is not None:
        return np.full(volume.shape[0], settings.noise)
    return np.maximum(scatter(volume, reading, mask=mask), LEAST_SD[quantity])


def _unit(system: System, quantity: str) -> float:
    """Reading per decimal unit of x."""
    if quantity == "pH":
        return 1.0
    slope = nernst(system.temperature)
    if system.kind == "complex":
        return -slope / max(abs(system.analytes[0].charge), 1)
    rises = (system.kind == "redox" and system.titrant == "oxidant") or system.titrant == "halide"
    return slope if rises else -slope


def _electrode(
    chemistry: Chemistry, system: System, quantity: str, prior: PriorOf, volume: FloatArray,
    linear: FloatArray, points: FloatArray, guess: FloatArray,
) -> tuple[Electrode, FloatArray | None]:  # fmt: skip
    """The electrode, and where its unknown standard potential starts; None where it is known."""
    first = chemistry.count + len(chemistry.parameters)
    if quantity == "pH":
        return electrode(linear, points=points, prior=prior, first=first, centre=7.0), None
    if system.kind == "redox":
        known = prior_of(tuple(set(NUISANCE) - {"offset"}), {})
        return electrode(
            linear,
            points=points,
            prior=lambda g: prior(g) and known(g),
            first=first,
            centre=linear.mean(axis=1),
        ), None
    if system.kind == "acid_base":
        return electrode(
            linear + 7.0,
            points=points,
            prior=lambda g: GLASS_OFFSET if g == "offset" else prior(g),
            first=first,
            centre=7.0,
        ), None
    x, at = anchor(system, volume, points, guess)
    offset = np.take_along_axis(linear, at[:, None], 1)[:, 0] - x
    centred = electrode(linear, points=points, prior=prior, first=first, centre=0.0, free_offset=True)
    return centred, offset
