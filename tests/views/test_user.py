"""Signing in and out, accounts, passwords."""

from __future__ import annotations

import pytest
from django.test import Client
from django.urls import reverse

from labrecords.models import AuditEvent, User
from labrecords.services.user import record_user
from tests.factories.people import PASSWORD
from tests.support.trail import all_records, one_event

pytestmark = pytest.mark.django_db
SIGN_IN = "/sign-in/"


def sign_in(client, username: str, password: str = PASSWORD, **more: str):
    return client.post(SIGN_IN, {"username": username, "password": password} | more)


def test_sign_in_goes_to_the_page_that_was_asked_for(client, analyst: User) -> None:
    with one_event("user.sign_in"):
        answer = sign_in(client, "icastell", next="/register/")
    assert (answer.status_code, answer["Location"]) == (302, "/register/")
    assert client.get("/register/").status_code == 200


@pytest.mark.parametrize("elsewhere", ["https://example.org/", "//example.org/", "javascript:alert(1)", "\\\\x"])
def test_sign_in_goes_nowhere_else(client, analyst: User, elsewhere: str) -> None:
    assert sign_in(client, "icastell", next=elsewhere)["Location"] == "/"


def test_sign_in_with_a_wrong_password_says_so_and_is_an_event(client, analyst: User) -> None:
    with one_event("user.fail_sign_in"):
        answer = sign_in(client, "icastell", "wrong horse 42")
    assert answer.status_code == 401
    assert "The name or the password is not right" in answer.content.decode()
    assert "wrong horse" not in answer.content.decode()


def test_sign_in_says_the_same_of_a_name_without_an_account(client, analyst: User) -> None:
    known = sign_in(client, "icastell", "wrong horse 42").content.decode()
    unknown = sign_in(client, "nobody", "wrong horse 42").content.decode()
    assert "The name or the password is not right" in known
    assert "The name or the password is not right" in unknown


def test_sign_in_waits_after_eight_wrong_tries(client, analyst: User) -> None:
    for _ in range(8):
        answer = sign_in(client, "icastell", "wrong horse 42")
    assert answer.status_code == 429
    assert "waits a quarter of an hour" in sign_in(client, "icastell").content.decode()
    assert client.get("/register/").status_code == 302
    assert AuditEvent.objects.filter(action="user.fail_sign_in").count() <= 8


def test_sign_in_of_an_empty_form_names_the_fields(client, db) -> None:
    answer = client.post(SIGN_IN, {})
    assert answer.status_code == 400
    assert "Name is empty." in answer.content.decode()


def test_sign_out_ends_the_session_and_is_an_event(client, analyst: User) -> None:
    client.force_login(analyst)
    with one_event("user.sign_out"):
        assert client.post("/sign-out/").status_code == 302
    assert client.get("/register/").status_code == 302
    client.force_login(analyst)
    assert client.get("/sign-out/").status_code == 405


def test_sign_out_asks_for_the_token_of_the_page(analyst: User) -> None:
    client = Client(enforce_csrf_checks=True)
    client.force_login(analyst)
    assert client.post("/sign-out/").status_code == 403


def test_list_finds_people(client, analyst: User, auditor: User) -> None:
    client.force_login(auditor)
    page = client.get("/people/", {"q": "castell"}).content.decode()
    assert "Ines Castell" in page
    assert 'href="/people/rlindqvist/"' not in page.split("<main")[1]


def test_list_asks_the_same_queries_for_one_and_for_many(client, administrator: User, django_assert_max_num_queries):
    client.force_login(administrator)
    with django_assert_max_num_queries(5):
        client.get("/people/")
    for number in range(12):
        record_user(
            by=administrator, username=f"guest{number}", full_name=f"Guest {number}", roles=["analyst"],
            password=PASSWORD,
        )  # fmt: skip
    with django_assert_max_num_queries(5):
        assert "Guest 11" in client.get("/people/").content.decode()


def test_record_makes_an_account(client, administrator: User) -> None:
    client.force_login(administrator)
    typed = {"username": "lmarsh", "full_name": "Lena Marsh", "roles": ["analyst"], "password": PASSWORD}
    with one_event("user.record"):
        answer = client.post("/people/record/", typed)
    assert answer["Location"] == "/people/lmarsh/"
    again = client.post("/people/record/", typed)
    assert again.status_code == 409
    assert "is taken. Choose another" in again.content.decode()
    assert PASSWORD not in again.content.decode()


def test_detail_lets_an_administrator_correct(client, administrator: User, analyst: User) -> None:
    client.force_login(administrator)
    typed = {"full_name": "Ines C. Castell", "roles": ["analyst"], "reason": "married"}
    with one_event("user.correct"):
        assert client.post("/people/icastell/", typed).status_code == 302
    assert "full name: Ines Castell" in client.get("/people/icastell/").content.decode()


def test_detail_refuses_a_correction_by_others(client, analyst: User) -> None:
    client.force_login(analyst)
    before = all_records()
    typed = {"full_name": "Ines C. Castell", "roles": ["administrator"], "reason": "why not"}
    answer = client.post("/people/icastell/", typed)
    assert answer.status_code == 409
    assert "is not an administrator" in answer.content.decode()
    assert all_records() == before


def test_close_ends_an_account(client, administrator: User, analyst: User) -> None:
    client.force_login(administrator)
    refused = client.post(reverse("user-close", args=["icastell"]), {"reason": ""})
    assert (refused.status_code, User.objects.get(username="icastell").is_active) == (409, True)
    client.post(reverse("user-close", args=["icastell"]), {"reason": "left the laboratory"})
    client.logout()
    assert sign_in(client, "icastell").status_code == 401


def test_change_password_keeps_the_session(client, analyst: User) -> None:
    client.force_login(analyst)
    typed = {"current": PASSWORD, "password": "a battery of staples 7"}
    assert client.post("/people/password/", typed)["Location"] == "/people/icastell/"
    assert client.get("/register/").status_code == 200
    wrong = client.post("/people/password/", typed)
    assert wrong.status_code == 409
    assert "Current password is not right" in wrong.content.decode()
