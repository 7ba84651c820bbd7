"""Who may open what: every address of the site, every role; whatever is not opened is closed."""

from __future__ import annotations

import pytest
from django.urls import URLPattern, reverse

from labrecords.models import Role, User
from labrecords.services.user import close_user
from labrecords.urls import urlpatterns
from tests.support.trail import all_records

pytestmark = pytest.mark.django_db
OPEN_TO_STRANGERS = {"user-sign_in", "health-check"}
ROUTES = [pattern for pattern in urlpatterns if isinstance(pattern, URLPattern)]
GUARDED = [pattern for pattern in ROUTES if pattern.name not in OPEN_TO_STRANGERS]


def address(route: URLPattern) -> str:
    """The route with a number in every place; whether a record has it is asked after the role."""
    return reverse(route.name, kwargs=dict.fromkeys(route.pattern.converters, 1))


@pytest.fixture
def one_of_each(analyst: User, supervisor: User, auditor: User, administrator: User) -> dict[str, User]:
    return {"analyst": analyst, "supervisor": supervisor, "auditor": auditor, "administrator": administrator}


@pytest.mark.parametrize("route", GUARDED, ids=lambda route: route.name)
def test_every_route_says_whose_it_is(route: URLPattern) -> None:
    assert set(route.callback.roles) <= set(Role.values)


@pytest.mark.parametrize("method", ["get", "post"])
@pytest.mark.parametrize("route", GUARDED, ids=lambda route: route.name)
def test_every_route_sends_strangers_to_sign_in(client, route: URLPattern, method: str) -> None:
    answer = getattr(client, method)(address(route))
    assert answer.status_code == 302
    assert answer["Location"] == f"{reverse('user-sign_in')}?next={address(route)}"


@pytest.mark.parametrize("route", [item for item in GUARDED if item.callback.roles], ids=lambda item: item.name)
def test_every_route_is_closed_to_the_other_roles(client, route: URLPattern, one_of_each: dict[str, User]) -> None:
    before = all_records()
    for role in set(one_of_each) - set(route.callback.roles):
        client.force_login(one_of_each[role])
        for method in (client.get, client.post):
            answer = method(address(route))
            assert answer.status_code == 403
            assert f"You are signed in as {one_of_each[role].full_name}." in answer.content.decode()
    assert all_records() == before


@pytest.mark.parametrize("route", GUARDED, ids=lambda route: route.name)
def test_no_route_deletes(client, route: URLPattern, one_of_each: dict[str, User]) -> None:
    client.force_login(one_of_each[next(iter(route.callback.roles or ["analyst"]))])
    assert client.delete(address(route)).status_code == 405


def test_account_that_is_closed_is_a_stranger(client, analyst: User, administrator: User) -> None:
    client.force_login(analyst)
    assert client.get(reverse("register-home")).status_code == 200
    close_user(analyst, by=administrator, reason="left the laboratory")
    assert client.get(reverse("register-home")).status_code == 302
