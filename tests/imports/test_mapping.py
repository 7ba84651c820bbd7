"""Which column is the volume and which the reading."""

from __future__ import annotations

import pytest

from labrecords.errors import Refused
from labrecords.imports.mapping import Mapping, chosen_mapping, found_columns, propose_mapping
from labrecords.imports.table import Table, read_table


def read(text: str) -> Table:
    return read_table(text.encode(), name="curve.csv")


def proposed(text: str, *, wanted: str | None = None) -> tuple[int, int, str, str]:
    found = propose_mapping(read(text), wanted=wanted)
    return found.volume, found.reading, found.quantity, found.confidence


@pytest.mark.parametrize(
    ("headings", "expected"),
    [
        ("Volume [mL];pH", (1, 2, "pH", "sure")),
        ("V/mL;E/mV", (1, 2, "mV", "sure")),
        ("pH;Titrant added (mL)", (2, 1, "pH", "sure")),
        ("mL;mV", (1, 2, "mV", "sure")),
        ("Vol;Conductivity [µS/cm]", (1, 2, "conductivity", "sure")),
        ("vol_ml;Temperature, °C", (1, 2, "temperature", "sure")),
        ("Volume mL;Absorbance", (1, 2, "absorbance", "sure")),
        ("Volume;Signal", (1, 2, "pH", "likely")),
        ("first;second", (1, 2, "pH", "a guess")),
    ],
)
def test_propose_mapping_reads_headings_and_units(headings: str, expected: tuple[int, int, str, str]) -> None:
    rows = [(0.0, 3.1), (0.5, 3.4), (1.0, 3.9), (1.5, 5.0)]
    turn = expected[0] == 2
    lines = [f"{second};{first}" if turn else f"{first};{second}" for first, second in rows]
    assert proposed("\n".join([headings, *lines])) == expected


def test_propose_mapping_passes_over_index_time_and_derivative() -> None:
    text = "No;t/s;V/mL;pH;dpH/dV\n1;0;0.0;3.1;0.1\n2;30;0.5;3.2;0.2\n3;60;1.0;3.4;0.4\n"
    assert proposed(text) == (3, 4, "pH", "sure")


def test_propose_mapping_prefers_the_quantity_of_the_method() -> None:
    text = "V/mL;E/mV;pH;T/°C\n0;177;4.0;21.0\n1;170;4.1;21.1\n2;160;4.3;21.1\n"
    assert proposed(text, wanted="pH")[:3] == (1, 3, "pH")
    assert proposed(text, wanted="mV")[:3] == (1, 2, "mV")
    assert proposed(text, wanted="temperature")[:3] == (1, 4, "temperature")


def test_propose_mapping_guesses_from_values_when_nothing_is_named() -> None:
    assert proposed("0.0;177.1\n0.5;171.3\n1.0;-20.5\n") == (1, 2, "mV", "a guess")
    assert proposed("0;3.1\n1;3.2\n2;3.3\n") == (1, 2, "pH", "a guess")
    assert proposed("9.1;0.0\n8.2;0.5\n3.3;1.0\n") == (2, 1, "pH", "a guess")
    assert proposed("1;0.0;9.1\n2;0.5;8.2\n3;1.0;3.3\n") == (2, 3, "pH", "a guess")


def test_propose_mapping_says_why() -> None:
    why = propose_mapping(read("Volume [mL];b\n0;3.1\n1;3.2\n")).why
    assert why.startswith("Volume is column 1, “Volume” [mL], by its heading and its unit; ")
    assert why.endswith("pH is column 2, “b”, by its values.")


def test_propose_mapping_names_what_was_found_instead() -> None:
    with pytest.raises(Refused) as caught:
        propose_mapping(read("Volume;Colour\n0;3\n1;red\n2;blue\n3;blue\n4;2\n"))
    assert "has only one column of numbers" in str(caught.value)
    assert "Found: column 1, “Volume”; column 2, “Colour”." in str(caught.value)


def test_chosen_mapping_keeps_what_a_person_chose() -> None:
    table = read("a;b\n0;3\n1;4\n")
    chosen = chosen_mapping(table, volume=2, reading=1, quantity="mV")
    assert chosen == Mapping(2, 1, "mV", confidence="chosen", why="Chosen by hand.")
    assert found_columns(table) == "column 1, “a”; column 2, “b”"


@pytest.mark.parametrize(
    ("volume", "reading", "quantity", "part"),
    [
        (0, 1, "pH", "Volume column is 0; expected 1 to 2"),
        (1, 3, "pH", "Reading column is 3; expected 1 to 2"),
        (1, 1, "pH", "both column 1"),
        (1, 2, "colour", "Quantity is 'colour'; expected one of pH, mV"),
    ],
)
def test_chosen_mapping_refuses_what_cannot_be(volume: int, reading: int, quantity: str, part: str) -> None:
    with pytest.raises(Refused, match=part):
        chosen_mapping(read("a;b\n0;3\n1;4\n"), volume=volume, reading=reading, quantity=quantity)
