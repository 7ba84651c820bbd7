"""What every page knows: places by role, the present one, the lab's name."""

import pytest
from django.http import HttpResponse
from django.test import RequestFactory
from django.urls import path, resolve

from labrecords.models import User
from labrecords.views.context import PLACES, page


def answer(_request):
    return HttpResponse()


urlpatterns = [path(f"{place.name}/", answer, name=place.name) for place in PLACES]
urlpatterns += [path("runs/1/", answer, name="run-sheet"), path("find/", answer, name="find-number")]

pytestmark = pytest.mark.urls(__name__)


def context(*roles, address="/runs/1/"):
    request = RequestFactory().get(address)
    request.user = User(username="castell", full_name="I. Castell", roles=list(roles))
    request.resolver_match = resolve(address)
    return page(request)


def labels(*roles):
    return [place["label"] for place in context(*roles)["navigation"]]


@pytest.mark.parametrize(
    ("role", "seen", "hidden"),
    [
        ("analyst", "Bench", "Audit"),
        ("supervisor", "Reviews", None),
        ("auditor", "Audit", "Bench"),
        ("administrator", "Register", "Batches"),
    ],
)
def test_navigation_shows_the_places_of_a_role(role, seen, hidden):
    assert seen in labels(role)
    assert hidden not in labels(role)


def test_navigation_marks_the_place_a_page_belongs_to():
    current = [place["label"] for place in context("analyst")["navigation"] if place["current"]]
    assert current == ["Bench"]


def test_navigation_counts_reviews_for_supervisors_only():
    counts = {place["label"]: place["count"] for place in context("auditor")["navigation"]}
    assert counts["Reviews"] == 0


@pytest.mark.django_db
def test_navigation_asks_for_the_review_count_once(django_assert_num_queries):
    reviews = next(place for place in context("supervisor")["navigation"] if place["label"] == "Reviews")
    with django_assert_num_queries(2):  # runs and standardizations
        assert reviews["count"]() == reviews["count"]() == 0


def test_page_of_a_stranger_has_no_places():
    request = RequestFactory().get("/runs/1/")
    request.resolver_match = None
    known = page(request)
    assert known["navigation"] == []
    assert known["find_url"] == ""


def test_page_offers_the_find_field_to_who_is_signed_in():
    assert context("auditor")["find_url"] == "/find/"
