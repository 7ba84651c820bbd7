"""What went wrong, in a sentence with what to do next; nothing of the inside shows."""

from __future__ import annotations

from collections.abc import Iterator
from contextlib import contextmanager

import pytest
from django.core.exceptions import SuspiciousOperation
from django.http import HttpRequest, HttpResponse
from django.test import Client
from django.urls import path, reverse

from labrecords import urls
from labrecords.models import AuditEvent, User

pytestmark = pytest.mark.django_db


def fails(request: HttpRequest) -> HttpResponse:
    raise ZeroDivisionError("a secret of the inside")


def suspects(request: HttpRequest) -> HttpResponse:
    raise SuspiciousOperation("a secret of the inside")


# The site's own handlers over its own addresses, and two more that go wrong.
handler400, handler403, handler404, handler500 = (
    urls.handler400,
    urls.handler403,
    urls.handler404,
    urls.handler500,
)
urlpatterns = [*urls.urlpatterns, path("fails/", fails), path("suspects/", suspects)]


@pytest.fixture
def desk(client: Client, supervisor: User, settings) -> Client:
    settings.DEBUG = False
    client.force_login(supervisor)
    return client


@contextmanager
def no_event() -> Iterator[None]:
    """The block leaves the trail as it was."""
    before = AuditEvent.objects.count()
    yield
    assert AuditEvent.objects.count() == before


@pytest.mark.parametrize("address", ["/nothing/here/", "/runs/R-99-99999/", "/audit/999999/"])
def test_not_found_says_where_to_look(desk: Client, address: str) -> None:
    answer = desk.get(address)
    assert answer.status_code == 404
    assert "There is no record at this address" in answer.content.decode()


def test_forbidden_says_whose_page_it_is(desk: Client) -> None:
    answer = desk.get(reverse("audit-integrity"))
    assert answer.status_code == 403
    assert "This page is for auditors and administrators." in answer.content.decode()


@pytest.mark.urls(__name__)
def test_broken_shows_nothing_of_the_inside(desk: Client) -> None:
    desk.raise_request_exception = False
    answer = desk.get("/fails/")
    assert answer.status_code == 500
    assert "Nothing was half saved" in answer.content.decode()
    assert "secret" not in answer.content.decode()


@pytest.mark.urls(__name__)
def test_bad_request_shows_nothing_of_the_inside(desk: Client) -> None:
    answer = desk.get("/suspects/")
    assert answer.status_code == 400
    assert "This request was not understood" in answer.content.decode()
    assert "secret" not in answer.content.decode()


@pytest.mark.parametrize("address", ["/runs/a%00b/", "/find/?q=%00", "/batches/?%00=1", "/api/substances/%00/"])
def test_nul_in_an_address_is_refused(desk: Client, address: str) -> None:
    answer = desk.get(address)
    assert answer.status_code == 400
    assert "holds the character NUL" in answer.content.decode()


def test_nul_in_a_form_is_refused(desk: Client) -> None:
    with no_event():
        answer = desk.post(reverse("control_chart-record"), {"code": "A\x00", "title": "x"})
    assert answer.status_code == 400


def test_page_without_its_token_is_refused(supervisor: User) -> None:
    client = Client(enforce_csrf_checks=True)
    client.force_login(supervisor)
    with no_event():
        assert client.post(reverse("control_chart-record"), {"code": "A"}).status_code == 403
