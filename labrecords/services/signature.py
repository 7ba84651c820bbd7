"""Signing: name and password at every signing, and the hash of exactly what was signed."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any

from labrecords.canonical import canonical_json, sha256_of
from labrecords.errors import refuse_if
from labrecords.models import Meaning, Signature, User


@dataclass(frozen=True, slots=True)
class Credentials:
    """The two components of a signature as they were typed: name and password."""

    username: str
    password: str


def objections_to_credentials(credentials: Credentials, *, by: User) -> list[str]:
    """The typed name must be the account of the person who acts, and the password must be theirs."""
    if credentials.username.strip().casefold() != by.username.casefold():
        return [
            f"The name typed is {credentials.username!r}; signed in is {by.username}. "
            "Sign with your own name, or sign out first."
        ]
    if not by.is_active or not by.check_password(credentials.password):
        return ["The password is not right. Nothing was signed; type it again."]
    return []


def sign(
    meaning: Meaning,
    *,
    by: User,
    credentials: Credentials,
    noun: str,
    record_id: int,
    number: str,
    content: Mapping[str, Any],
    reason: str = "",
    zone: str = "UTC",
) -> Signature:
    """Write one signature row under the open event; Refused when name or password is wrong."""
    refuse_if(objections_to_credentials(credentials, by=by))
    text = canonical_json(content)
    return Signature.objects.create(
        signer=by, printed_name=by.full_name, meaning=meaning, reason=reason, noun=noun, record_id=record_id,
        record_number=number, content=text, content_sha256=sha256_of(text), zone=zone,
    )  # fmt: skip
