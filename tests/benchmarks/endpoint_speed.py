"""Speed of the batched fit on one core against a loop over scipy's curve_fit and one over lmfit.

Run: python -m tests.benchmarks.endpoint_speed [curves] [curves for the loops]
Must reach, for 10,000 curves of 60 points: 400 times either loop with 3 parameters, 200 times with 8
parameters; one curve below 5 ms; peak memory below 500 MB.
"""

from __future__ import annotations

import resource
import sys
import time
from collections.abc import Callable
from itertools import pairwise

import lmfit
import numpy as np
from scipy import optimize

from analysis.acid_base import AcidBase
from analysis.balance import NUISANCE, prior_of, solved
from analysis.batch import fit_equilibrium_batch
from analysis.curve import Curve
from analysis.electrode import displayed
from analysis.equilibrium import fit_equilibrium
from analysis.fit_problem import FitSettings
from analysis.simulate import simulate_curve
from analysis.system import Analyte
from tests.benchmarks.curves import (
    NEAR,
    NOISE,
    VOLUME_NOISE,
    FloatArray,
    acid_base,
    as_curves,
    machine,
    table,
)

SEED, POINTS = 20261204, 60
SYSTEM = acid_base("base", Analyte("acetic acid", (4.756,)), activity=False)
EIGHT = ("offset", "pKa", "slope", "sample carbonate", "titrant carbonate", "lag", "drift")
VOLUMES = np.linspace(0.0, 15.0, POINTS)
LN_10 = np.log(10.0)
LEAST_3, LEAST_8, MOST_MS, MOST_MB = 400.0, 200.0, 5.0, 500.0


CHEMISTRY = AcidBase(SYSTEM, prior=prior_of(NUISANCE, {}))


def model(
    volume: FloatArray, endpoint: float, pKa: float, offset: float, slope: float = 0.0, sample: float = 0.0,
    titrant: float = 0.0, lag: float = 0.0, drift: float = 0.0,
) -> FloatArray:  # fmt: skip
    """The readings that a loop compares with: the same balance, solved for all points at once, and the
    electrode.
    """
    theta = np.array([[endpoint, pKa - 4.756, sample, titrant]])
    x = solved(CHEMISTRY, volume[None, :], theta, None, start=np.full((1, volume.size), 7.0))
    columns = [np.array([[value]]) for value in (offset, slope, drift, lag)]
    return displayed(x, centre=7.0, **dict(zip(("offset", "slope", "drift", "lag"), columns, strict=True)))[0]


def lean_model(volume: FloatArray, endpoint: float, pKa: float, offset: float) -> FloatArray:
    """As ``model``, written by hand for this one acid and nothing else."""
    kw, c, vessel = 10.0**-13.995, SYSTEM.titrant_concentration, SYSTEM.sample_volume
    x, ka, whole = np.full_like(volume, 7.0), 10.0**-pKa, vessel + volume
    for _ in range(60):
        h = 10.0**-x
        share = ka / (ka + h)
        value = volume - endpoint * share + whole * (h - kw / h) / c
        slope = LN_10 * (endpoint * share * (1 - share) + whole * (h + kw / h) / c)
        step = np.arcsinh(LN_10 * value / slope) / LN_10
        x = x + step
        if np.abs(step).max() < 1e-10:
            break
    return x + offset


def by_scipy(reading: FloatArray, *, function: Callable[..., FloatArray] = model, count: int = 3) -> float:
    """The endpoint of one curve by scipy's curve_fit."""
    found, _ = optimize.curve_fit(function, VOLUMES, reading, p0=(NEAR, 4.7, *[0.0] * (count - 2)))
    return float(found[0])


def by_lmfit(reading: FloatArray) -> float:
    """The endpoint of one curve by lmfit."""
    fitted = lmfit.Model(lambda volume, endpoint, pKa, offset: model(volume, endpoint, pKa, offset)).fit(
        reading, volume=VOLUMES, endpoint=NEAR, pKa=4.7, offset=0.0
    )
    return float(fitted.params["endpoint"].value)


def rate(run: Callable[[], object], *, count: int, repeats: int = 1) -> float:
    """Curves a second, the best of some runs."""
    found = []
    for _ in range(repeats):
        begin = time.perf_counter()
        run()
        found.append(count / (time.perf_counter() - begin))
    return max(found)


def alone(curve: Curve) -> float:
    """Milliseconds for one curve with every parameter and every diagnostic, the median of 50."""
    marks = [time.perf_counter()]
    for _ in range(50):
        fit_equilibrium(curve, system=SYSTEM)
        marks.append(time.perf_counter())
    return float(1000 * np.median([after - before for before, after in pairwise(marks)]))


CASES = {
    "batch, 3 parameters, scatter known": (FitSettings(("offset", "pKa"), noise=NOISE, robust=False), LEAST_3),
    "batch, 3 parameters, robust": (FitSettings(("offset", "pKa"), noise=NOISE), LEAST_3),
    "batch, 8 parameters, scatter known": (FitSettings(EIGHT, noise=NOISE, robust=False), LEAST_8),
    "batch, 8 parameters, robust, scatter found": (FitSettings(EIGHT), LEAST_8),
}


def main(count: int = 10_000, looped: int = 150) -> int:
    """Print the table; 1 when something misses."""
    generator = np.random.default_rng(SEED)
    amounts = (NEAR + generator.uniform(-0.5, 0.5, (count, 1))) * 0.1
    readings = simulate_curve(
        SYSTEM, amounts=amounts, volumes=VOLUMES, generator=generator, noise=NOISE, volume_noise=VOLUME_NOISE,
        offset=generator.normal(0.0, 0.06, count),
    )  # fmt: skip
    curves = as_curves(VOLUMES, readings)
    few = readings[:looped]
    loops = {
        "curve_fit, 3 parameters": rate(lambda: [by_scipy(row) for row in few], count=looped, repeats=2),
        "lmfit, 3 parameters": rate(lambda: [by_lmfit(row) for row in few], count=looped, repeats=2),
    }
    lean = rate(lambda: [by_scipy(row, function=lean_model) for row in few], count=looped, repeats=2)
    best, missed = max(loops.values()), []
    rows = [[name, f"{value:,.0f}", ""] for name, value in loops.items()]
    rows.append(["curve_fit, 3 parameters, model by hand for one acid", f"{lean:,.0f}", f"{lean / best:.1f} times"])
    for name, (settings, least) in CASES.items():
        found = rate(
            lambda s=settings: fit_equilibrium_batch(curves, system=SYSTEM, settings=s),
            count=count,
            repeats=3,
        )
        rows.append([name, f"{found:,.0f}", f"{found / best:,.0f} times (at least {least:.0f})"])
        missed += [name] if found < least * best else []
    one, memory = alone(curves[0]), resource.getrusage(resource.RUSAGE_SELF).ru_maxrss / 1024
    rows.append(["one curve, 8 parameters, all diagnostics", f"{one:.2f} ms", f"(at most {MOST_MS:.0f})"])
    rows.append(["peak memory", f"{memory:,.0f} MB", f"(at most {MOST_MB:.0f})"])
    missed += (["one curve"] if one > MOST_MS else []) + (["memory"] if memory > MOST_MB else [])
    print(f"{count:,} curves of {POINTS} points ({looped} for the loops), one core, seed {SEED}; {machine()}")
    print(table(["fit", "curves/s", "against the faster loop"], rows))
    print("missed: " + ", ".join(missed) if missed else "all reached")
    return 1 if missed else 0


if __name__ == "__main__":
    sys.exit(main(*map(int, sys.argv[1:])))
