"""Fields: what people type is understood; the rest is refused with field, value and a remedy."""

from __future__ import annotations

from datetime import date
from decimal import Decimal as D

import pytest
from django.core.exceptions import ValidationError
from django.core.files.uploadedfile import SimpleUploadedFile

from labrecords.forms.fields import (
    CertificateField,
    CountField,
    DayField,
    NumberField,
    OneOfField,
    PercentField,
    SomeOfField,
    TextField,
)


def said(field, value) -> str:
    """The sentences a field refuses a value with."""
    with pytest.raises(ValidationError) as caught:
        field.clean(value)
    return " ".join(caught.value.messages)


@pytest.mark.parametrize(("typed", "value"), [("12,30", "12.30"), ("12.30", "12.30"), (" 0.05 ", "0.05")])
def test_number_field_keeps_the_places_typed(typed: str, value: str) -> None:
    assert str(NumberField(label="Volume").clean(typed)) == value


def test_number_field_refuses_with_field_value_and_expectation() -> None:
    assert "Volume is “twelve”, which is not a number" in said(NumberField(label="Volume"), "twelve")
    assert "more than one decimal mark" in said(NumberField(label="Volume"), "1,234.5")
    assert said(NumberField(label="Volume"), "") == "Volume: nothing is typed; a number is expected."
    assert NumberField(label="Volume", required=False).clean("") is None


@pytest.mark.parametrize("typed", ["2026-11-24", "24 Nov 2026", "24 November 2026", "24.11.2026", "24/11/2026"])
def test_day_field_reads_a_day(typed: str) -> None:
    assert DayField(label="Expires on").clean(typed) == date(2026, 11, 24)


@pytest.mark.parametrize("typed", ["11/24/2026", "2026-02-30", "tomorrow", "24 Nov"])
def test_day_field_refuses(typed: str) -> None:
    assert f"Expires on is “{typed}”; a day such as 24 Nov 2026" in said(DayField(label="Expires on"), typed)


def test_count_field_takes_whole_numbers_only() -> None:
    assert CountField(label="Days").clean("14") == 14
    for typed in ("1.5", "-1", "²", "many"):
        assert f"Days is “{typed}”" in said(CountField(label="Days"), typed)


def test_percent_field_gives_the_exact_fraction() -> None:
    field = PercentField(label="Purity, %", least=D(50), most=D(101))
    assert field.clean("99,98") == D("0.9998")
    assert str(field.clean("99.980")) == "0.99980"


@pytest.mark.parametrize("typed", ["0.9998", "999.8", "-99"])
def test_percent_field_refuses_a_fraction(typed: str) -> None:
    field = PercentField(label="Purity, %", least=D(50), most=D(101))
    assert f"Purity, % is {typed} %; 50 to 101 % is expected" in said(field, typed)


def test_text_field_says_how_long_it_may_be() -> None:
    assert said(TextField(label="Name", max_length=5), "sodium") == "Name has 6 characters; up to 5 are kept."
    assert said(TextField(label="Name", max_length=5), " ") == "Name is empty: words are expected."


def test_choices_name_what_is_not_in_the_list() -> None:
    choices = [("a", "A"), ("b", "B")]
    assert said(OneOfField(label="Kind", choices=choices), "c") == "Kind is “c”, which is not in the list."
    assert said(OneOfField(label="Kind", choices=choices), "") == "Kind: nothing is chosen; choose one."
    assert said(SomeOfField(label="Roles", choices=choices), ["c"]) == "Roles: “c” is not in the list."


@pytest.mark.parametrize(
    ("content", "kind"),
    [
        (b"%PDF-1.7 ...", "application/pdf"),
        (b"\x89PNG\r\n\x1a\n...", "image/png"),
        (b"\xff\xd8\xff\xe0...", "image/jpeg"),
    ],
)
def test_certificate_field_goes_by_the_first_bytes(content: bytes, kind: str) -> None:
    file = SimpleUploadedFile("certificate.txt", content, content_type="text/html")
    assert CertificateField(label="Certificate").clean(file) == ("certificate.txt", kind, content)


def test_certificate_field_refuses_other_files_empty_ones_and_large_ones() -> None:
    field = CertificateField(label="Certificate")
    assert "“a.pdf” is neither PDF, PNG nor JPEG" in said(field, SimpleUploadedFile("a.pdf", b"<html>"))
    assert "the file is empty" in said(field, SimpleUploadedFile("a.pdf", b""))
    large = SimpleUploadedFile("a.pdf", b"%PDF-" + bytes(5 * 1024 * 1024))
    assert "“a.pdf” is larger than 5 MB" in said(field, large)
    assert "no file is chosen" in said(field, None)
