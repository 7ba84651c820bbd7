"""How templates write numbers, units, dates and states: ``{% load lab %}``."""

from __future__ import annotations

from datetime import date, datetime
from typing import Any

from django import template
from django.http import HttpRequest
from django.utils import timezone
from django.utils.html import format_html
from django.utils.safestring import SafeString

from labrecords import writing

register = template.Library()

DASH = "\N{EN DASH}"

GOOD = frozenset(
    {
        "approved",
        "in use",
        "in_use",
        "effective",
        "released",
        "conforms",
        "closed",
        "ready",
        "in force",
        "accepted",
        "passed",
        "valid",
        "done",
    }
)
PERSON = frozenset(
    {
        "submitted",
        "returned",
        "on hold",
        "on_hold",
        "in question",
        "in_question",
        "inconclusive",
        "quarantined",
        "waiting",
        "due",
        "phase_1",
        "phase_2",
    }
)
OUT = frozenset(
    {
        "rejected",
        "withdrawn",
        "expired",
        "void",
        "does not conform",
        "does_not_conform",
        "blocked",
        "overdue",
        "failed",
        "out",
    }
)


@register.filter
def places(value: Any, digits: int) -> str:
    """``{{ value|places:3 }}``: so many decimals, a half rounded up."""
    return DASH if _missing(value) else writing.places(value, digits=int(digits))


@register.filter
def reading(value: Any) -> str:
    """``{{ reading|reading }}``: the digits as typed."""
    return DASH if _missing(value) else writing.reading(value)


@register.filter
def short(value: Any) -> str:
    """``{{ limit|short }}``: without the zeros that only the column adds."""
    return DASH if _missing(value) else writing.short(value)


@register.filter
def limit(value: Any, digits: int) -> str:
    """``{{ limit.lower|limit:limit.places }}``: with the decimals it is compared at."""
    return "" if _missing(value) else writing.limit(value, digits=int(digits))


@register.filter
def pointed(value: Any, digits: int) -> str:
    """``{{ reading|pointed:4 }}``: a column of different places meets at the point."""
    return "" if _missing(value) else writing.pointed(value, digits=int(digits))


@register.filter
def significant(value: Any, figures: int = 2) -> str:
    """``{{ u|significant:2 }}``: so many significant figures."""
    return DASH if _missing(value) else writing.significant(value, figures=int(figures))


@register.filter
def percent(share: Any, digits: int = 0) -> str:
    """``{{ share|percent:1 }}``: 0.423 is written 42.3 %."""
    return DASH if _missing(share) else writing.percent(share, digits=int(digits))


@register.filter
def probability(value: Any) -> str:
    """``{{ verdict.probability|probability }}``: per cent that never claims certainty."""
    return DASH if _missing(value) else writing.probability(value)


@register.filter
def when(moment: datetime | None) -> SafeString | str:
    """24 Nov 2026 09:42 GMT in the laboratory's zone, with the exact moment for machines."""
    if moment is None:
        return DASH
    local = timezone.localtime(moment)
    return format_html('<time datetime="{}">{}</time>', moment.isoformat(), writing.when(local))


@register.filter
def day(value: date | None) -> str:
    """24 Nov 2026; a moment is taken in the laboratory's zone."""
    if value is None:
        return DASH
    return writing.day(timezone.localtime(value) if isinstance(value, datetime) else value)


@register.filter
def state_class(state: Any) -> str:
    """The class that gives a state its mark: in force, needs a person, out, or none."""
    word = str(state).lower()
    for name, words in (("is-good", GOOD), ("is-person", PERSON), ("is-out", OUT)):
        if word in words:
            return name
    return ""


@register.filter
def spoken(state: Any) -> str:
    """A stored state as words: ``on_hold`` is written "on hold"."""
    return str(getattr(state, "label", state)).replace("_", " ")


@register.simple_tag
def result(value: Any, expanded: Any, unit: str = "") -> SafeString | str:
    """``{% result value U unit %}``: a value, its uncertainty and its unit, never one alone."""
    if _missing(value):
        return DASH
    text = writing.result(value, expanded=None if _missing(expanded) else expanded, unit=unit)
    return format_html('<span class="number">{}</span>', text)


@register.simple_tag
def big_result(value: Any, expanded: Any, unit: str, k: Any) -> SafeString | str:
    """The hero of a result panel: the value large, its uncertainty, unit and k beside it."""
    if _missing(value) or _missing(expanded):
        return DASH
    digits = writing.digits_allowed(expanded)
    return format_html(
        '<span class="big">{}</span> <small>± {} {}, k = {}</small>',
        writing.value_part(value, expanded=expanded),
        writing.places(expanded, digits=digits),
        unit,
        _factor(k),
    )


@register.simple_tag
def other_page(request: HttpRequest, number: int) -> str:
    """The address of this list, filters kept, at another page."""
    query = request.GET.copy()
    query["page"] = str(number)
    return f"?{query.urlencode()}"


def _factor(k: Any) -> str:
    number = writing.as_decimal(k)
    return str(int(number)) if number == int(number) else writing.places(number, digits=2)


def _missing(value: Any) -> bool:
    return value is None or value == ""
