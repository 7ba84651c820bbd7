"""Nothing is cut or rounded on the way into a record, and a number can be opened again."""

from __future__ import annotations

from decimal import Decimal as D

import pytest

from labrecords.models import Substance
from labrecords.rules.fit import objections_to_fit
from labrecords.rules.identifier import TAKEN_BY_ADDRESSES, objections_to_identifier
from labrecords.urls import urlpatterns


def test_objections_to_fit_is_silent_where_all_fits() -> None:
    assert objections_to_fit(Substance(name="salt", formula="NaCl", density=D("2.165"))) == []


@pytest.mark.parametrize(
    ("density", "sentence"),
    [
        ("2.16512", "Density is 2.16512: up to 4 decimals are kept."),
        ("10000", "Density is 10000: up to 4 digits before the decimal mark are kept."),
        ("NaN", "Density is NaN, which is no number. A number such as 12.30 is expected."),
    ],
)
def test_objections_to_fit_names_the_number(density: str, sentence: str) -> None:
    assert objections_to_fit(Substance(name="salt", formula="NaCl", density=D(density))) == [sentence]


def test_objections_to_fit_counts_the_characters() -> None:
    found = objections_to_fit(Substance(name="s" * 121, formula="NaCl"))
    assert len(found) == 1
    assert found[0].endswith("121 characters: up to 120 are kept.")


@pytest.mark.parametrize("text", ["N26-117", "KHP 26.01", "B-07", "7", "Ä-1", "NaOH-0.1+", "Ca2+"])
def test_objections_to_identifier_lets_labels_through(text: str) -> None:
    assert objections_to_identifier(text, field="Number", known=[]) == []


@pytest.mark.parametrize("text", ["a/b", "..", "-1", "a?b", "a#b", "a%b", "a\\b", "a\nb", " a", "a ", "<b>", "a."])
def test_objections_to_identifier_refuses_what_an_address_cannot_carry(text: str) -> None:
    (sentence,) = objections_to_identifier(text, field="Number", known=[])
    assert sentence.startswith("Number is “")


def test_objections_to_identifier_refuses_the_same_in_other_letters() -> None:
    found = objections_to_identifier("n26-117", field="Number", known=["N26-117"])
    assert found == ["Number: N26-117 is recorded already. Open it, or choose another."]


def test_every_word_that_stands_in_the_place_of_a_number_is_taken() -> None:
    routes = [str(pattern.pattern).strip("/").split("/") for pattern in urlpatterns]
    with_number = {route[0] for route in routes if len(route) == 2 and route[1].startswith("<str:")}
    words = {route[1] for route in routes if len(route) > 1 and route[0] in with_number}
    assert {"record", "certificates"} <= words
    assert {word for word in words if not word.startswith("<")} <= TAKEN_BY_ADDRESSES
