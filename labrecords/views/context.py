"""What every page knows: the laboratory, the places a role may go, what waits for review."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import Any

from django.conf import settings
from django.http import HttpRequest
from django.urls import NoReverseMatch, reverse

from labrecords.queries.run import review_count

EVERYONE = frozenset({"analyst", "supervisor", "auditor", "administrator"})
READERS = frozenset({"analyst", "supervisor", "auditor"})


@dataclass(frozen=True, slots=True)
class Place:
    """One entry of the navigation; ``owns`` are the nouns whose pages belong to it."""

    label: str
    name: str
    roles: frozenset[str]
    owns: tuple[str, ...]


SHEETS = ("bench", "run", "standardization", "sample")
REGISTERED = (
    "register",
    "standard",
    "titrant",
    "titrant_lot",
    "instrument",
    "substance",
    "method",
    "product",
    "user",
)

PLACES = (
    Place("Bench", "bench-list", frozenset({"analyst", "supervisor"}), SHEETS),
    Place("Reviews", "review-list", frozenset({"supervisor", "auditor"}), ("review", "investigation")),
    Place("Batches", "batch-list", READERS, ("batch", "certificate")),
    Place("Charts", "control_chart-list", READERS, ("control_chart", "control_sample")),
    Place("Lineage", "lineage-find", READERS, ("lineage",)),
    Place("Register", "register-home", EVERYONE, REGISTERED),
    Place("Audit", "audit-list", frozenset({"auditor", "supervisor", "administrator"}), ("audit",)),
)


def page(request: HttpRequest) -> dict[str, Any]:
    """Context of the layout."""
    person = getattr(request, "user", None)  # a request refused early has none
    roles = frozenset(getattr(person, "roles", ()))
    return {
        "lab_name": getattr(settings, "LAB_NAME", "Titration records"),
        "time_zone": settings.TIME_ZONE,
        "demo": getattr(settings, "DEMO", False),
        "home_url": "/",
        "find_url": _address("find-number") if roles else "",
        "sign_out_url": _address("user-sign_out") if roles else "",
        "navigation": navigation(request, roles=roles),
    }


def navigation(request: HttpRequest, *, roles: frozenset[str]) -> list[dict[str, Any]]:
    """The places these roles may go, the present one marked, with the count that waits for review."""
    noun = _noun(request)
    return [
        {
            "label": place.label,
            "url": _address(place.name),
            "current": noun in place.owns,
            "count": _waiting_for(place, roles=roles),
        }
        for place in PLACES
        if place.roles & roles and _address(place.name)
    ]


def _waiting_for(place: Place, *, roles: frozenset[str]) -> Callable[[], int] | int:
    """Only a supervisor is told; a callable, so that a page without the layout asks nothing."""
    if place.label == "Reviews" and "supervisor" in roles:
        return _once(review_count)
    return 0


def _once(count: Callable[[], int]) -> Callable[[], int]:
    """The header names the count twice and asks for it once."""
    known: list[int] = []

    def value() -> int:
        if not known:
            known.append(count())
        return known[0]

    return value


def _noun(request: HttpRequest) -> str:
    match = request.resolver_match
    return (match.url_name or "").partition("-")[0] if match else ""


def _address(name: str) -> str:
    """Where a place is; a place without pages in this installation is left out of the navigation."""
    try:
        return reverse(name)
    except NoReverseMatch:
        return ""
