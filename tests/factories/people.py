"""What people type: the password of the whole cast, and the two components of a signature."""

from __future__ import annotations

from labrecords.models import User
from labrecords.services.signature import Credentials

PASSWORD = "correct horse 42"


def signed_by(user: User, password: str = PASSWORD) -> Credentials:
    """What a person types at a signing."""
    return Credentials(username=user.username, password=password)


def typed_by(user: User, *, reason: str = "", password: str = PASSWORD) -> dict[str, str]:
    """The same as a page sends it."""
    return {"username": user.username, "password": password, "reason": reason}
