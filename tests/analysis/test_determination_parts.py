"""Two endpoints of one titration as two results: against the published relationships and simulated mixtures."""

from __future__ import annotations

import math

import numpy as np
import pytest

from analysis.determination import compute
from analysis.determination_monte_carlo import check_by_monte_carlo
from analysis.simulate import grid, simulate_curve
from analysis.system import Analyte, System
from tests.support.determinations import Data, line, lines, method, run, solution, substance


def part(name: str, takes: str, formula: str = "CaCO3", molar_mass: str = "100.086", ratio: str = "1/2") -> Data:
    return {
        "name": name, "takes": takes, "formula": formula, "molar_mass": molar_mass, "u": "0.004", "ratio": ratio,
    }  # fmt: skip


KINDS = [part(kind, kind) for kind in ("hydroxide", "carbonate", "hydrogen carbonate")]
AS_CARBONATE: Data = {
    "titrant": solution("A1", "0.02"), "substance": substance("CaCO3", "100.086", "0.004"),
}  # fmt: skip


def alkalinity(first: str, end: str, **more: Data) -> Data:
    titrations = [line(number, end, amount="100.00", first_end=first) for number in (1, 2)]
    wanted = method(ratio="1/2", unit="mg/L", replicates_needed=2, parts=KINDS)
    return compute(run(titrations, method=wanted, **AS_CARBONATE, **more))


# Standard Methods for the Examination of Water and Wastewater, 2320 B: hydroxide, carbonate and bicarbonate as
# multiples of P and T for P = 0, P < T/2, P = T/2, P > T/2 and P = T.
@pytest.mark.parametrize(
    ("first", "end", "kinds"),
    [
        ("0.00", "8.00", (0.0, 0.0, 8.0)),
        ("2.00", "8.00", (0.0, 4.0, 4.0)),
        ("4.00", "8.00", (0.0, 8.0, 0.0)),
        ("5.00", "8.00", (2.0, 6.0, 0.0)),
        ("8.00", "8.00", (8.0, 0.0, 0.0)),
    ],
)
def test_parts_of_alkalinity_are_those_of_the_standard_methods(first, end, kinds) -> None:
    found = alkalinity(first, end)
    per_ml = 0.02 * 100.086 / 2 / 100 * 1000  # mg/L of calcium carbonate for 1 mL in 100 mL
    assert [item["value"] for item in found["parts"]] == pytest.approx([each * per_ml for each in kinds], abs=1e-9)
    assert sum(item["value"] for item in found["parts"]) == pytest.approx(found["value"], rel=1e-12)


def test_uncertainty_of_a_difference_has_both_endpoints() -> None:
    found = alkalinity("2.00", "8.00")
    carbonate, hydrogen = found["parts"][1:]
    per_ml = 0.02 * 100.086 / 2 / 100 * 1000
    tolerance = 0.05 / math.sqrt(6)  # triangular, the burette's at each endpoint
    reading = 0.05 / math.sqrt(12) * math.sqrt(2) / math.sqrt(2)  # rectangular, two readings, mean of two titrations
    others = math.hypot(0.0001 / 0.02, 0.01 / 100, 0.004 / 100.086)
    twice = math.hypot(2 * tolerance, 2 * reading, 4.0 * others)
    less = math.hypot(2 * tolerance, tolerance, math.hypot(2 * reading, reading), 4.0 * others)
    assert carbonate["u"] == pytest.approx(twice * per_ml, rel=1e-6)
    assert hydrogen["u"] == pytest.approx(less * per_ml, rel=1e-6)


def test_blank_belongs_to_the_last_endpoint() -> None:
    found = alkalinity("2.00", "8.00", blanks=lines(["0.10"], amount=None, first=3))
    per_ml = 0.02 * 100.086 / 2 / 100 * 1000
    assert [item["value"] / per_ml for item in found["parts"]] == pytest.approx([0, 4.0, 3.9], abs=1e-9)


def test_missing_first_endpoint_is_said_and_keeps_the_rest() -> None:
    wanted = method(ratio="1/2", unit="mg/L", replicates_needed=1, parts=KINDS)
    found = compute(run(lines(["8.00"], amount="100.00"), method=wanted, **AS_CARBONATE))
    assert found["value"] is not None
    assert found["parts"] == []
    assert not found["acceptable"]
    assert (
        "has 1 endpoint; hydroxide, carbonate, hydrogen carbonate need the first and the second" in found["reasons"][0]
    )


def test_first_endpoint_after_the_second_is_refused() -> None:
    with pytest.raises(ValueError, match=r"9\.00 mL at the first endpoint and 8\.00 mL"):
        alkalinity("9.00", "8.00")


def test_part_clearly_below_zero_is_flagged() -> None:
    wanted = method(ratio="1/2", unit="mg/L", replicates_needed=1,
                    parts=[part("sodium hydrogen carbonate", "second less twice first")])  # fmt: skip
    found = compute(run([line(1, "8.00", amount="100.00", first_end="5.00")], method=wanted, **AS_CARBONATE))
    assert found["parts"][0]["value"] < 0
    assert "Sodium hydrogen carbonate is below zero" in found["flags"][0]


def test_two_acids_of_one_curve_are_two_results() -> None:
    acids = (Analyte("strong", ()), Analyte("pKa 6", (6.0,)))
    system = System("acid_base", "base", 0.1, 60.0, acids)
    volumes = np.union1d(grid(end=26.0, near=8.0), grid(end=26.0, near=18.0))
    titrations, generator = [], np.random.default_rng(6)
    for number in (1, 2, 3):
        simulated = simulate_curve(system, amounts=[0.8, 1.0], volumes=volumes, noise=0.01, generator=generator)
        recorded = {"volume": [repr(float(v)) for v in volumes],
                    "reading": [repr(float(y)) for y in simulated]}  # fmt: skip
        titrations.append(line(number, None, amount="20.00", start=None, curve=recorded))
    wanted = method(
        unit="mol/L", quantity="amount_concentration",
        curve={"quantity": "pH", "deciding": "model", "checking": None, "fixed_reading": None, "expected": 2,
               "chosen": 2, "agreement_limit": "3", "system": system.to_json()},
        parts=[part("strong acid", "first", "HCl", "36.46", "1"),
               part("weak acid", "second less first", "C2H4O2", "60.052", "1")],
    )  # fmt: skip
    found = compute(run(titrations, method=wanted))
    truth = np.array([0.8, 1.0]) / 20.0
    for item, true in zip(found["parts"], truth, strict=True):
        assert abs(item["value"] - true) < item["U"]
        assert item["U"] < 0.01 * true


def test_parts_are_drawn_too() -> None:
    ends = [("2.00", "8.00"), ("2.02", "8.01"), ("1.99", "7.98")] * 4
    titrations = [line(n, end, amount="100.00", first_end=first) for n, (first, end) in enumerate(ends, start=1)]
    wanted = method(ratio="1/2", unit="mg/L", parts=KINDS)
    inputs = run(titrations, method=wanted, **AS_CARBONATE)
    by_budget = {part["name"]: part for part in compute(inputs)["parts"]}
    drawn = check_by_monte_carlo(inputs, seed=5, most_draws=200_000)["parts"]
    assert [part["name"] for part in drawn] == ["carbonate", "hydrogen carbonate"]  # hydroxide is none, without doubt
    for part in drawn:
        assert part["value"] == pytest.approx(by_budget[part["name"]]["value"], rel=1e-4)
        assert part["u"] == pytest.approx(by_budget[part["name"]]["u"], rel=0.02)
        assert part["interval"] == pytest.approx(part["budget_interval"], abs=0.1 * part["budget_u"])
