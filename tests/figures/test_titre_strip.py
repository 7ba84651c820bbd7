"""The titre strip: what counts, what is struck, where the bracket is."""

from xml.etree import ElementTree

import pytest

from labrecords.figures.titre_strip import titre_strip

SVG = "{http://www.w3.org/2000/svg}"


def titration(number, titre, *, in_set=True, excluded=False, blank=False):
    return {"number": number, "titre": titre, "in_set": in_set, "excluded": excluded, "blank": blank}


TITRES = [titration(1, 10.6, in_set=False), titration(2, 10.0), titration(3, 10.05), titration(4, 10.0)]


def drawn(titrations, *, limit=0.10, **more):
    return ElementTree.fromstring(titre_strip(titrations, limit=limit, **more))


def words(tree):
    return [piece.text for piece in tree.iter(f"{SVG}text")]


def filled_dots(tree):
    return [dot for dot in tree.iter(f"{SVG}circle") if dot.get("fill") != "none"]


def test_titre_strip_fills_only_what_counts():
    tree = drawn(TITRES)
    assert len(filled_dots(tree)) == 3
    assert len(list(tree.iter(f"{SVG}circle"))) == 4


def test_titre_strip_names_the_range_of_the_set():
    assert "range 0.05" in words(drawn(TITRES))


def test_titre_strip_leaves_the_blank_out():
    tree = drawn([*TITRES, titration(1, 0.05, blank=True)])
    assert len(list(tree.iter(f"{SVG}circle"))) == 4


def test_titre_strip_tells_an_exclusion_in_words():
    tree = drawn([titration(1, 10.0, excluded=True), titration(2, 10.05)])
    assert "Titration 1: 10.000, excluded." in tree.find(f"{SVG}desc").text


def test_titre_strip_brackets_as_wide_as_the_limit():
    tree = drawn(TITRES, limit=0.10)
    band = next(tree.iter(f"{SVG}rect"))
    # 0.10 mL of a scale of 0.60 mL over 88 % of the width
    assert float(band.get("width")[:-1]) == pytest.approx(88 * 0.10 / 0.60, abs=0.02)


def test_titre_strip_of_no_titre_says_so():
    assert words(drawn([titration(1, None)])) == ["No titre yet"]


def test_titre_strip_of_equal_titres_has_a_scale():
    tree = drawn([titration(1, 10.0), titration(2, 10.0)])
    assert {"9.90", "10.10"} <= {*words(tree)}


def test_titre_strip_has_no_inline_style():
    assert "style=" not in titre_strip(TITRES, limit=0.10)
