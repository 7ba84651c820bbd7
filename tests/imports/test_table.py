"""Reading a recorded table from the bytes of a file."""

from __future__ import annotations

import codecs
import hashlib
from pathlib import Path

import pytest

from labrecords.errors import Refused
from labrecords.imports.encoding import MOST_BYTES, refuse_size
from labrecords.imports.layout import MOST_ROWS
from labrecords.imports.table import Table, file_name, read_table

CURVES = Path(__file__).parent.parent / "data" / "curves"
ROWS = "Volume [mL];pH\n0,00;3,12\n0,50;3,33\n1,00;3,60\n"


def read(text: str) -> Table:
    return read_table(text.encode(), name="curve.csv")


def refusal(content: bytes) -> str:
    with pytest.raises(Refused) as caught:
        read_table(content, name="curve.csv")
    return " ".join(caught.value.reasons)


@pytest.mark.parametrize(
    ("content", "encoding"),
    [
        (ROWS.encode(), "UTF-8"),
        (codecs.BOM_UTF8 + ROWS.encode(), "UTF-8 with byte order mark"),
        (codecs.BOM_UTF16_LE + ROWS.encode("utf-16-le"), "UTF-16 LE with byte order mark"),
        (codecs.BOM_UTF16_BE + ROWS.encode("utf-16-be"), "UTF-16 BE with byte order mark"),
        (ROWS.encode("utf-16-le"), "UTF-16 LE"),
        (ROWS.encode("utf-16-be"), "UTF-16 BE"),
        (("# 20 °C\n" + ROWS).encode("cp1252"), "Windows-1252"),
    ],
)
def test_read_table_finds_the_encoding_and_says_it(content: bytes, encoding: str) -> None:
    table = read_table(content, name="curve.csv")
    assert table.encoding == encoding
    assert table.notes[0].startswith(f"Read as {encoding},")
    assert table.cells(2) == ["3,12", "3,33", "3,60"]
    assert (table.columns[0].name, table.columns[0].unit) == ("Volume", "mL")


@pytest.mark.parametrize(("mark", "name"), [(";", "semicolon"), ("\t", "tab"), (",", "comma")])
@pytest.mark.parametrize("end", ["\n", "\r\n", "\r"])
def test_read_table_finds_the_separator_with_any_line_end(mark: str, name: str, end: str) -> None:
    table = read("Volume;pH\n0.00;3.12\n0.50;3.33\n\n".replace(";", mark).replace("\n", end))
    assert table.separator == name
    assert table.decimal_mark == "point"
    assert [row.number for row in table.rows] == [2, 3]


def test_read_table_takes_quoted_decimal_commas_between_commas() -> None:
    table = read('"Volume, mL","pH"\n"0,00","3,12"\n"0,50","3,33"\n')
    assert (table.separator, table.decimal_mark) == ("comma", "comma")
    assert (table.columns[0].name, table.columns[0].unit) == ("Volume", "mL")


def test_read_table_follows_a_separator_line() -> None:
    assert read("sep=;\n0;3,12\n1;3,33\n").separator == "semicolon"


def test_read_table_leaves_comments_preamble_and_empty_rows_out_and_says_so() -> None:
    table = read(f"# exported\nDate;2026-11-24\nSample;S-1\n\n{ROWS}\n1,50;3,9\n;\n\n")
    assert table.cells(1) == ["0,00", "0,50", "1,00", "1,50"]
    assert table.rows[0].number == 6
    assert table.notes[1:] == (
        "Comment lines left out: 1, in row 1.",
        "What comes before the table was left out, row 2 to 3.",
        "Empty rows between the others left out: 1.",
    )


def test_read_table_reads_a_line_of_units_below_the_headings() -> None:
    table = read("Point,Volume,Signal\n,mL,mV\n1,0.0,-120\n2,0.5,-110\n")
    assert [(column.name, column.unit) for column in table.columns] == [
        ("Point", ""),
        ("Volume", "mL"),
        ("Signal", "mV"),
    ]


def test_read_table_takes_headings_from_a_comment_when_there_are_no_others() -> None:
    assert [str(column) for column in read("# V/mL;pH\n0;3\n1;4\n").columns] == [
        "column 1, “V” [mL]",
        "column 2, “pH”",
    ]


def test_read_table_without_headings_numbers_the_columns() -> None:
    assert [str(column) for column in read("0;3.1\n1;3.2\n").columns] == ["column 1", "column 2"]


def test_read_table_keeps_a_spoilt_first_row_in_the_table() -> None:
    assert read("Volume;pH\nx;3.1\n1;3.2\n2;3.3\n").cells(1) == ["x", "1", "2"]


def test_read_table_keeps_the_digest_of_the_bytes() -> None:
    content = codecs.BOM_UTF8 + ROWS.encode()
    table = read_table(content, name="C:\\data\\..\\curve.csv")
    assert table.sha256 == hashlib.sha256(content).hexdigest()
    assert (table.size, table.name) == (len(content), "“curve.csv”")


@pytest.mark.parametrize(
    ("content", "part"),
    [
        (b"", "is empty"),
        (b" \r\n\n", "has no rows"),
        (b"PK\x03\x04rest", "spreadsheet workbook"),
        (b"%PDF-1.7", "PDF"),
        (bytes(range(256)), "binary"),
        (b"0;1\n\x00;2\n", "control mark 0x00 in row 2"),
        (codecs.BOM_UTF8 + b"0;\xff", "damaged at byte 6"),
        (codecs.BOM_UTF16_LE + b"0\x00;", "UTF-16 LE with byte order mark by its first bytes, but damaged"),
        (b"a;b\n\x81;2\n", "no known encoding"),
        (b"0.0 3.1\n0.5 3.2\n", "one column, such as “0.0 3.1”"),
        (b"Operator,Colour\na,red\n", "the first row is “Operator | Colour”"),
        (b"0,00,3,12\n0,50,3,33\n", "both between the columns and in the numbers"),
        (b"V,pH\n1,5,3,1\n2,5,3,2\n", "both between the columns and in the numbers"),
        (b"V;pH\n1;2\n2;3\n3;4;5\n", "Row 4 has 3 cells, “3 | 4 | 5”; 2 are expected"),
        (b'V;pH\n1;"2\n2;3\n', "quotation mark that is not closed"),
        (b"V;pH\n" + b"1;2\n" * (MOST_ROWS + 1), "more than 20,000 rows"),
        (b"1;" * 30 + b"1\n", "Row 1 of “curve.csv” has 31 columns; at most 30"),
        (b"\n" * 40_001, "more than 40,000 lines"),
    ],
)
def test_read_table_refuses_with_a_sentence(content: bytes, part: str) -> None:
    assert part in refusal(content)


def test_refuse_size_needs_only_the_size() -> None:
    with pytest.raises(Refused, match="has 50 MB; at most 5 MB are expected"):
        refuse_size(50 * 1024 * 1024, name="curve.csv")
    refuse_size(MOST_BYTES, name="curve.csv")


def test_read_table_refuses_one_byte_too_many() -> None:
    assert "at most 5 MB" in refusal(b"1;2\n" * (MOST_BYTES // 4) + b"\n")


def test_file_name_drops_folders_and_control_marks() -> None:
    assert file_name("../../etc/\x1b[31mcurve.csv") == "“[31mcurve.csv”"
    assert file_name("") == "“without a name”"


@pytest.mark.parametrize("path", sorted(CURVES.glob("*_*.*")), ids=lambda path: path.name)
def test_read_table_reads_every_sample_file(path: Path) -> None:
    table = read_table(path.read_bytes(), name=path.name)
    assert len(table.rows) >= 20
    assert len(table.columns) >= 2
