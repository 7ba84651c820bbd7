"""Numbers, units and moments as they are written."""

from datetime import UTC, date, datetime
from decimal import Decimal
from zoneinfo import ZoneInfo

import pytest

from labrecords import writing


@pytest.mark.parametrize(
    ("value", "digits", "written"),
    [
        (6.113, 2, "6.11"),
        ("6.105", 2, "6.11"),  # a half goes up, as on paper
        (2.675, 2, "2.68"),  # a float is taken as it is printed, not as it is stored
        (-0.12, 1, "−0.1"),
        (-0.04, 1, "0.0"),  # no minus sign before nothing
        (12, 3, "12.000"),
        (float("nan"), 2, "not a number"),
    ],
)
def test_places_writes_so_many_decimals(value, digits, written):
    assert writing.places(value, digits=digits) == written


@pytest.mark.parametrize("typed", ["0.05", "12.30", "12.3", "0.00", "1000"])
def test_reading_keeps_the_digits_that_were_typed(typed):
    assert writing.reading(Decimal(typed)) == typed


def test_reading_writes_no_exponent():
    assert writing.reading(1e-7) == "0.0000001"


def test_pointed_numbers_have_one_width():
    written = [writing.pointed(text, digits=3) for text in ("10.125", "10.1", "10")]
    assert {len(text) for text in written} == {6}
    assert written[1].rstrip(writing.FIGURE_SPACE) == "10.1"


# 7.2.6 of JCGM 100:2008 (GUM): usually two significant digits of an uncertainty suffice, and the value is
# rounded to be consistent with it.
@pytest.mark.parametrize(
    ("value", "expanded", "written"),
    [
        (6.11312, 0.0338, "6.113 ± 0.034"),
        (0.102143, 0.0002, "0.10214 ± 0.00020"),
        (6.11312, 0.0996, "6.11 ± 0.10"),  # rounding the uncertainty up takes a digit away
        (98.94, 12.4, "99 ± 12"),
        (1234.5, 120.0, "1235 ± 120"),  # never fewer digits than units
    ],
)
def test_result_has_the_digits_that_its_uncertainty_allows(value, expanded, written):
    assert writing.result(value, expanded=expanded) == written


def test_result_keeps_its_unit_on_the_same_line():
    assert writing.result(6.113, expanded=0.034, unit="g/L").endswith("0.034\N{NO-BREAK SPACE}g/L")


@pytest.mark.parametrize(("value", "written"), [(0.0173, "0.017"), (0.0, "0"), (123.4, "123"), (2.0, "2.0")])
def test_significant_writes_two_figures(value, written):
    assert writing.significant(value) == written


@pytest.mark.parametrize(
    ("value", "written"),
    [(1.0, "over 99.9 %"), (0.99951, "over 99.9 %"), (0.9994, "99.9 %"), (0.0, "under 0.1 %")],
)
def test_probability_never_claims_certainty(value, written):
    assert writing.probability(value).replace(writing.NO_BREAK, " ") == written


def test_day_is_written_in_words():
    assert writing.day(date(2026, 11, 24)).replace(writing.NO_BREAK, " ") == "24 Nov 2026"


def test_when_names_its_zone():
    moment = datetime(2026, 7, 1, 8, 42, tzinfo=UTC).astimezone(ZoneInfo("Europe/London"))
    assert writing.when(moment).replace(writing.NO_BREAK, " ") == "1 Jul 2026 09:42 BST"


def test_steps_are_round_numbers_within_the_scale():
    assert writing.steps(9.95, 10.6, about=4) == [10.0, 10.2, 10.4, 10.6]


def test_steps_of_no_width_are_one():
    assert writing.steps(5.0, 5.0, about=4) == [5.0]
