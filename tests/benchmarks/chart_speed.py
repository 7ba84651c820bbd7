"""How long charts of a million points take, beside a loop that a person would write.

Prints one line per chart and ends with 1 when the eight run rules together are less than 200 times faster
than the loop, or when both do not find the same points.
"""

from __future__ import annotations

import sys
import time
from collections.abc import Callable
from itertools import pairwise

import numpy as np

from analysis.ewma_cusum import cusum, ewma
from analysis.run_rules import RULES, flags_of

POINTS, LOOPED, SEED, WANTED = 1_000_000, 50_000, 20261124, 200.0


def by_loop(z: list[float]) -> list[list[int]]:
    """The points that break each of the eight rules, one point and one rule after the other."""
    found: list[list[int]] = [[] for _ in RULES]
    for end in range(1, len(z) + 1):
        for place, broken in enumerate(_broken(z, end)):
            if broken:
                found[place].append(end - 1)
    return found


def _broken(z: list[float], end: int) -> tuple[bool, ...]:
    last = z[end - 1]
    three, five, six, eight, nine, fourteen, fifteen = (z[max(0, end - n) : end] for n in (3, 5, 6, 8, 9, 14, 15))
    steps = [b - a for a, b in pairwise(fourteen)]
    turns = all(a * b < 0 for a, b in pairwise(steps))
    rises = [b - a for a, b in pairwise(six)]
    return (
        abs(last) > 3,
        len(nine) == 9 and (all(v > 0 for v in nine) or all(v < 0 for v in nine)),
        len(six) == 6 and (all(v > 0 for v in rises) or all(v < 0 for v in rises)),
        (last > 2 and sum(v > 2 for v in three) >= 2) or (last < -2 and sum(v < -2 for v in three) >= 2),
        (last > 1 and sum(v > 1 for v in five) >= 4) or (last < -1 and sum(v < -1 for v in five) >= 4),
        len(fourteen) == 14 and turns,
        len(fifteen) == 15 and all(abs(v) < 1 for v in fifteen),
        len(eight) == 8 and all(abs(v) > 1 for v in eight),
    )


def best_of(work: Callable[[], object], *, times: int = 5) -> float:
    """The shortest time of several [s]."""
    found = []
    for _ in range(times):
        start = time.perf_counter()
        work()
        found.append(time.perf_counter() - start)
    return min(found)


def main() -> int:
    """Print the table and say by the exit status whether it is as wanted."""
    z = np.random.default_rng(SEED).normal(0.1, 1, POINTS)
    part = z[:LOOPED]
    flags = flags_of(part, 0.0, 1.0, RULES)
    is_same = [np.flatnonzero(each).tolist() for each in flags.values()] == by_loop(part.tolist())
    loop = best_of(lambda: by_loop(part.tolist()), times=2) * POINTS / LOOPED
    rules = best_of(lambda: flags_of(z, 0.0, 1.0, RULES))
    print(f"{POINTS:,} points, seed {SEED}; the loop was timed on {LOOPED:,} of them")
    print(f"eight run rules      {1000 * rules:8.1f} ms   loop {loop:6.1f} s   {loop / rules:6.0f} times faster")
    print(f"EWMA with limits     {1000 * best_of(lambda: ewma(z, target=0, sigma=1)):8.1f} ms")
    print(f"CUSUM, both sides    {1000 * best_of(lambda: cusum(z, target=0, sigma=1)):8.1f} ms")
    print(f"same points as the loop: {'yes' if is_same else 'NO'}; at least {WANTED:g} times faster wanted")
    return 0 if is_same and loop / rules >= WANTED else 1


if __name__ == "__main__":
    sys.exit(main())
