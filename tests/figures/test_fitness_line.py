"""The fitness line: fresh, near its end, past it."""

from xml.etree import ElementTree

import pytest

from labrecords.figures.fitness_line import fitness_line

SVG = "{http://www.w3.org/2000/svg}"


def filled(gone):
    tree = ElementTree.fromstring(fitness_line(gone, label="5 days left"))
    return list(tree.iter(f"{SVG}rect"))[1]


@pytest.mark.parametrize(("gone", "width"), [(0.0, "0.0%"), (0.62, "62.0%"), (1.4, "100.0%"), (-0.1, "0.0%")])
def test_fitness_line_is_as_long_as_the_life_that_is_gone(gone, width):
    assert filled(gone).get("width") == width


@pytest.mark.parametrize(("gone", "colour"), [(0.84, "teal"), (0.85, "amber"), (1.0, "magenta")])
def test_fitness_line_turns_before_and_at_its_end(gone, colour):
    assert filled(gone).get("class") == f"fill-{colour}"


def test_fitness_line_marks_more_than_by_colour():
    assert "<path" not in fitness_line(0.5, label="fresh")
    assert "<path" in fitness_line(0.9, label="near")


def test_fitness_line_says_the_same_in_words():
    assert 'aria-label="5 days left. 62 % of its life is gone."' in fitness_line(0.62, label="5 days left")
