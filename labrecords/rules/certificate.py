"""Files of certificates: what they may be."""

from __future__ import annotations

from labrecords.rules.number import shown

LARGEST_FILE = 5 * 1024 * 1024
STARTS = {b"%PDF-": "application/pdf", b"\x89PNG\r\n\x1a\n": "image/png", b"\xff\xd8\xff": "image/jpeg"}


def media_type_of(content: bytes) -> str | None:
    """The kind of a certificate's file from its first bytes, or None when it is none that is taken."""
    return next((kind for start, kind in STARTS.items() if content.startswith(start)), None)


def objections_to_certificate(name: str, *, content: bytes, field: str = "Certificate") -> list[str]:
    """A PDF, PNG or JPEG up to 5 MB; the name of a file says nothing about what is in it."""
    if len(content) > LARGEST_FILE:
        return [f"{field}: {shown(name)} is larger than 5 MB. Choose a smaller copy, such as one of fewer pages."]
    if media_type_of(content) is None:
        return [f"{field}: {shown(name)} is neither PDF, PNG nor JPEG. Choose the certificate's file."]
    return []
