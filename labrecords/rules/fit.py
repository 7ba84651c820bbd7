"""Whether what is typed fits its place: nothing is cut short or rounded on the way into a record."""

from __future__ import annotations

from decimal import Decimal
from typing import Any

from django.db.models import CharField, DecimalField, Model, PositiveSmallIntegerField

from labrecords.rules.number import places_of, plain, shown

LARGEST = 32767  # of a small whole number in the database


def objections_to_fit(record: Model) -> list[str]:
    """Every text, choice and number of a record that has no room in its column."""
    found = []
    for field in record._meta.concrete_fields:
        value = getattr(record, field.attname)
        name = str(field.verbose_name).capitalize()
        if isinstance(field, DecimalField) and isinstance(value, Decimal):
            found += _objections_to_number(value, name=name, field=field)
        elif isinstance(field, CharField) and isinstance(value, str):
            found += _objections_to_text(value, name=name, field=field)
        elif isinstance(field, PositiveSmallIntegerField) and isinstance(value, int) and not 0 <= value <= LARGEST:
            found.append(f"{name} is {value}: a whole number from 0 to {LARGEST} is expected.")
    return found


def _objections_to_number(value: Decimal, *, name: str, field: DecimalField[Any, Any]) -> list[str]:
    if not value.is_finite():
        return [f"{name} is {value}, which is no number. A number such as 12.30 is expected."]
    if places_of(value) > field.decimal_places:
        return [f"{name} is {plain(value)}: up to {field.decimal_places} decimals are kept."]
    whole = field.max_digits - field.decimal_places
    if abs(value) >= 10**whole:
        return [f"{name} is {plain(value)}: up to {whole} digits before the decimal mark are kept."]
    return []


def _objections_to_text(value: str, *, name: str, field: CharField[Any, Any]) -> list[str]:
    if field.max_length is not None and len(value) > field.max_length:
        return [f"{name} is {shown(value)}, {len(value)} characters: up to {field.max_length} are kept."]
    choices = [str(key) for key, _ in field.flatchoices]
    if choices and value not in choices and not (field.blank and not value):
        return [f"{name} is {shown(value)}; expected one of {', '.join(choices)}."]
    return []
