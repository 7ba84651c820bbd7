"""Named calculations: replicates, outlier tests, straight lines and groups."""

from __future__ import annotations

from dataclasses import asdict
from typing import Any

from analysis.calculation import Calculation, Field, Inputs, optional
from analysis.formula import parse_model
from analysis.groups import one_way
from analysis.nonlinear import fit_formula
from analysis.outlier_critical import opposite_critical, pair_critical
from analysis.outliers import (
    OutlierTest,
    dixon,
    dixon_critical,
    dixon_ratio,
    esd,
    grubbs,
    grubbs_critical,
    grubbs_opposite,
    grubbs_pair,
)
from analysis.regression import straight_line
from analysis.replicates import concordant_set, lag_1_autocorrelation, spread

VALUES = Field("values", "any", "the values, in the order they were obtained")
ALPHA = optional("alpha", "", "significance level, 0.05 when left out")
SIDES = optional("sides", "", "1 or 2, 2 when left out")
COUNT = Field("n", "", "number of values")


def _replicates(inputs: Inputs) -> dict[str, Any]:
    return asdict(spread(inputs["values"]))


def _concordance(inputs: Inputs) -> dict[str, Any]:
    found = concordant_set(inputs["values"], limit=float(inputs["limit"]))
    inside = [found.values[place] for place in found.indices]
    return {
        "places": [place + 1 for place in found.indices], "range": found.range, "mean": spread(inside).mean,
        "sentence": found.tie_sentence,
    }  # fmt: skip


def _test(found: OutlierTest) -> dict[str, Any]:
    return {
        "test": found.test, "suspect": found.suspect, "statistic": found.statistic,
        "critical": found.critical,
        "is_beyond": found.is_beyond, "sentence": found.sentence,
    }  # fmt: skip


def _alpha(inputs: Inputs) -> float:
    return float(inputs.get("alpha", 0.05))


def _dixon(inputs: Inputs) -> dict[str, Any]:
    sides, ratio = int(inputs.get("sides", 2)), inputs.get("ratio")
    return _test(dixon(inputs["values"], alpha=_alpha(inputs), sides=sides, ratio=ratio))


def _dixon_critical(inputs: Inputs) -> float:
    ratio = inputs.get("ratio") or dixon_ratio(int(inputs["n"]))
    return dixon_critical(int(inputs["n"]), _alpha(inputs), int(inputs.get("sides", 2)), ratio)


def _grubbs(inputs: Inputs) -> dict[str, Any]:
    return _test(grubbs(inputs["values"], alpha=_alpha(inputs), sides=int(inputs.get("sides", 2))))


def _grubbs_critical(inputs: Inputs) -> float:
    return grubbs_critical(int(inputs["n"]), _alpha(inputs), int(inputs.get("sides", 2)))


def _pair(inputs: Inputs) -> dict[str, Any]:
    return _test(grubbs_pair(inputs["values"], alpha=_alpha(inputs), sides=int(inputs.get("sides", 2))))


def _esd(inputs: Inputs) -> dict[str, Any]:
    steps, count = esd(inputs["values"], most=int(inputs["most"]), alpha=_alpha(inputs))
    return {
        "outliers": count, "suspects": [step.suspect for step in steps],
        "statistics": [step.statistic for step in steps], "criticals": [step.critical for step in steps],
    }  # fmt: skip


def _formula_fit(inputs: Inputs) -> dict[str, Any]:
    model = parse_model(inputs["formula"])
    return asdict(fit_formula(model, x=inputs["x"], y=inputs["y"], start=inputs["start"]))


STATISTICS = (
    Calculation(
        "replicate_statistics", "Mean, standard deviation, relative standard deviation and range",
        (VALUES,), "n, mean, sd, rsd_percent [%], range", _replicates,
    ),
    Calculation(
        "concordance", "The largest set of values whose range is within a limit",
        (VALUES, Field("limit", "unit of the values", "largest range")), "places, range, mean, sentence",
        _concordance,
    ),
    Calculation(
        "autocorrelation", "Correlation of neighbouring values (lag 1)", (VALUES,), "the correlation",
        lambda inputs: lag_1_autocorrelation(inputs["values"]),
    ),
    Calculation(
        "dixon", "Dixon's test of the most extreme value",
        (VALUES, ALPHA, SIDES, optional("ratio", "", "r10, r11, r21 or r22; chosen when left out")),
        "test, suspect, statistic, critical, is_beyond, sentence", _dixon,
    ),
    Calculation(
        "dixon_critical", "Critical value of Dixon's ratio",
        (COUNT, ALPHA, SIDES, optional("ratio", "", "r10, r11, r21 or r22")), "the critical value",
        _dixon_critical,
    ),
    Calculation(
        "grubbs", "Grubbs' test of one outlier", (VALUES, ALPHA, SIDES),
        "test, suspect, statistic, critical, is_beyond, sentence", _grubbs,
    ),
    Calculation(
        "grubbs_critical", "Critical value of Grubbs' test of one outlier", (COUNT, ALPHA, SIDES),
        "the critical value", _grubbs_critical,
    ),
    Calculation(
        "grubbs_pair", "Grubbs' test of two outliers at one end", (VALUES, ALPHA, SIDES),
        "test, suspect, statistic, critical, is_beyond, sentence",
        _pair,
    ),
    Calculation(
        "grubbs_pair_critical", "Critical value of Grubbs' test of two outliers at one end",
        (COUNT, ALPHA, SIDES),
        "the critical value",
        lambda inputs: pair_critical(int(inputs["n"]), _alpha(inputs), int(inputs.get("sides", 2))),
    ),
    Calculation(
        "grubbs_opposite", "Grubbs' test of one outlier at each end", (VALUES, ALPHA),
        "test, suspect, statistic, critical, is_beyond, sentence",
        lambda inputs: _test(grubbs_opposite(inputs["values"], alpha=_alpha(inputs))),
    ),
    Calculation(
        "grubbs_opposite_critical", "Critical value of range over standard deviation", (COUNT, ALPHA),
        "the critical value", lambda inputs: opposite_critical(int(inputs["n"]), _alpha(inputs)),
    ),
    Calculation(
        "extreme_deviates", "The generalized extreme studentized deviate test of several outliers",
        (VALUES, Field("most", "", "largest number of outliers suspected"), ALPHA),
        "outliers, suspects, statistics, criticals", _esd,
    ),
    Calculation(
        "straight_line", "Least-squares line with the uncertainty of its coefficients",
        (Field("x", "any", "abscissae"), Field("y", "any", "ordinates")),
        "intercept, slope, u_intercept, u_slope, residual_sd, r_squared",
        lambda inputs: asdict(straight_line(inputs["x"], inputs["y"])),
    ),
    Calculation(
        "formula_fit", "Least-squares fit of a formula of x and named parameters",
        (
            Field("formula", "", "such as b1*(1 - exp(-b2*x))"), Field("x", "any", "abscissae"),
            Field("y", "any", "ordinates"), Field("start", "", "first guess of each parameter by name"),
        ),
        "parameters, u, residual_sd, n", _formula_fit,
    ),
    Calculation(
        "groups", "Spread within and between groups of results (analysis of variance, one way)",
        (Field("groups", "any", "a list of values per group"),),
        "f, p, repeatability_sd, between_sd, intermediate_sd",
        lambda inputs: asdict(one_way(inputs["groups"])),
    ),
)  # fmt: skip
