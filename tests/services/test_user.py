"""Accounts: who is recorded, changed and closed by whom, and what signing in leaves on the trail."""

from __future__ import annotations

from typing import Any

import pytest
from django.db import DatabaseError

from labrecords.models import AuditEvent, User
from labrecords.services.signature import objections_to_credentials
from labrecords.services.user import (
    change_password,
    close_user,
    correct_user,
    record_failed_sign_in,
    record_first_administrator,
    record_sign_in,
    record_sign_out,
    record_user,
)
from tests.factories.people import PASSWORD, signed_by
from tests.support.trail import all_records, one_event, refusal_of

pytestmark = pytest.mark.django_db


def record(by: User, **given: Any) -> User:
    said = {"username": "lmarsh", "full_name": "Lena Marsh", "roles": ["analyst"], "password": PASSWORD}
    return record_user(by=by, **said | given)


def correct(user: User, by: User, **given: Any) -> User:
    said = {"full_name": user.full_name, "roles": ["analyst", "supervisor"], "reason": "promoted"}
    return correct_user(user, by=by, **said | given)


def test_record_user_keeps_a_hash_and_no_password(administrator: User) -> None:
    with one_event("user.record"):
        user = record(administrator)
    stored = User.objects.get(username="lmarsh")
    assert PASSWORD not in stored.password
    assert stored.check_password(PASSWORD)
    assert stored == user


@pytest.mark.parametrize(
    ("given", "sentence"),
    [
        ({"username": "Lena"}, "Name for signing in is 'Lena'"),
        ({"username": "password"}, "Name for signing in is 'password'"),
        ({"username": "jachterberg"}, "is taken"),
        ({"full_name": " "}, "Full name is ' '"),
        ({"full_name": "x" * 121}, "up to 120 characters"),
        ({"roles": []}, "choose at least one"),
        ({"roles": ["king"]}, "Role 'king' is not known"),
        ({"password": "short"}, "Password: "),
        ({"password": "lena marsh lmarsh"}, "too similar"),
    ],
)
def test_record_user_refuses(administrator: User, given: dict, sentence: str) -> None:
    assert sentence in refusal_of(record, administrator, **given)


def test_record_user_is_an_administrators_work(supervisor: User) -> None:
    assert "is not an administrator" in refusal_of(record, supervisor)


def test_record_user_without_a_trail_changes_nothing(administrator: User, break_trail) -> None:
    before = all_records()
    break_trail()
    with pytest.raises(DatabaseError, match="no room for the trail"):
        record(administrator)
    assert all_records() == before


def test_record_first_administrator_only_in_an_empty_laboratory(administrator: User) -> None:
    said = refusal_of(record_first_administrator, username="second", full_name="A Second", password=PASSWORD)
    assert "There are accounts already" in said


def test_first_administrator_recorded_itself(administrator: User) -> None:
    event = AuditEvent.objects.get()
    assert (event.actor, event.actor_name, event.action) == (
        administrator,
        "the first account",
        "user.record",
    )


def test_correct_user_changes_roles_with_a_reason(administrator: User, analyst: User) -> None:
    with one_event("user.correct"):
        correct(analyst, administrator)
    analyst.refresh_from_db()
    assert analyst.is_supervisor
    assert "Reason is ''" in refusal_of(correct, analyst, administrator, reason="")


def test_correct_user_lets_nobody_change_their_own_roles(administrator: User, supervisor: User) -> None:
    roles = ["administrator", "supervisor"]
    assert "another administrator changes your roles" in refusal_of(correct, administrator, administrator, roles=roles)
    assert "is not an administrator" in refusal_of(correct, supervisor, supervisor)


def test_correct_user_lets_an_administrator_mend_their_own_name(administrator: User) -> None:
    correct(administrator, administrator, full_name="Jonas T. Achterberg", roles=administrator.roles)
    administrator.refresh_from_db()
    assert administrator.full_name == "Jonas T. Achterberg"


def test_close_user_ends_the_account(administrator: User, analyst: User) -> None:
    with one_event("user.close"):
        close_user(analyst, by=administrator, reason="left the laboratory")
    analyst.refresh_from_db()
    assert objections_to_credentials(signed_by(analyst), by=analyst)
    again = refusal_of(close_user, analyst, by=administrator, reason="left the laboratory")
    assert "is closed already" in again


def test_close_user_refuses(administrator: User, analyst: User) -> None:
    assert "another administrator closes" in refusal_of(close_user, administrator, by=administrator, reason="bored")
    assert "is not an administrator" in refusal_of(close_user, administrator, by=analyst, reason="revenge")
    assert "Reason is ''" in refusal_of(close_user, analyst, by=administrator, reason="")


def test_change_password_by_its_owner(analyst: User) -> None:
    with one_event("user.change_password"):
        change_password(analyst, by=analyst, current=PASSWORD, password="a battery of staples 7")
    analyst.refresh_from_db()
    assert analyst.check_password("a battery of staples 7")


def test_change_password_refuses(administrator: User, analyst: User) -> None:
    new = {"password": "a battery of staples 7"}
    by_other = refusal_of(change_password, analyst, by=administrator, current=PASSWORD, **new)
    assert "changed by its owner only" in by_other
    assert "is not right" in refusal_of(change_password, analyst, by=analyst, current="guess", **new)
    assert "Password: " in refusal_of(change_password, analyst, by=analyst, current=PASSWORD, password="x")


def test_signing_in_and_out_are_events(analyst: User) -> None:
    with one_event("user.sign_in"):
        record_sign_in(analyst)
    with one_event("user.sign_out"):
        record_sign_out(analyst)


def test_record_failed_sign_in_names_the_account_and_the_address(analyst: User) -> None:
    with one_event("user.fail_sign_in"):
        record_failed_sign_in("icastell", address="192.0.2.7")
    assert AuditEvent.objects.latest("pk").reason == "wrong password, from 192.0.2.7"


def test_record_failed_sign_in_of_a_closed_account_says_so(administrator: User, analyst: User) -> None:
    close_user(analyst, by=administrator, reason="left the laboratory")
    record_failed_sign_in("icastell", address="")
    assert AuditEvent.objects.latest("pk").reason == "the account is closed, from an unknown address"


def test_record_failed_sign_in_keeps_no_name_without_an_account(analyst: User) -> None:
    before = all_records()
    record_failed_sign_in("correct horse 42 typed into the wrong field", address="192.0.2.7")
    assert all_records() == before
