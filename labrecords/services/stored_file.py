"""Files kept byte for byte, with their SHA-256."""

from __future__ import annotations

import hashlib
from datetime import datetime

from labrecords.models import StoredFile, User


def store_file(name: str, *, media_type: str, content: bytes, by: User, at: datetime) -> StoredFile:
    """Keep a file; called inside a service that has an open event."""
    return StoredFile.objects.create(
        sha256=hashlib.sha256(content).hexdigest(),
        name=name[:200],
        media_type=media_type[:100] or "application/octet-stream",
        size=len(content),
        content=content,
        stored_by=by,
        stored_at=at,
    )
