"""Who may do what with accounts."""

from __future__ import annotations

import re

from labrecords.models import Role, User

USERNAME = re.compile(r"[a-z][a-z0-9.-]{1,39}")


def objections_to_administering(by: User) -> list[str]:
    """Accounts and settings are an administrator's."""
    if by.is_administrator:
        return []
    return [f"{by.full_name} is not an administrator. Ask an administrator of the laboratory."]


def objections_to_account(
    username: str, *, full_name: str, roles: list[str], known: User | None = None
) -> list[str]:
    """What is wrong with an account as typed."""
    found = []
    if not USERNAME.fullmatch(username):
        found.append(
            f"Name for signing in is {username!r}: 2 to 40 small letters, digits, dots or hyphens, a letter first."
        )
    if known is None and User.objects.filter(username=username).exists():
        found.append(f"Name for signing in {username!r} is taken. Choose another; names are never reused.")
    if not full_name.strip():
        found.append("Full name is empty: it is printed beside every signature.")
    if not roles:
        found.append("Roles: choose at least one.")
    found += [f"Role {role!r} is not known; expected one of {', '.join(Role.values)}." for role in roles if role not in Role.values]
    return found
