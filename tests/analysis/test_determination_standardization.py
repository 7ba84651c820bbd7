"""Concentrations of titrants, and what a burette used twice does to a result."""

from __future__ import annotations

import math
from statistics import fmean, stdev

import pytest

from analysis.determination import compute
from tests.support.determinations import (
    by_mass,
    by_volume,
    line,
    lines,
    method,
    primary,
    run,
    solution,
    standardization,
)

WEIGHED = [("0.5105", "24.95"), ("0.5210", "25.45"), ("0.5010", "24.50")]


def by_phthalate(**more) -> dict:
    titrations = [line(k, end, amount=mass) for k, (mass, end) in enumerate(WEIGHED, start=1)]
    return compute(standardization(titrations, standard=primary(), sample=by_mass(), **more))


def test_compute_standardizes_by_mass() -> None:
    found = by_phthalate()
    each = [1000 * float(m) * 0.9998 / (204.222 * float(v)) for m, v in WEIGHED]
    assert [item["value"] for item in found["titrations"]] == pytest.approx(each, rel=1e-12)
    assert found["value"] == pytest.approx(fmean(each), rel=1e-12)
    assert found["factor"] == pytest.approx(fmean(each) / 0.1, rel=1e-12)
    assert found["unit"] == "mol/L"
    assert found["flags"] == []


def test_compute_uncertainty_of_a_standardization_by_hand() -> None:
    found = by_phthalate()
    each = [1000 * float(m) * 0.9998 / (204.222 * float(v)) for m, v in WEIGHED]
    c = fmean(each)
    weighing = fmean(one / float(m) for one, (m, _) in zip(each, WEIGHED, strict=True)) * 0.0001
    shift = fmean(one / float(v) for one, (_, v) in zip(each, WEIGHED, strict=True)) * 0.05 / math.sqrt(6)
    parts = [weighing, shift, c * 0.0002 / 0.9998, c * 0.004 / 204.222, stdev(each) / math.sqrt(3)]
    reading = fmean(one / float(v) for one, (_, v) in zip(each, WEIGHED, strict=True)) * 0.05 / math.sqrt(18)
    parts[-1] = max(parts[-1], reading)  # scatter contains the scatter of reading: the larger counts
    assert found["u"] == pytest.approx(math.hypot(*parts), rel=1e-9)


def test_compute_standardizes_by_a_titrant() -> None:
    standard = {"basis": "titrant", **solution("H1", "0.1000", "0.0001")}
    found = compute(
        standardization(lines(["24.90", "24.95", "24.85"], amount="25"), standard=standard, sample=by_volume())
    )
    assert found["value"] == pytest.approx(fmean(0.1 * 25 / v for v in (24.90, 24.95, 24.85)), rel=1e-12)
    keys = {item["key"] for item in found["budget"]}
    assert {"solution:H1", "pipette:P-1", "burette:B-1"} <= keys


def test_compute_says_that_a_concentration_is_outside_its_window() -> None:
    found = by_phthalate(window={"low": "0.0950", "high": "0.0990"})
    assert found["flags"] == [
        f"{found['value']:.5f} mol/L is outside the accepted 0.095 to 0.099 mol/L. "
        "Adjust the solution or prepare a new lot."
    ]


def with_components(*components: dict) -> dict:
    titrant = solution("N1", "0.1", "0.0001", components=list(components))
    return compute(run(lines(["16.75", "16.75", "16.75"], amount="10.00"), titrant=titrant))


def test_compute_counts_a_shared_burette_as_one_input() -> None:
    # Standardized with the burette of the run: a burette that delivers more than it shows makes c too low
    # and the titre too low, so both go the other way and nearly cancel.
    in_c, in_titre = -0.00008, 0.05 / math.sqrt(6)
    found = with_components({"key": "burette:B-1", "label": "burette B-1", "u": str(in_c), "degrees_of_freedom": None})
    shared = found["value"] * (in_c / 0.1 + in_titre / 16.75)  # signed, added before it is squared
    burette = [item for item in found["budget"] if item["key"] == "burette:B-1"]
    assert [item["contribution"] for item in burette] == pytest.approx([shared], rel=1e-9)


def test_compute_takes_a_shared_burette_as_less_uncertain_than_two() -> None:
    part = {"label": "burette", "u": "-0.00008", "degrees_of_freedom": None}
    shared, other = (with_components({**part, "key": key}) for key in ("burette:B-1", "burette:B-2"))
    in_c, in_titre = -0.00008 / 0.1, 0.05 / math.sqrt(6) / 16.75
    difference = other["u"] ** 2 - shared["u"] ** 2
    assert difference == pytest.approx(-2 * in_c * in_titre * shared["value"] ** 2, rel=1e-9)


def test_compute_keeps_what_the_components_do_not_explain() -> None:
    found = with_components({"key": "burette:B-2", "label": "burette B-2", "u": "0.00006", "degrees_of_freedom": None})
    rest = next(item for item in found["budget"] if item["key"] == "solution:N1")
    assert rest["u"] == pytest.approx(0.00008, rel=1e-9)  # 0.0001 squared less 0.00006 squared
    assert with_components()["u"] == pytest.approx(found["u"], rel=1e-9)


def test_compute_takes_one_lot_as_titrant_and_excess_as_one_input() -> None:
    excess = {**solution("H1", "0.1"), "volume": "50", "volume_u": "0", "key": "pipette:P-9"}
    settings = method(titration="back", replicates_needed=1)
    found = compute(
        run(lines(["20.00"], amount="10.00"), method=settings, excess=excess, titrant=solution("H1", "0.1"))
    )
    one = next(item for item in found["budget"] if item["key"] == "solution:H1")
    # Both volumes carry the same relative error of c, so the value does too.
    assert abs(one["contribution"]) == pytest.approx(found["value"] * 0.0001 / 0.1, rel=1e-9)


def test_compute_subtracts_an_indicator_only_where_no_blank_does() -> None:
    settings = method(indicator_bias_mL="0.04", indicator_u_mL="0.02")
    plain = compute(run(lines(["10.00"] * 3, amount="10"), method=settings))
    blank = compute(
        run(lines(["10.00"] * 3, amount="10"), method=settings, blanks=lines(["0.04"], amount=None, first=4))
    )
    assert plain["value"] == pytest.approx(0.1 * 9.96 / 10 * 60.052, rel=1e-12)
    assert blank["value"] == pytest.approx(plain["value"], rel=1e-12)
