"""The template tags of numbers, dates and states."""

from datetime import UTC, datetime
from decimal import Decimal

import pytest
from django.template import Context, Template
from django.test import RequestFactory


def written(source, **context):
    return Template("{% load lab %}" + source).render(Context(context)).replace("\N{NO-BREAK SPACE}", " ")


def test_result_shows_value_uncertainty_and_unit():
    assert "6.113 ± 0.034 g/100 mL" in written("{% result v u unit %}", v=6.11312, u=0.0338, unit="g/100 mL")


def test_result_of_nothing_is_a_dash():
    assert written("{% result v u unit %}", v=None, u=None, unit="g/L") == "–"


def test_result_keeps_a_hostile_unit_as_text():
    assert "<b>" not in written("{% result 1.0 0.1 unit %}", unit="<b>")


def test_big_result_makes_the_value_the_hero():
    shown = written('{% big_result 6.11312 0.0338 "g/L" 2.0 %}')
    assert shown == '<span class="big">6.113</span> <small>± 0.034 g/L, k = 2</small>'


@pytest.mark.parametrize(
    ("source", "shown"),
    [
        ("{{ v|places:1 }}", "12.3"), ("{{ v|reading }}", "12.30"), ("{{ v|significant:2 }}", "12"),
        ("{{ share|percent:1 }}", "42.3 %"), ("{{ none|places:2 }}", "–"), ("{{ none|reading }}", "–"),
        ("{{ none|pointed:2 }}", ""), ("{{ none|when }}", "–"), ("{{ none|day }}", "–"),
    ],
)  # fmt: skip
def test_numbers_are_written_by_their_filter(source, shown):
    assert written(source, v=Decimal("12.30"), share=0.423, none=None) == shown


def test_when_is_in_the_laboratory_zone_and_exact_for_machines(settings):
    settings.TIME_ZONE = "Europe/Athens"
    shown = written("{{ at|when }}", at=datetime(2026, 11, 24, 9, 42, 16, tzinfo=UTC))
    assert shown == '<time datetime="2026-11-24T09:42:16+00:00">24 Nov 2026 11:42 EET</time>'


def test_day_of_a_moment_is_the_day_in_the_laboratory(settings):
    settings.TIME_ZONE = "Pacific/Auckland"
    assert written("{{ at|day }}", at=datetime(2026, 11, 24, 20, 0, tzinfo=UTC)) == "25 Nov 2026"


@pytest.mark.parametrize(
    ("state", "look"),
    [
        ("approved", "is-good"), ("on hold", "is-person"), ("does_not_conform", "is-out"), ("open", ""),
        ("void", "is-out"), ("superseded", ""),
    ],
)  # fmt: skip
def test_state_class_gives_a_state_its_mark(state, look):
    assert written("{{ state|state_class }}", state=state) == look


def test_spoken_state_has_no_underscore():
    assert written("{{ state|spoken }}", state="does_not_conform") == "does not conform"


def test_other_page_keeps_the_filters():
    request = RequestFactory().get("/batches", {"q": "TV 26", "page": "2"})
    assert written("{% other_page request 3 %}", request=request) == "?q=TV+26&amp;page=3"
