"""Plausibility of readings; what is usual is common practice of the trade."""

from __future__ import annotations

from datetime import date
from decimal import Decimal

import pytest

from labrecords.rules.readings import (
    day,
    objections_to_burette_reading,
    objections_to_concentration,
    objections_to_date,
    objections_to_millivolts,
    objections_to_order,
    objections_to_ph,
    objections_to_purity,
    objections_to_sample_amount,
    objections_to_slope,
    objections_to_temperature,
    remarks_on_burette_reading,
    remarks_on_sample_amount,
    remarks_on_temperature,
)

TODAY = date(2026, 12, 1)


def burette(start: str | None, end: str | None, *, resolution: str = "0.050000") -> list[str]:
    return objections_to_burette_reading(
        None if start is None else Decimal(start), None if end is None else Decimal(end),
        capacity=Decimal("50.0000"), resolution=Decimal(resolution), burette="B-07",
    )  # fmt: skip


@pytest.mark.parametrize(
    ("start", "end"),
    [("0.00", "10.00"), ("0.05", "50.00"), (None, "12.3"), ("3.10", None), (None, None), ("0", "0")],
)
def test_objections_to_burette_reading_lets_plausible_ones_pass(start: str | None, end: str | None) -> None:
    assert burette(start, end) == []


def test_objections_to_burette_reading_names_an_end_below_its_start() -> None:
    (sentence,) = burette("12.40", "3.20")
    assert sentence.startswith("End is 3.20 mL, below the start at 12.40 mL")


def test_objections_to_burette_reading_names_60_mL_from_a_50_mL_burette() -> None:
    (sentence,) = burette("0.00", "60.00")
    assert sentence.startswith("End is 60.00 mL; burette B-07 ends at 50 mL.")


def test_objections_to_burette_reading_names_a_negative_one() -> None:
    assert burette("-0.10", "3.00") == ["Start is -0.10 mL; a burette reading is 0 mL or more."]


def test_objections_to_burette_reading_names_more_places_than_can_be_read() -> None:
    (sentence,) = burette("0.00", "12.345")
    assert sentence.startswith("End is 12.345 mL; burette B-07 is read to 0.05 mL, which is two decimals.")
    assert burette("0.00", "12.345", resolution="0.001") == []


def test_objections_to_burette_reading_names_what_is_no_number() -> None:
    assert burette("NaN", None) == ["Start is NaN, which is no number; a burette reading such as 12.30 mL is expected."]


def test_remarks_on_burette_reading_sees_a_reading_cut_short() -> None:
    fine = Decimal("0.05")
    (sentence,) = remarks_on_burette_reading(Decimal("12.3"), field="End", resolution=fine)
    assert sentence.startswith("End is 12.3 mL with one decimal")
    assert remarks_on_burette_reading(Decimal("12.30"), field="End", resolution=fine) == []


def test_objections_to_sample_amount_recognizes_milligrams_typed_as_grams() -> None:
    (sentence,) = objections_to_sample_amount(Decimal("250.3"), unit="g", expected=Decimal("0.2500"))
    assert "about 0.25 g is expected" in sentence
    assert "250.3 mg would be 0.2503 g" in sentence


def test_objections_to_sample_amount_recognizes_litres_typed_as_millilitres() -> None:
    (sentence,) = objections_to_sample_amount(Decimal("0.010"), unit="mL", expected=Decimal(10))
    assert "0.010 L would be 10 mL" in sentence


@pytest.mark.parametrize("amount", ["0.0125", "0.25", "5.0"])
def test_objections_to_sample_amount_allows_a_twentieth_to_twenty_times(amount: str) -> None:
    assert objections_to_sample_amount(Decimal(amount), unit="g", expected=Decimal("0.25")) == []


@pytest.mark.parametrize("amount", ["0", "-1.0", "NaN", "0.0124", "5.1"])
def test_objections_to_sample_amount_refuses_what_cannot_be(amount: str) -> None:
    (sentence,) = objections_to_sample_amount(Decimal(amount), unit="g", expected=Decimal("0.25"))
    assert "about 0.25 g" in sentence


def test_objections_to_sample_amount_minds_what_the_instrument_takes() -> None:
    (sentence,) = objections_to_sample_amount(Decimal(230), unit="g", expected=Decimal(150), capacity=Decimal("220.00"))
    assert "takes up to 220 g" in sentence


def test_remarks_on_sample_amount_start_beyond_half_the_usual() -> None:
    usual = Decimal("10.00")
    assert remarks_on_sample_amount(Decimal("15.00"), unit="mL", expected=usual) == []
    assert len(remarks_on_sample_amount(Decimal("15.01"), unit="mL", expected=usual)) == 1


@pytest.mark.parametrize(("typed", "scale"), [("294.7", "kelvin would be 21.6 °C"), ("70.9", "°F would be 21.6 °C")])
def test_objections_to_temperature_recognizes_other_scales(typed: str, scale: str) -> None:
    (sentence,) = objections_to_temperature(Decimal(typed))
    assert sentence.endswith(f"{typed} {scale}.")


def test_objections_to_temperature_lets_a_room_pass_and_no_oven() -> None:
    assert objections_to_temperature(Decimal("21.5")) == []
    assert objections_to_temperature(Decimal(215)) == ["Temperature is 215 °C; 5 to 40 °C is expected."]
    assert remarks_on_temperature(Decimal("21.5")) == []
    assert len(remarks_on_temperature(Decimal(35))) == 1


def test_objections_to_ph_refuses_19_and_recognizes_millivolts() -> None:
    assert objections_to_ph(Decimal("8.20")) == []
    assert objections_to_ph(Decimal(19)) == ["pH is 19; 0 to 14 is expected."]
    assert objections_to_ph(Decimal(-177))[0].endswith("It looks like millivolts.")


def test_objections_to_date_refuses_tomorrow_where_it_makes_no_sense() -> None:
    tomorrow = date(2026, 12, 2)
    (sentence,) = objections_to_date(tomorrow, today=TODAY, field="Received on", may_be_future=False)
    assert sentence == "Received on is 2 Dec 2026, after today, 1 Dec 2026. A day up to today is expected."
    assert objections_to_date(tomorrow, today=TODAY, field="Expires on", may_be_future=True) == []
    assert objections_to_date(TODAY, today=TODAY, field="Received on", may_be_future=False) == []


@pytest.mark.parametrize("year", [226, 1926, 2062])
def test_objections_to_date_asks_about_a_far_year(year: int) -> None:
    (sentence,) = objections_to_date(date(year, 5, 4), today=TODAY, field="Expires on", may_be_future=True)
    assert sentence.endswith("Check the year.")


def test_objections_to_order_names_both_days() -> None:
    names = {"earlier_field": "Prepared on", "later_field": "Expires on"}
    assert objections_to_order(TODAY, TODAY, **names) == [
        "Expires on is 1 Dec 2026; a day after prepared on, 1 Dec 2026, is expected."
    ]
    assert objections_to_order(TODAY, date(2027, 1, 1), **names) == []


def test_objections_to_purity_recognizes_a_percentage() -> None:
    (sentence,) = objections_to_purity(Decimal("99.98"))
    assert sentence.endswith("99.98 % is written 0.9998.")
    assert objections_to_purity(Decimal("0.9998")) == []


def test_objections_of_meters_and_concentrations_name_the_expected_range() -> None:
    assert objections_to_slope(Decimal("98.2")) == []
    assert objections_to_slope(Decimal("5.9")) == ["Electrode slope is 5.9 %; 50 to 120 % is expected."]
    assert objections_to_millivolts(Decimal(2500)) == ["Potential is 2500 mV; -2000 to 2000 mV is expected."]
    assert "100 mmol/L would be 0.1 mol/L" in objections_to_concentration(Decimal(100), nominal=Decimal("0.1"))[0]


def test_day_is_written_without_a_leading_zero() -> None:
    assert day(date(2026, 12, 1)) == "1 Dec 2026"
