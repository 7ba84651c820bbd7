"""Chemistry as lines of text: what is typed comes back, what is odd is named by its line."""

from __future__ import annotations

import pytest
from django import forms

from analysis.system import System
from labrecords.forms.endpoint_rule import ChemistryField
from labrecords.queries.chemistry import objections_to_chemistry

FIELD = ChemistryField(label="Chemistry")
PHTHALATE = "acid_base by base\nhydrogen phthalate: pKa 2.95 5.408, lost 1\ncarbonate 0.001\nactivity no"
CHLORIDE = "precipitation by silver\nchloride: charge -1, pKs 9.752"
CERIUM = "redox by oxidant\niron: potential 680\ntitrant_potential 1440"


@pytest.mark.parametrize("typed", [PHTHALATE, CHLORIDE, CERIUM])
def test_lines_become_a_chemistry_and_lines_again(typed: str) -> None:
    found = FIELD.clean(typed)
    assert objections_to_chemistry(found) == []
    assert FIELD.clean(FIELD.prepare_value(found)) == found
    assert System.from_json({**found, "titrant_concentration": 0.1, "sample_volume": 50}).kind == found["kind"]


def test_constants_are_those_typed() -> None:
    found = FIELD.clean(PHTHALATE)
    assert found["analytes"] == [{"name": "hydrogen phthalate", "pKa": [2.95, 5.408], "lost": 1}]
    assert (found["carbonate"], found["activity"]) == (0.001, False)


@pytest.mark.parametrize("typed", ["", "  \n ", None])
def test_nothing_typed_is_no_chemistry(typed: str | None) -> None:
    assert FIELD.clean(typed) is None
    assert FIELD.prepare_value(None) == ""


@pytest.mark.parametrize(
    ("typed", "sentence"),
    [
        ("acid_base", "line 1 is “acid_base”; the kind and the titrant"),
        ("acid_base by base\nacetic acid: 4.756", "line 2 is “4.756”; one of pKa, charge"),
        ("acid_base by base\nacetic acid: pKa four", "line 2, pKa is “four”"),
        ("acid_base by base\nacetic acid: charge 0.5", "charge and one whole number is expected"),
        ("acid_base by base\nacetic acid: pKa 4.756\ntemper 25", "line 3 is “temper 25”; one of carbonate"),
    ],
)
def test_odd_line_is_named(typed: str, sentence: str) -> None:
    with pytest.raises(forms.ValidationError, match=sentence):
        FIELD.clean(typed)


@pytest.mark.parametrize(
    ("typed", "sentence"),
    [
        ("acid_base by silver\nacetic acid: pKa 4.756", "Titrant is 'silver'"),
        ("precipitation by silver\nchloride: charge -1", "pKs of chloride is not given"),
        ("acid_base by base", "0 analytes are given"),
        ("acid_base by base\nx: pKa 99", "pKa of x is 99"),
    ],
)
def test_what_the_model_cannot_fit_is_said_before_a_titration(typed: str, sentence: str) -> None:
    assert sentence in objections_to_chemistry(FIELD.clean(typed))[0]


@pytest.mark.parametrize("odd", ["abc", [1], 7, {"kind": "acid_base", "titrant": "base", "analytes": ["x"]},
                                 {"kind": "acid_base", "titrant": "base", "analytes": 3}, {}])  # fmt: skip
def test_chemistry_of_another_shape_is_refused_in_a_sentence(odd) -> None:
    (sentence,) = objections_to_chemistry(odd)
    assert sentence.startswith("Chemistry for the model")
