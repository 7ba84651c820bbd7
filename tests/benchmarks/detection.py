"""How often the number of endpoints is right: 20 systems with 1, 2 or 3 jumps, and 10 kinds of curve with none.

Run: python -m tests.benchmarks.detection [curves per cell]
Must reach: the right number, each within a twentieth of the curve of the truth, in 100 % at a noise of 0.5 mV and in at
least 99.5 % at 2 mV; no endpoint on any curve without a jump.
"""

from __future__ import annotations

import sys
import time

import numpy as np

from analysis.curve import Curve
from analysis.detection import endpoints_near
from analysis.noise import noise_of
from tests.benchmarks.curves import FloatArray, machine, table
from tests.benchmarks.jumps import END, NEGATIVES, NERNST, POSITIVES, Jumps, readings_of, volumes_of

SEED = 20261203
STEPS = (0.5, 0.1, 0.05)  # mL
NEEDED = {0.5: 100.0, 2.0: 99.5}  # mV: % of the curves
CLOSE = 0.75  # mL, a twentieth of the curve


def found_on(volumes: FloatArray, reading: FloatArray, *, quantity: str) -> list[float]:
    """What is found when nothing is known but the curve."""
    curve = Curve(volumes, reading, quantity, ())
    return endpoints_near(curve, noise=noise_of(curve))


def right(case: Jumps, *, step: float, noise: float, count: int, generator: np.random.Generator) -> float:
    """Per cent of the curves with every jump found where it is, and no other."""
    volumes = volumes_of(case, step)
    readings, factors = readings_of(case, volumes, noise=noise, count=count, generator=generator)
    good = 0
    for reading, factor in zip(readings, factors, strict=True):
        found, truth = found_on(volumes, reading, quantity=case.quantity), factor * np.array(case.at)
        good += len(found) == truth.size and bool(np.all(np.abs(np.array(found) - truth) <= max(CLOSE, step)))
    return 100 * good / count


def silent(name: str, *, step: float, noise: float, count: int, generator: np.random.Generator) -> float:
    """Per cent of the curves without a jump on which none is found."""
    volumes = np.arange(0.0, END + step / 2, step)
    scatter = generator.normal(0.0, noise / NERNST, (count, volumes.size))
    curves = [NEGATIVES[name](volumes, generator) + row for row in scatter]
    return 100 * sum(not found_on(volumes, reading, quantity="pH") for reading in curves) / count


def positive_rows(count: int, generator: np.random.Generator) -> tuple[list[list[str]], bool]:
    """One row a system; all noises and grids beside each other."""
    rows, good = [], True
    for case in POSITIVES:
        shares = {
            (noise, step): right(case, step=step, noise=noise, count=count, generator=generator)
            for noise in NEEDED for step in STEPS
        }  # fmt: skip
        reached = all(share >= NEEDED[noise] for (noise, _), share in shares.items())
        rows.append([case.name, str(len(case.at)), *(f"{share:.1f}" for share in shares.values()), _word(reached)])
        good = good and reached
    return rows, good


def negative_rows(count: int, generator: np.random.Generator) -> tuple[list[list[str]], bool]:
    """One row a kind of curve without a jump."""
    rows, good = [], True
    for name in NEGATIVES:
        shares = [
            silent(name, step=step, noise=noise, count=count, generator=generator)
            for noise in NEEDED for step in STEPS
        ]  # fmt: skip
        rows.append([name, "0", *(f"{share:.1f}" for share in shares), _word(min(shares) >= 100.0)])
        good = good and min(shares) >= 100.0
    return rows, good


def _word(reached: bool) -> str:
    return "yes" if reached else "NO"


def speed(generator: np.random.Generator) -> float:
    """Milliseconds a curve of 61 points, scatter and jumps together."""
    case, volumes = POSITIVES[2], np.arange(0.0, END + 0.01, 0.25)
    readings, _ = readings_of(case, volumes, noise=0.5, count=500, generator=generator)
    start = time.perf_counter()
    for reading in readings:
        found_on(volumes, reading, quantity="pH")
    return 1000 * (time.perf_counter() - start) / len(readings)


def main(count: int = 1000) -> int:
    """Print the table; 1 when a row misses."""
    generator = np.random.default_rng(SEED)
    positives, all_found = positive_rows(count, generator)
    negatives, none_found = negative_rows(count, generator)
    print(f"{count} curves a cell, seed {SEED}; {machine()}")
    print(f"right in % of the curves; {speed(generator):.2f} ms a curve of 61 points")
    header = ["curve", "jumps", *(f"{noise:g} mV, {step:g} mL" for noise in NEEDED for step in STEPS), "reached"]
    print(table(header, positives + negatives))
    return 0 if all_found and none_found else 1


if __name__ == "__main__":
    sys.exit(main(*map(int, sys.argv[1:])))
