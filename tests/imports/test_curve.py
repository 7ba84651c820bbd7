"""A curve taken from a table, every cell checked."""

from __future__ import annotations

import json
import time
from pathlib import Path

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from labrecords.errors import Refused
from labrecords.imports.curve import RecordedCurve, curve_fields, extract_curve
from labrecords.imports.mapping import QUANTITIES, chosen_mapping, propose_mapping
from labrecords.imports.table import read_table

CURVES = Path(__file__).parent.parent / "data" / "curves"


def curve_of(content: bytes, *, name: str = "curve.csv") -> RecordedCurve:
    table = read_table(content, name=name)
    return extract_curve(table, mapping=propose_mapping(table))


def refusal(text: str) -> str:
    with pytest.raises(Refused) as caught:
        curve_of(text.encode())
    return " ".join(caught.value.reasons)


def test_extract_curve_keeps_the_written_digits() -> None:
    curve = curve_of(b"Volume;mV\n0,00;-120,10\n0,50;-110\n1,00;1,5E-03\n")
    assert curve.volume == ("0.00", "0.50", "1.00")
    assert curve.reading == ("-120.10", "-110", "1.5E-03")
    assert curve.quantity == "mV"
    assert curve.notes[-1] == "Volume from column 1, “Volume”; mV from column 2, “mV”."


def test_extract_curve_passes_over_rows_without_either_cell() -> None:
    curve = curve_of(b"Volume;pH;remark\n0;3.1;\n1;3.2;\n;;filled up\n2;3.3;\n")
    assert curve.volume == ("0", "1", "2")
    assert curve.notes[-1] == "Rows without volume and reading left out: 1."


@pytest.mark.parametrize(
    ("cell", "part"),
    [
        ("NaN", "“NaN”, which is no number; a number is expected"),
        ("-inf", "“-inf”, which is no number"),
        ("#DIV/0!", "“#DIV/0!”, which is no number"),
        ("", "is empty; a number is expected"),
        ("=A1+1", "“=A1+1”, which looks like a formula"),
        ("@SUM(A1)", "looks like a formula"),
        ("-A1", "looks like a formula"),
        ("1.234.5", "more than one decimal mark"),
        ("1 234.5", "thousands separators"),
        ("7.1 pH", "without its unit"),
        ("over", "“over”, which is text"),
        ("19", "“19”; -2 to 16 is expected."),
        ("-177", "“-177”; -2 to 16 is expected. It looks like mV."),
        ("1" * 16, "far too long"),
    ],
)
def test_extract_curve_names_row_column_value_and_expectation(cell: str, part: str) -> None:
    said = refusal(f"Volume;pH\n0.0;3.1\n0.5;{cell}\n1.0;3.3\n1.5;3.4\n")
    assert said.startswith("Row 3, column 2, “pH”: pH ")
    assert part in said


def test_extract_curve_names_a_negative_or_absurd_volume() -> None:
    assert "Row 2, column 1, “V”: volume is “-1”; 0 to 1000 mL is expected." in refusal("V;pH\n-1;3\n1;3\n2;4\n")
    assert "volume is “2000”; 0 to 1000 mL" in refusal("V;pH\n0;3\n1;3\n2000;4\n")


def test_extract_curve_names_five_cells_and_counts_the_rest() -> None:
    said = refusal("V;pH\n0;3\n" + "1;3\n" * 9 + "1;x\n" * 8)
    assert said.count("which is text") == 5
    assert said.endswith("There are 3 more like these.")


@pytest.mark.parametrize(
    ("text", "part"),
    [
        ("V;pH\n0.5;3.1\n", "has 1 point; a curve has at least 3"),
        ("V;pH\n0,0;3.1\n1,0;3.2\n2,0;3.3\n", "Two decimal marks: row 2, column 1, “V”, is “0,0”, and row 2"),
        ("V;mV\n1;1,234\n2;1,235\n3;1,236\n", "The comma may be a decimal mark or group thousands: row 2"),
        ("V;mV\n1;1.234\n2;1.235\n3;1.236\n", "The point may be a decimal mark or group thousands"),
        ("V [µL];pH\n0;3.1\n1;3.2\n2;3.3\n", "Column 1, “V” [µL] is in µL; volume in mL is expected"),
        ("V/mL;E [V]\n0;0.1\n1;0.2\n2;0.3\n", "is in V;"),
    ],
)
def test_extract_curve_asks_about_the_whole_file(text: str, part: str) -> None:
    assert part in refusal(text)


@pytest.mark.parametrize(
    "text",
    [
        "V;mV\n0,000;1,234\n1;1,235\n2;1,236\n",
        "V;pH\n0;3.123\n1;3.456\n2;3.789\n",
        "V,mV\n0,1.234\n1,1.235\n2,1.236\n",
    ],
)
def test_extract_curve_takes_three_decimals_where_the_file_tells_what_they_are(text: str) -> None:
    assert len(curve_of(text.encode()).volume) == 3


def test_curve_fields_are_plain_content() -> None:
    table = read_table(b"V/mL;pH\n0,0;3,1\n0,5;3,2\n1,0;3,3\n", name="curve.csv")
    mapping = propose_mapping(table)
    fields = curve_fields(table, mapping=mapping, curve=extract_curve(table, mapping=mapping))
    assert json.loads(json.dumps(fields)) == fields
    assert set(fields) == {"quantity", "mapping", "volumes", "readings", "notes"}
    assert fields["volumes"] == ["0.0", "0.5", "1.0"]
    assert fields["mapping"]["decimal_mark"] == "comma"
    assert fields["mapping"]["sha256"] == table.sha256


@pytest.mark.parametrize("path", sorted(CURVES.glob("*_*.*")), ids=lambda path: path.name)
def test_extract_curve_takes_every_sample_file(path: Path) -> None:
    curve = curve_of(path.read_bytes(), name=path.name)
    assert curve.quantity.lower() in path.name.lower()
    assert float(curve.volume[0]) == 0
    assert all(float(later) > float(earlier) for earlier, later in zip(curve.volume, curve.volume[1:], strict=False))


CELLS = st.one_of(
    st.decimals(-20, 20, places=3).map(str),
    st.sampled_from(["", "NaN", "0,5", "1.234,5", "=1", '"', "#", "sep=;", "V/mL", "pH", "[mL]", "()", "/", "mL"]),
    st.text(max_size=6),
)
TEXTS = st.lists(st.lists(CELLS, max_size=5).map(";".join) | st.lists(CELLS, max_size=5).map(",".join)).map("\n".join)


def outcome(content: bytes, *, columns: tuple[int, int, str] | None = None) -> RecordedCurve | Refused:
    try:
        table = read_table(content, name="x")
        if columns is None:
            mapping = propose_mapping(table)
        else:
            mapping = chosen_mapping(table, volume=columns[0], reading=columns[1], quantity=columns[2])
        return extract_curve(table, mapping=mapping)
    except Refused as refused:
        return refused


def is_sound(found: RecordedCurve | Refused) -> bool:
    if isinstance(found, Refused):
        return bool(found.reasons) and all(reason.endswith(".") for reason in found.reasons)
    finite = all(abs(float(text)) <= 2_000_000 for text in found.volume + found.reading)
    return finite and len(found.volume) == len(found.reading) >= 3


@settings(max_examples=300, deadline=None)
@given(st.binary(max_size=300) | TEXTS.map(str.encode) | TEXTS.map(lambda text: text.encode("utf-16")))
def test_any_bytes_give_a_curve_or_a_refusal(content: bytes) -> None:
    assert is_sound(outcome(content))


@settings(max_examples=150, deadline=None)
@given(TEXTS, st.tuples(st.integers(-1, 6), st.integers(-1, 6), st.sampled_from([*QUANTITIES, "x"])))
def test_any_choice_of_columns_gives_a_curve_or_a_refusal(text: str, columns: tuple[int, int, str]) -> None:
    assert is_sound(outcome(text.encode(), columns=columns))


def test_ten_thousand_rows_are_read_within_a_second() -> None:
    rows = "".join(f"{step / 400:.4f};{3 + step / 1200:.4f};{step};21.5\n" for step in range(10_000))
    content = ("Volume [mL];pH;t/s;T/°C\n" + rows).encode()
    before = time.process_time()
    assert len(curve_of(content).volume) == 10_000
    assert time.process_time() - before < 1
