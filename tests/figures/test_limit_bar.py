"""The limit bar: value, interval, limits, guard band."""

from xml.etree import ElementTree

import pytest

from labrecords.figures.limit_bar import limit_bar, scale

SVG = "{http://www.w3.org/2000/svg}"


def output(*, value=6.113, outcome="conforms", lower="6.00", upper="6.40", guard=0.0, probability=0.99998):
    verdict = {
        "outcome": outcome, "rounded": "6.11", "lower": lower, "upper": upper, "guard": guard,
        "probability": probability, "sentence": "6.11 lies within 6.00 to 6.40.",
    }  # fmt: skip
    return {"value": value, "U": 0.034, "unit": "g/100 mL", "verdict": verdict}


def drawn(outcome_of=None, **more):
    return ElementTree.fromstring(limit_bar(outcome_of or output(**more), places=2))


def words(tree):
    return [piece.text for piece in tree.iter(f"{SVG}text")]


def test_limit_bar_writes_limits_with_the_places_of_the_specification():
    assert {"6.00", "6.40", "lower limit", "upper limit"} <= {*words(drawn())}


def test_limit_bar_never_claims_certainty():
    assert "probability of conformity over 99.9\xa0%" in words(drawn(probability=1.0))


def test_limit_bar_tells_value_uncertainty_unit_and_limits():
    told = drawn().find(f"{SVG}desc").text
    assert "6.113 ± 0.034\xa0g/100 mL; lower limit 6.00, upper limit 6.40." in told


def test_limit_bar_hatches_a_guard_band_at_each_limit():
    assert str(limit_bar(output(guard=0.034), places=2)).count("line-hatch") == 2
    assert "line-hatch" not in limit_bar(output(), places=2)


def test_limit_bar_with_one_limit_draws_one():
    assert "upper limit" not in words(drawn(upper=None))


@pytest.mark.parametrize(
    ("outcome", "mark"),
    [("conforms", "<circle"), ("inconclusive", "M0 -6L6 5"), ("does_not_conform", "M-5 -5")],
)
def test_limit_bar_gives_each_verdict_its_own_mark(outcome, mark):
    assert mark in limit_bar(output(outcome=outcome), places=2)


def test_limit_bar_without_a_specification_is_empty():
    assert limit_bar(output() | {"verdict": None}, places=2) == ""


def test_limit_bar_compact_keeps_the_numbers_of_the_limits():
    tree = ElementTree.fromstring(limit_bar(output(), places=2, compact=True))
    assert words(tree) == ["6.00", "6.40"]


def test_scale_holds_value_interval_and_limits():
    low, high = scale(6.52, spread=0.03, lower=6.0, upper=6.4)
    assert low < 6.0
    assert high > 6.55


def test_scale_of_a_bare_value_has_a_width():
    low, high = scale(5.0, spread=0.0, lower=None, upper=None)
    assert low < 5.0 < high
