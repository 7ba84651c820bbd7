"""Accounts: recorded, changed and closed by an administrator; signing in and out is on the trail too."""

from __future__ import annotations

from django.contrib.auth.password_validation import validate_password
from django.core.exceptions import ValidationError
from django.db import connection, transaction

from labrecords.errors import Refused, refuse_if
from labrecords.models import Role, User
from labrecords.rules.review import objections_to_reason
from labrecords.rules.user import (
    objections_to_account,
    objections_to_administering,
    objections_to_changing_password,
    objections_to_closing_account,
    objections_to_correcting_account,
)
from labrecords.services import audit
from labrecords.services.number import reserve_name


@transaction.atomic(durable=True)
def record_user(*, by: User, username: str, full_name: str, roles: list[str], password: str) -> User:
    """Record a new account; Refused when the name is taken, a role unknown or the password weak."""
    reserve_name("user", username)
    refuse_if([*objections_to_administering(by), *objections_to_account(username, full_name=full_name, roles=roles)])
    user = User(username=username, full_name=full_name, roles=roles)
    _set_password(user, password)
    with audit.event("user.record", by=by, subject=username):
        user.save()
    return user


@transaction.atomic(durable=True)
def record_first_administrator(*, username: str, full_name: str, password: str) -> User:
    """Record the first account of an empty laboratory, an administrator; it records itself."""
    roles = [Role.ADMINISTRATOR.value]
    reserve_name("user", "the first account")
    refuse_if(
        [
            *(["There are accounts already; an administrator records others."] if User.objects.exists() else []),
            *objections_to_account(username, full_name=full_name, roles=roles),
        ]
    )
    with connection.cursor() as cursor:
        cursor.execute("SELECT nextval(pg_get_serial_sequence('labrecords_user', 'id'))")
        user = User(pk=cursor.fetchone()[0], username=username, full_name=full_name, roles=roles)
    _set_password(user, password)
    with audit.event("user.record", by=user, subject=username, reason="the first account"):
        user.save(force_insert=True)
    return user


@transaction.atomic(durable=True)
def correct_user(user: User, *, by: User, full_name: str, roles: list[str], reason: str) -> User:
    """Change a person's name or roles, with a reason."""
    user = User.objects.select_for_update().get(pk=user.pk)
    refuse_if(
        [
            *objections_to_correcting_account(user, by=by, full_name=full_name, roles=roles),
            *objections_to_reason(reason, what="the account is changed"),
        ]
    )
    user.full_name, user.roles = full_name, roles
    with audit.event("user.correct", by=by, subject=user.username, reason=reason):
        user.save(update_fields=["full_name", "roles"])
    return user


@transaction.atomic(durable=True)
def close_user(user: User, *, by: User, reason: str) -> User:
    """Close an account: it signs in and signs nothing more; what it signed stays."""
    user = User.objects.select_for_update().get(pk=user.pk)
    refuse_if(
        [
            *objections_to_closing_account(user, by=by),
            *objections_to_reason(reason, what="the account is closed"),
        ]
    )
    user.is_active = False
    with audit.event("user.close", by=by, subject=user.username, reason=reason):
        user.save(update_fields=["is_active"])
    return user


@transaction.atomic(durable=True)
def change_password(user: User, *, by: User, current: str, password: str) -> User:
    """A person changes their own password; nobody sets another's to sign as them."""
    user = User.objects.select_for_update().get(pk=user.pk)
    refuse_if(objections_to_changing_password(user, by=by, current=current))
    _set_password(user, password)
    with audit.event("user.change_password", by=by, subject=user.username):
        user.save(update_fields=["password"])
    return user


@transaction.atomic(durable=True)
def record_sign_in(user: User) -> None:
    """Write that a person signed in."""
    with audit.event("user.sign_in", by=user, subject=user.username):
        pass


@transaction.atomic(durable=True)
def record_sign_out(user: User) -> None:
    """Write that a person signed out."""
    with audit.event("user.sign_out", by=user, subject=user.username):
        pass


@transaction.atomic(durable=True)
def record_failed_sign_in(username: str, *, address: str) -> None:
    """Write that an account's name was typed with a wrong password; unknown names are not kept."""
    user = User.objects.filter(username=username).first()
    if user is None:
        return
    reason = f"wrong password, from {address or 'an unknown address'}"
    if not user.is_active:
        reason = f"the account is closed, from {address or 'an unknown address'}"
    with audit.event("user.fail_sign_in", by=user, subject=user.username, reason=reason):
        pass


def _set_password(user: User, password: str) -> None:
    try:
        validate_password(password, user)
    except ValidationError as error:
        raise Refused([f"Password: {message}" for message in error.messages]) from error
    user.set_password(password)
