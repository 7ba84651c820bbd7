"""Column types of the laboratory."""

from __future__ import annotations

from decimal import Decimal, InvalidOperation
from typing import Any

from django.core.exceptions import ValidationError
from django.db import models
from django.db.backends.base.base import BaseDatabaseWrapper


class ReadingField(models.DecimalField):
    """A number as it was read: PostgreSQL's numeric without a scale keeps 12.30 apart from 12.3."""

    def __init__(self, *args: Any, **kwargs: Any) -> None:
        kwargs.setdefault("max_digits", 30)
        kwargs.setdefault("decimal_places", 15)
        super().__init__(*args, **kwargs)

    def db_type(self, connection: BaseDatabaseWrapper) -> str:
        return "numeric"

    def to_python(self, value: Any) -> Decimal | None:
        """Keep the places that were typed; binary floats are refused, they have lost them."""
        if value is None or isinstance(value, Decimal):
            return value
        if isinstance(value, float):
            raise ValidationError(f"{value!r} is a binary float; a reading is kept as the digits typed")
        try:
            return Decimal(value)
        except (InvalidOperation, TypeError, ValueError) as error:
            raise ValidationError(f"{value!r} is not a decimal number") from error
