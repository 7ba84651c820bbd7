"""Canonical JSON (RFC 8785): the same content always gives the same bytes, so that a hash means something."""

from __future__ import annotations

import hashlib
import json
from collections.abc import Mapping
from datetime import date, datetime
from decimal import Decimal
from typing import Any


def plain(value: Any) -> Any:
    """Decimals and floats become strings (digits as read, or shortest exact form); times become microseconds."""
    if value is None or isinstance(value, bool | str | int):
        return value
    if isinstance(value, Mapping):
        return {str(key): plain(item) for key, item in value.items()}
    if isinstance(value, list | tuple):
        return [plain(item) for item in value]
    if isinstance(value, datetime):
        return str(int(value.timestamp()) * 1_000_000 + value.microsecond)
    if isinstance(value, date):
        return value.isoformat()
    if isinstance(value, float):
        return repr(value)
    if isinstance(value, Decimal):
        return str(value)
    raise TypeError(f"{type(value).__name__} has no canonical form")


def canonical_json(value: Any) -> str:
    """The canonical text of plain content, keys in order, no white space."""
    return json.dumps(plain(value), sort_keys=True, separators=(",", ":"), ensure_ascii=False)


def sha256_of(text: str) -> str:
    """SHA-256 of a text's UTF-8 bytes, in hexadecimal."""
    return hashlib.sha256(text.encode()).hexdigest()
