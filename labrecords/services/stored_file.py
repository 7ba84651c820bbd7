"""Files kept byte for byte, with their SHA-256."""

from __future__ import annotations

import hashlib
from datetime import datetime

from labrecords.errors import refuse_if
from labrecords.models import StoredFile, User
from labrecords.rules.certificate import objections_to_certificate

Certificate = tuple[str, str, bytes]  # name, media type, content


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


def store_certificate(certificate: Certificate, *, by: User, at: datetime) -> StoredFile:
    """Keep a certificate's file; Refused when it is none. Called inside a service that has an open event."""
    name, media_type, content = certificate
    refuse_if(objections_to_certificate(name, content=content))
    return store_file(name, media_type=media_type, content=content, by=by, at=at)
