"""The chemistry as data: round trip, and what is refused."""

from __future__ import annotations

from typing import Any

import pytest

from analysis.equivalence import equivalence_steps
from analysis.system import Analyte, System

ACETIC: dict[str, Any] = {
    "kind": "acid_base", "titrant": "base", "titrant_concentration": "0.1", "sample_volume": 50,
    "analytes": [{"name": "acetic acid", "pKa": ["4.756"], "charge": 0}],
}  # fmt: skip


def test_from_json_takes_back_what_to_json_gives() -> None:
    system = System(
        "redox", "oxidant", 0.02, 50.0, (Analyte("iron(II)", potential=680.0),), temperature=20.0,
        titrant_potential=1440.0, titrant_electrons=1,
    )  # fmt: skip
    assert System.from_json(system.to_json()) == system


def test_from_json_reads_numbers_written_as_text() -> None:
    system = System.from_json(ACETIC)
    assert (system.titrant_concentration, system.analytes[0].pKa) == (0.1, (4.756,))


@pytest.mark.parametrize(
    ("change", "sentence"),
    [
        ({"kind": "magic"}, "Kind of system is 'magic'; expected one of acid_base"),
        ({"titrant": "silver"}, "Titrant is 'silver'; expected base or acid"),
        ({"titrant_concentration": "-0.1"}, "Titrant concentration is -0.1; a number above 0"),
        ({"sample_volume": "much"}, "Sample volume is 'much'; a number is expected"),
        ({"sample_volume": "nan"}, "Sample volume is 'nan'; a finite number is expected"),
        ({"analytes": []}, "0 analytes are given; 1 to 3"),
        ({"analytes": [{"name": "a", "pKa": [40]}]}, "pKa of a is 40; -3 to 16 is expected"),
        ({"analytes": [{"name": "a", "pKa": [4], "lost": 2}]}, "Protons lost of a are 2; 0 to 1"),
        ({"analytes": [{"pKa": [4]}]}, "says nothing about 'name'"),
        ({"colour": "pink"}, "The chemistry has 'colour'"),
        ({"carbonate": 0.9}, "Carbonate is 0.9; 0 to 0.5 is expected"),
        ({"temperature": 90}, "Temperature is 90.0; 0 to 60 is expected"),
        ({"kind": "precipitation", "titrant": "silver"}, "pKs of acetic acid is not given"),
    ],
)
def test_from_json_refuses_by_name_and_value(change: dict[str, Any], sentence: str) -> None:
    with pytest.raises(ValueError, match=sentence.replace("(", r"\(")):
        System.from_json(ACETIC | change)


def jumps(titrant: str, *analytes: Analyte) -> list[bool]:
    return [step.is_jump for step in equivalence_steps(System("acid_base", titrant, 0.1, 50.0, analytes))]


def test_equivalence_steps_of_phosphoric_acid_jump_twice() -> None:
    assert jumps("base", Analyte("phosphoric acid", (2.148, 7.198, 12.35))) == [True, True, False]


def test_equivalence_steps_of_citric_acid_jump_at_the_last_proton() -> None:
    assert jumps("base", Analyte("citric acid", (3.128, 4.761, 6.396))) == [False, False, True]


def test_equivalence_steps_of_carbonate_with_acid_jump_twice() -> None:
    assert jumps("acid", Analyte("carbonate", (6.352, 10.329))) == [True, True]


def test_equivalence_steps_pass_the_stronger_acid_first() -> None:
    system = System("acid_base", "base", 0.1, 50.0, (Analyte("weak", (4.756,)), Analyte("strong")))
    assert [(step.analyte, step.share) for step in equivalence_steps(system)] == [
        ("strong", (0.0, 1.0)),
        ("weak", (1.0, 1.0)),
    ]


def test_equivalence_steps_of_hydrogen_phthalate_count_the_proton_that_is_left() -> None:
    system = System("acid_base", "base", 0.1, 50.0, (Analyte("phthalic acid", (2.95, 5.408), lost=1),))
    assert [step.share for step in equivalence_steps(system)] == [(1.0,)]
