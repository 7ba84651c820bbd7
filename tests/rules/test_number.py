"""Typed numbers."""

from __future__ import annotations

from decimal import Decimal

import pytest
from hypothesis import given
from hypothesis import strategies as st

from labrecords.rules.number import parse_number, places_of, shown


@pytest.mark.parametrize(
    ("typed", "kept"),
    [
        ("12.30", "12.30"),
        ("12,30", "12.30"),
        ("  7 ", "7"),
        ("\u00a00,05", "0.05"),
        (".5", "0.5"),
        ("-3,10", "-3.10"),
        ("\u221212.5", "-12.5"),
        ("+0.10", "0.10"),
        ("-0.00", "0.00"),
        ("007.10", "7.10"),
    ],
)
def test_parse_number_keeps_the_typed_places(typed: str, kept: str) -> None:
    assert str(parse_number(typed)) == kept


@pytest.mark.parametrize(
    ("typed", "part"),
    [
        ("", "is empty"),
        ("   ", "is empty"),
        ("1.234,5", "more than one decimal mark"),
        ("12..3", "more than one decimal mark"),
        ("1,2,3", "more than one decimal mark"),
        ("1e3", "exponent"),
        ("NaN", "no number"),
        ("-inf", "no number"),
        ("12.30 mL", "without its unit: 12.30"),
        ("21°C", "without its unit: 21"),
        ("1 234", "space inside"),
        ("12.", "ends in a decimal mark"),
        ("=1+1", "like a formula"),
        ("twelve", "not a number"),
        ("12-13", "not a number"),
        ("1_000", "not a number"),
        ("١٢", "not a number"),
        (".", "not a number"),
        ("1" * 16, "at most 15 digits"),
        ("0." + "1" * 16, "at most 15 digits"),
    ],
)
def test_parse_number_asks_with_a_sentence(typed: str, part: str) -> None:
    with pytest.raises(ValueError, match=r"^End reading is .*\.$") as caught:
        parse_number(typed, field="End reading")
    assert part in str(caught.value)


@given(st.text(max_size=60) | st.text("0123456789.,+- eE", max_size=20))
def test_parse_number_returns_a_finite_number_or_a_sentence(typed: str) -> None:
    try:
        value = parse_number(typed)
    except ValueError as error:
        value, sentence = Decimal(0), str(error)
    else:
        sentence = "The value is a number."
    assert value.is_finite()
    assert sentence.startswith("The value is ")


@given(st.decimals(min_value=-10000, max_value=10000, places=4))
def test_parse_number_reads_back_what_was_written(value: Decimal) -> None:
    written = format(value, "f")
    assert parse_number(written) == value
    assert places_of(parse_number(written.replace(".", ","))) == 4


def test_shown_cuts_long_text_and_hides_control_marks() -> None:
    assert shown("a" * 99) == "“" + "a" * 39 + "…”"
    assert "\x1b" not in shown("a\x1bb")
