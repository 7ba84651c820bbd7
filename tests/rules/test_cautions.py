"""The usual cautions; what each class needs is common practice of the trade."""

from __future__ import annotations

import pytest

from labrecords.models.substance import Hazard
from labrecords.rules.cautions import BY_CLASS, STANDING, cautions_for


@pytest.mark.parametrize("name", sorted(BY_CLASS))
def test_cautions_for_each_class_say_something_and_end_with_the_standing_sentence(name: str) -> None:
    found = cautions_for([name])
    assert len(found) >= 3
    assert found[-1] == STANDING


def test_cautions_for_nothing_still_defer_to_the_safety_data_sheet() -> None:
    assert cautions_for([]) == [STANDING]
    assert "safety data sheet" in STANDING
    assert "safety officer" in STANDING


def test_cautions_for_acids_say_acid_into_water() -> None:
    assert any("acid into water" in sentence for sentence in cautions_for(["corrosive_acid"]))


def test_cautions_for_acid_and_base_together_add_the_heat_of_their_meeting() -> None:
    both = cautions_for(["corrosive_acid", "corrosive_base"])
    assert any("heat when they meet" in sentence for sentence in both)
    assert not any("heat when they meet" in sentence for sentence in cautions_for(["corrosive_base"]))


def test_cautions_for_carbonate_with_acid_warn_of_gas_and_foam() -> None:
    found = " ".join(cautions_for(["corrosive_acid", "gas_from_acid"]))
    assert "Gives off gas" in found
    assert "Foam" in found


def test_cautions_for_repeated_classes_are_said_once() -> None:
    assert cautions_for(["stains", "stains"]) == cautions_for(["stains"])


def test_cautions_for_an_unknown_class_refuse_to_pass_it_over() -> None:
    with pytest.raises(ValueError, match="'explosive'; expected one of corrosive_acid"):
        cautions_for(["explosive"])


def test_cautions_are_known_for_every_hazard_of_a_substance() -> None:
    assert set(BY_CLASS) == set(Hazard.values)
