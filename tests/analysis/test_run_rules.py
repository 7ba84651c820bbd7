"""Run rules: against a loop that reads like the rule, one by one, and fast."""

from __future__ import annotations

import math
import time
from collections.abc import Callable
from itertools import pairwise

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from analysis.run_rules import OTHER_RULES, REACH, RULES, flags_of, signals, signals_at_last

POINTS = st.lists(st.sampled_from([-3.2, -2.4, -1.5, -0.6, 0.0, 0.4, 1.2, 1.6, 2.1, 3.4]), max_size=60)
Window = Callable[[list[float]], bool]


def _side(of: list[float], keep: Callable[[float], bool]) -> bool:
    return all(keep(z) for z in of) or all(keep(-z) for z in of)


def _some(of: list[float], count: int, sigmas: float) -> bool:
    up = of[-1] > sigmas and sum(z > sigmas for z in of) >= count
    return up or (of[-1] < -sigmas and sum(z < -sigmas for z in of) >= count)


def _trend(of: list[float]) -> bool:
    return all(b > a for a, b in pairwise(of)) or all(b < a for a, b in pairwise(of))


def _zigzag(of: list[float]) -> bool:
    steps = [b - a for a, b in pairwise(of)]
    return all(a * b < 0 for a, b in pairwise(steps))


# Each rule as a sentence about the last points: how many it needs, and what must hold for them.
BY_LOOP: dict[str, tuple[int, bool, Window]] = {
    "one point beyond three sigma": (1, True, lambda w: abs(w[-1]) > 3),
    "nine points in a row on one side": (9, True, lambda w: _side(w, lambda z: z > 0)),
    "six points in a row rising or falling": (6, True, _trend),
    "two of three beyond two sigma": (3, False, lambda w: _some(w, 2, 2)),
    "four of five beyond one sigma": (5, False, lambda w: _some(w, 4, 1)),
    "fourteen points alternating": (14, True, _zigzag),
    "fifteen points within one sigma": (15, True, lambda w: all(abs(z) < 1 for z in w)),
    "eight points beyond one sigma": (8, True, lambda w: all(abs(z) > 1 for z in w)),
    "one point beyond two sigma": (1, True, lambda w: abs(w[-1]) > 2),
    "seven points in a row on one side": (7, True, lambda w: _side(w, lambda z: z > 0)),
    "eight points in a row on one side": (8, True, lambda w: _side(w, lambda z: z > 0)),
    "seven points in a row rising or falling": (7, True, _trend),
}


def by_loop(z: list[float], name: str) -> list[int]:
    length, needs_all, holds = BY_LOOP[name]
    found = []
    for end in range(1, len(z) + 1):
        window = z[max(0, end - length) : end]
        if (len(window) == length or not needs_all) and holds(window):
            found.append(end - 1)
    return found


@settings(max_examples=150)
@given(POINTS)
def test_signals_are_those_of_a_plain_loop(z: list[float]) -> None:
    found = signals(z, centre=0, sigma=1, rules=BY_LOOP)
    for name in BY_LOOP:
        assert found.get(name, []) == by_loop(z, name), name


def test_every_rule_is_compared_with_its_loop() -> None:
    assert set(BY_LOOP) == set(RULES) | set(OTHER_RULES)


def test_only_the_rules_that_are_switched_on_can_signal() -> None:
    z = [4.0] * 20
    assert list(signals(z, centre=0, sigma=1, rules=["one point beyond three sigma"])) == [
        "one point beyond three sigma"
    ]


def test_signals_are_the_same_for_values_and_for_their_mirror_image() -> None:
    z = np.random.default_rng(1).normal(size=5000)
    assert signals(z, centre=0, sigma=1, rules=RULES) == signals(-z, centre=0, sigma=1, rules=RULES)


def test_signals_at_last_are_those_of_the_whole_series() -> None:
    z = np.random.default_rng(5).normal(0.4, 1.2, 600).tolist()
    whole = flags_of(z, 0, 1, RULES)
    for end in range(1, len(z) + 1):
        tail = z[max(0, end - REACH) : end]
        expected = tuple(name for name in RULES if whole[name][end - 1])
        assert signals_at_last(tail, centre=0, sigma=1, rules=RULES) == expected


def test_a_million_points_under_eight_rules_are_200_times_faster_than_a_loop() -> None:
    z = np.random.default_rng(7).normal(size=1_000_000)
    flags_of(z[:1000], 0, 1, RULES)
    quick = min(_seconds(lambda: flags_of(z, 0, 1, RULES)) for _ in range(3))
    part = z[:2000].tolist()
    loop = min(_seconds(lambda: [by_loop(part, name) for name in RULES]) for _ in range(3))
    assert loop * (z.size / len(part)) > 200 * quick


def _seconds(work: Callable[[], object]) -> float:
    start = time.perf_counter()
    work()
    return time.perf_counter() - start


@pytest.mark.parametrize(
    ("changes", "what"),
    [
        ({"sigma": 0.0}, "Sigma is 0.0"), ({"sigma": math.nan}, "Sigma is nan"),
        ({"centre": math.inf}, "Centre is inf"),
        ({"values": [1.0, math.nan]}, "Value 2 of the chart is nan"),
        ({"rules": ["a hunch"]}, "Rule is 'a hunch'"),
    ],
)  # fmt: skip
def test_signals_refuse_by_name_and_value(changes: dict[str, object], what: str) -> None:
    arguments = {"values": [1.0], "centre": 0.0, "sigma": 1.0, "rules": list(RULES), **changes}
    with pytest.raises(ValueError, match=what):
        signals(arguments.pop("values"), **arguments)


def test_signals_of_no_points_are_none() -> None:
    assert signals([], centre=0, sigma=1, rules=RULES) == {}
