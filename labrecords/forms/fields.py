"""Fields that read what people type: decimals with either mark, days, files; each refusal names field and value."""

from __future__ import annotations

from datetime import date, datetime
from decimal import Decimal
from typing import Any

from django import forms

from labrecords.rules.number import parse_number

DAY_FORMS = ("%Y-%m-%d", "%d %b %Y", "%d %B %Y", "%d.%m.%Y", "%d/%m/%Y")
LARGEST_FILE = 5 * 1024 * 1024
CERTIFICATE_STARTS = {b"%PDF-": "application/pdf", b"\x89PNG": "image/png", b"\xff\xd8\xff": "image/jpeg"}


class NumberField(forms.CharField):
    """A decimal as typed, point or comma, its places kept; None where it may be left empty."""

    def __init__(self, **options: Any) -> None:
        options.setdefault("max_length", 40)
        options.setdefault("widget", forms.TextInput(attrs={"inputmode": "decimal", "autocomplete": "off"}))
        super().__init__(**options)
        self.error_messages["required"] = f"{self.label}: nothing is typed; a number is expected."

    def clean(self, value: Any) -> Decimal | None:
        """The number, or ValidationError with the sentence."""
        text = super().clean(value).strip()
        if not text:
            return None
        try:
            return parse_number(text, field=str(self.label))
        except ValueError as problem:
            raise forms.ValidationError(str(problem)) from problem


class DayField(forms.CharField):
    """A day: 2026-11-24 from the browser's picker, or 24 Nov 2026 as written here."""

    def __init__(self, **options: Any) -> None:
        options.setdefault("widget", forms.DateInput(attrs={"type": "date"}, format="%Y-%m-%d"))
        super().__init__(**options)
        self.error_messages["required"] = f"{self.label}: no day is typed; a day such as 24 Nov 2026 is expected."

    def clean(self, value: Any) -> date | None:
        """The day, or ValidationError with the sentence."""
        text = super().clean(value).strip()
        if not text:
            return None
        for form in DAY_FORMS:
            try:
                return datetime.strptime(text, form).date()
            except ValueError:
                continue
        raise forms.ValidationError(f"{self.label} is {text!r}; a day such as 24 Nov 2026 or 2026-11-24 is expected.")


class CountField(forms.CharField):
    """A whole number from 0 on."""

    def __init__(self, **options: Any) -> None:
        options.setdefault("max_length", 6)
        options.setdefault("widget", forms.TextInput(attrs={"inputmode": "numeric", "autocomplete": "off"}))
        super().__init__(**options)
        self.error_messages["required"] = f"{self.label}: nothing is typed; a whole number is expected."

    def clean(self, value: Any) -> int | None:
        """The number, or ValidationError with the sentence."""
        text = super().clean(value).strip()
        if not text:
            return None
        if not text.isascii() or not text.isdigit():
            raise forms.ValidationError(f"{self.label} is {text!r}; a whole number from 0 on is expected.")
        return int(text)


class CertificateField(forms.FileField):
    """A certificate as PDF, PNG or JPEG up to 5 MB; the kind is read from its first bytes, not from its name."""

    def clean(self, data: Any, initial: Any = None) -> tuple[str, str, bytes] | None:
        """Name, media type and bytes; None where no file was chosen."""
        file = super().clean(data, initial)
        if not file:
            return None
        if file.size > LARGEST_FILE:
            raise forms.ValidationError(f"{self.label}: {file.name} has {file.size / 1e6:.1f} MB; up to 5 MB are taken.")
        content = file.read()
        for start, media_type in CERTIFICATE_STARTS.items():
            if content.startswith(start):
                return file.name, media_type, content
        raise forms.ValidationError(f"{self.label}: {file.name} is neither PDF, PNG nor JPEG. Choose the certificate's file.")
