"""Who may do what with accounts."""

from __future__ import annotations

import re
from collections.abc import Collection

from labrecords.models import Role, User
from labrecords.rules.identifier import TAKEN_BY_ADDRESSES

USERNAME = re.compile(r"[a-z][a-z0-9.-]{1,39}")


def objections_to_administering(by: User) -> list[str]:
    """Accounts and settings are an administrator's."""
    if by.is_administrator:
        return []
    return [f"{by.full_name} is not an administrator. Ask an administrator of the laboratory."]


def objections_to_account(
    username: str, *, full_name: str, roles: Collection[str], known: User | None = None
) -> list[str]:
    """What is wrong with an account as typed."""
    found = []
    if not USERNAME.fullmatch(username) or username in TAKEN_BY_ADDRESSES:
        found.append(
            f"Name for signing in is {username!r}: 2 to 40 small letters, digits, dots or hyphens, a letter first."
        )
    if known is None and User.objects.filter(username=username).exists():
        found.append(f"Name for signing in {username!r} is taken. Choose another; names are never reused.")
    if not full_name.strip() or len(full_name) > 120:
        found.append(f"Full name is {full_name!r}: up to 120 characters; it is printed beside every signature.")
    if not roles:
        found.append("Roles: choose at least one.")
    unknown = [role for role in roles if role not in Role.values]
    found += [f"Role {role!r} is not known; expected one of {', '.join(Role.values)}." for role in unknown]
    return found


def objections_to_correcting_account(user: User, *, by: User, full_name: str, roles: Collection[str]) -> list[str]:
    """By an administrator; nobody widens or narrows what they may do themselves."""
    found = objections_to_administering(by)
    if user.pk == by.pk and set(roles) != set(user.roles):
        found.append(f"{user.full_name} is you: another administrator changes your roles.")
    return found + objections_to_account(user.username, full_name=full_name, roles=roles, known=user)


def objections_to_closing_account(user: User, *, by: User) -> list[str]:
    """By an administrator, once, and never one's own: so there is always one administrator left."""
    found = objections_to_administering(by)
    if user.pk == by.pk:
        found.append(f"{user.full_name} is you: another administrator closes your account.")
    if not user.is_active:
        found.append(f"The account of {user.full_name} is closed already.")
    return found


def objections_to_changing_password(user: User, *, by: User, current: str) -> list[str]:
    """By its owner, who knows the current one."""
    if user.pk != by.pk:
        return ["A password is changed by its owner only. Ask them to sign in and change it."]
    if not user.check_password(current):
        return ["Current password is not right; nothing was changed. Type it again."]
    return []
