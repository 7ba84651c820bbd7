"""Formulas of a laboratory: arithmetic and nothing else."""

from __future__ import annotations

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from analysis.formula import FUNCTIONS, parse_model

VALUES = {"a": 3.0, "b": 2.0}


@pytest.mark.parametrize(
    ("text", "value"),
    [
        ("a + b*2", 7.0),
        ("-(a - b)**2", -1.0),
        ("a/b", 1.5),
        ("sqrt(a + 1)", 2.0),
        ("log10(1e3)", 3.0),
        ("+a", 3.0),
    ],
)
def test_parse_model_computes_arithmetic(text: str, value: float) -> None:
    assert parse_model(text)(VALUES).real == pytest.approx(value)


@pytest.mark.parametrize("name", sorted(FUNCTIONS))
def test_parse_model_takes_complex_numbers_for_derivatives(name: str) -> None:
    model, step = parse_model(f"{name}(a)"), 1e-30
    slope = model({"a": complex(0.7, step)}).imag / step
    by_difference = (model({"a": 0.7 + 1e-6}) - model({"a": 0.7 - 1e-6})).real / 2e-6
    assert slope == pytest.approx(by_difference, rel=1e-7)


@pytest.mark.parametrize(
    "text",
    [
        "__import__('os')", "a.real", "a[0]", "lambda: 1", "a if b else 0", "open(a)", "sqrt(a, b)",
        "a @ b", "'a'",
        "True", "a; b", "", "(" * 600, "[a]", "a == b", "sqrt(x=a)", "not a", "1j",
    ],
)  # fmt: skip
def test_parse_model_refuses_anything_but_arithmetic(text: str) -> None:
    with pytest.raises(ValueError, match="Formula"):
        parse_model(text)


@pytest.mark.parametrize(("text", "what"), [("a/(b - 2)", "gives no number"), ("a*c", "uses 'c'")])
def test_parse_model_says_why_inputs_give_no_number(text: str, what: str) -> None:
    with pytest.raises(ValueError, match=what):
        parse_model(text)(VALUES)


@given(st.text(max_size=40))
def test_parse_model_refuses_or_reads_any_text(text: str) -> None:
    said = ""
    try:
        parse_model(text)
    except ValueError as refusal:
        said = str(refusal)
    assert said == "" or said.startswith("Formula")


def test_parse_model_keeps_the_order_of_powers() -> None:
    assert parse_model("2**3**2")({}).real == math.pow(2, 9)
