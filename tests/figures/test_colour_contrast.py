"""Contrast of the colours the style sheet names: WCAG 2.2, relative luminance, 1.4.3, 1.4.6 and 1.4.11."""

import re
from pathlib import Path

import pytest

from labrecords.figures.svg import COLOURS

TOKENS = Path(__file__).parents[2] / "static" / "css" / "tokens.css"


def colours():
    light, dark = TOKENS.read_text().split("@media (prefers-color-scheme: dark)")
    found = [dict(re.findall(r"--([\w-]+): (#[0-9a-f]{6});", part)) for part in (light, dark)]
    return {"light": found[0], "dark": found[0] | found[1]}


def luminance(colour):
    parts = [int(colour[at : at + 2], 16) / 255 for at in (1, 3, 5)]
    linear = [part / 12.92 if part <= 0.04045 else ((part + 0.055) / 1.055) ** 2.4 for part in parts]
    return 0.2126 * linear[0] + 0.7152 * linear[1] + 0.0722 * linear[2]


def contrast(one, other):
    high, low = sorted((luminance(one), luminance(other)), reverse=True)
    return (high + 0.05) / (low + 0.05)


def test_contrast_of_black_on_white_is_twenty_one():
    assert contrast("#000000", "#ffffff") == pytest.approx(21)


@pytest.mark.parametrize("scheme", ["light", "dark"])
@pytest.mark.parametrize("ground", ["paper", "sheet", "well"])
def test_numbers_meet_the_enhanced_contrast(scheme, ground):
    named = colours()[scheme]
    assert contrast(named["ink"], named[ground]) >= 7
    assert contrast(named["ink-2"], named[ground]) >= 7


@pytest.mark.parametrize("scheme", ["light", "dark"])
@pytest.mark.parametrize("meaning", ["teal", "amber", "magenta"])
def test_words_of_a_state_can_be_read_on_their_wash(scheme, meaning):
    named = colours()[scheme]
    assert contrast(named[meaning], named[f"{meaning}-wash"]) >= 4.5
    assert contrast(named[meaning], named["sheet"]) >= 4.5


@pytest.mark.parametrize("scheme", ["light", "dark"])
@pytest.mark.parametrize("ground", ["paper", "sheet", "well"])
def test_quiet_words_and_edges_of_fields_can_be_seen(scheme, ground):
    named = colours()[scheme]
    assert contrast(named["ink-3"], named[ground]) >= 4.5
    assert contrast(named["edge"], named[ground]) >= 3
    assert contrast(named["focus"], named[ground]) >= 3


def test_marks_on_paper_have_the_colours_of_the_light_page():
    named = colours()["light"]
    same = {"quiet": "ink-3", "rule": "edge", "soft": "rule-soft", "hatch": "teal-hatch"}
    assert {name: named[same.get(name, name)] for name in COLOURS} == COLOURS
