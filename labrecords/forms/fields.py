"""Fields that read what people type and choose; a refusal names field, value and expectation."""

from __future__ import annotations

from datetime import date, datetime
from decimal import Decimal
from typing import Any

from django import forms
from django.db.models import QuerySet

from labrecords.rules.certificate import LARGEST_FILE, media_type_of, objections_to_certificate
from labrecords.rules.number import parse_number, plain, shown

DAY_FORMS = ("%Y-%m-%d", "%d %b %Y", "%d %B %Y", "%d.%m.%Y", "%d/%m/%Y")


class TextField(forms.CharField):
    """Words."""

    def __init__(self, *, max_length: int, **options: Any) -> None:
        super().__init__(max_length=max_length, **options)
        self.error_messages["required"] = f"{self.label} is empty: words are expected."

    def run_validators(self, value: Any) -> None:
        """The framework's checks, with the length in a sentence of our own."""
        if self.max_length is not None and len(value) > self.max_length:
            raise forms.ValidationError(f"{self.label} has {len(value)} characters; up to {self.max_length} are kept.")
        super().run_validators(value)


class OneOfField(forms.ChoiceField):
    """One of a few words."""

    def __init__(self, **options: Any) -> None:
        super().__init__(**options)
        self.error_messages["required"] = f"{self.label}: nothing is chosen; choose one."
        self.error_messages["invalid_choice"] = f"{self.label} is “%(value)s”, which is not in the list."


class SomeOfField(forms.MultipleChoiceField):
    """Some of a few words, as boxes to tick."""

    def __init__(self, **options: Any) -> None:
        options.setdefault("widget", forms.CheckboxSelectMultiple)
        super().__init__(**options)
        self.error_messages["required"] = f"{self.label}: nothing is ticked; tick at least one."
        self.error_messages["invalid_choice"] = f"{self.label}: “%(value)s” is not in the list."


class RecordField(forms.ModelChoiceField):
    """One record of a list."""

    def __init__(self, queryset: QuerySet[Any], **options: Any) -> None:
        super().__init__(queryset, **options)
        self.error_messages["required"] = f"{self.label}: nothing is chosen; choose one of the list."
        self.error_messages["invalid_choice"] = (
            f"{self.label}: what was chosen is not in the list any more. Choose again."
        )


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


class PercentField(NumberField):
    """A percentage as certificates give it; clean gives the fraction, with every digit kept."""

    def __init__(self, *, least: Decimal, most: Decimal, **options: Any) -> None:
        self.least, self.most = least, most
        super().__init__(**options)

    def clean(self, value: Any) -> Decimal | None:
        """The fraction, or ValidationError with the sentence."""
        number = super().clean(value)
        if number is None:
            return None
        if not self.least <= number <= self.most:
            raise forms.ValidationError(
                f"{self.label} is {plain(number)} %; {self.least} to {self.most} % is expected, "
                "as a percentage and not as a fraction."
            )
        return number.scaleb(-2)


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
        raise forms.ValidationError(
            f"{self.label} is {shown(text)}; a day such as 24 Nov 2026 or 2026-11-24 is expected."
        )


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
            raise forms.ValidationError(f"{self.label} is {shown(text)}; a whole number from 0 on is expected.")
        return int(text)


class CertificateField(forms.FileField):
    """A certificate as PDF, PNG or JPEG up to 5 MB; its kind is read from its first bytes, not its name."""

    def __init__(self, **options: Any) -> None:
        options.setdefault(
            "widget",
            forms.FileInput(attrs={"accept": ".pdf,.png,.jpg,.jpeg,application/pdf,image/png,image/jpeg"}),
        )
        super().__init__(**options)
        self.error_messages["required"] = f"{self.label}: no file is chosen; a PDF, PNG or JPEG is expected."
        self.error_messages["empty"] = f"{self.label}: the file is empty; a PDF, PNG or JPEG is expected."

    def clean(self, data: Any, initial: Any = None) -> tuple[str, str, bytes] | None:
        """Name, media type and bytes; None where no file was chosen."""
        file = super().clean(data, initial)
        if not file:
            return None
        content = file.read(LARGEST_FILE + 1)
        found = objections_to_certificate(file.name, content=content, field=str(self.label))
        if found:
            raise forms.ValidationError(found)
        return file.name, str(media_type_of(content)), content
