"""A curve by every family: one decides, another checks, and a person is asked where they do not agree."""

from __future__ import annotations

import time
from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from analysis.curve import Curve, clean_curve
from analysis.endpoint import FAMILIES, CurveSettings, evaluate_curve
from analysis.system import Analyte, System
from tests.support.known_curves import ACETIC, STRONG, recorded, strong_acid, two_lines

VOLUMES = np.round(np.arange(0.0, 16.01, 0.2), 3)
MODEL = CurveSettings(deciding="model", checking="gran", system=ACETIC)


def buffer_only() -> Curve:
    return clean_curve(np.linspace(0, 20, 41), np.linspace(4.0, 4.4, 41), quantity="pH")


def test_evaluate_curve_decides_by_the_model_and_checks_by_gran() -> None:
    found = evaluate_curve(recorded(ACETIC, 1.0), settings=MODEL)
    assert (found.decided.family, found.decided.kind) == ("model", "equivalence point")
    assert abs(found.decided.volume - 10.0) < 4 * found.decided.standard_uncertainty
    assert found.checked is not None
    assert found.checked.family == "gran"
    combined = np.hypot(found.decided.standard_uncertainty, found.checked.standard_uncertainty)
    assert found.agreement == pytest.approx(abs(found.decided.volume - found.checked.volume) / combined)
    assert (found.needs_person, found.flags) == (False, ())


def test_evaluate_curve_reports_every_family_that_applies() -> None:
    found = evaluate_curve(recorded(ACETIC, 1.0), settings=replace(MODEL, fixed_reading=8.5))
    assert set(found.endpoints) == set(FAMILIES) - {"segments"}
    for family, ends in found.endpoints.items():
        assert ends[0].volume == pytest.approx(10.0, abs=0.1), family
        assert ends[0].kind == ("equivalence point" if family in ("model", "gran") else "endpoint")


def test_evaluate_curve_asks_a_person_when_two_families_disagree() -> None:
    # The endpoint at a reading of pH 7 comes too early for a weak acid, by much more than its uncertainty.
    wrong = CurveSettings(deciding="model", checking="fixed", fixed_reading=6.0, system=ACETIC)
    found = evaluate_curve(recorded(ACETIC, 1.0), settings=wrong)
    assert found.needs_person
    assert found.agreement is not None
    sentence = f"Model and fixed differ by {found.agreement:.1f} combined standard uncertainties."
    assert sentence in found.flags
    assert not evaluate_curve(recorded(ACETIC, 1.0), settings=replace(wrong, agreement_limit=1e6)).needs_person


def test_evaluate_curve_says_that_another_number_of_endpoints_was_expected() -> None:
    phosphoric = System("acid_base", "base", 0.1, 50.0, (Analyte("phosphoric acid", (2.148, 7.198, 12.35)),))
    curve = recorded(phosphoric, 0.6)
    one = evaluate_curve(curve, settings=CurveSettings("derivative"))
    assert one.flags == ("2 endpoints found, 1 expected.",)
    assert one.needs_person
    two = evaluate_curve(curve, settings=CurveSettings("derivative", expected=2, chosen=2))
    assert two.decided.volume == pytest.approx(12.0, abs=0.06)
    assert (two.needs_person, two.flags) == (False, ())


def test_evaluate_curve_says_that_a_coarse_step_limits_a_derivative() -> None:
    curve = strong_acid(np.linspace(0.0, 20.0, 41), at=10.1)
    found = evaluate_curve(curve, settings=CurveSettings("derivative"))
    assert found.flags == ("Volume step at the endpoint 0.50 mL: a derivative endpoint is uncertain by 0.25 mL.",)
    assert abs(found.decided.volume - 10.1) < 0.25


def test_evaluate_curve_says_where_the_reading_reverses() -> None:
    good = strong_acid(VOLUMES)
    readings = good.reading.copy()
    readings[20] -= 0.5  # at 4.0 mL
    found = evaluate_curve(replace(good, reading=readings), settings=CurveSettings("derivative"))
    fall = readings[19] - readings[20]
    assert found.flags[0] == f"The reading reverses by {fall:.2g} pH at 4.00 mL."


def test_evaluate_curve_tells_which_way_it_went() -> None:
    curve = recorded(ACETIC, 1.0)
    assert evaluate_curve(curve, settings=MODEL).direction == "Rising curve: an acid titrated with base."
    falling = Curve(curve.volume, 14 - curve.reading, "pH", ())
    odd = CurveSettings(deciding="derivative", system=ACETIC)
    found = evaluate_curve(falling, settings=odd)
    assert found.needs_person
    assert "Falling curve: a base titrated with acid. The method titrates with base" in found.flags[0]


def test_evaluate_curve_asks_a_person_when_the_check_finds_nothing() -> None:
    found = evaluate_curve(
        strong_acid(VOLUMES), settings=CurveSettings("derivative", checking="fixed", fixed_reading=13.9)
    )  # fmt: skip
    assert found.needs_person
    assert found.checked is None
    assert found.flags[0].startswith("The checking family fixed finds no endpoint: The curve runs from")


def test_evaluate_curve_of_conductivity_is_a_crossing() -> None:
    found = evaluate_curve(two_lines(VOLUMES, at=9.87, slopes=(-0.4, 0.3)), settings=CurveSettings("segments"))
    assert found.decided.volume == pytest.approx(9.87, abs=1e-6)
    assert found.decided.kind == "equivalence point"


@pytest.mark.parametrize(
    ("curve", "given_settings", "sentence"),
    [
        (
            buffer_only(), CurveSettings("derivative"),
            r"^No endpoint found: the reading changes by only 0\.4 pH over 20 mL \(needs 1\)\.$",
        ),
        (
            strong_acid(np.linspace(0.0, 9.99, 60)), CurveSettings("derivative"),
            "^No endpoint found: there is no jump, or the curve stops before it",
        ),
        (strong_acid(VOLUMES), CurveSettings("magic"), "^Family is 'magic'; expected one of model, gran"),
        (strong_acid(VOLUMES), CurveSettings("fixed"), r"^The family fixed needs a reading, such as pH 8\.2"),
        (strong_acid(VOLUMES), CurveSettings("model"), "^The family model finds no endpoint on this curve"),
        (strong_acid(VOLUMES), CurveSettings("derivative", chosen=2), "^Endpoint 2 is wanted and 1 found by the fam"),
        (strong_acid(VOLUMES), CurveSettings("derivative", chosen=0), "^Chosen endpoint is 0; 1 or more is expected"),
        (strong_acid(VOLUMES), CurveSettings("derivative", expected=0), "^Expected endpoints is 0; 1 or more"),
    ],
)  # fmt: skip
def test_evaluate_curve_refuses_with_a_sentence(curve: Curve, given_settings: CurveSettings, sentence: str) -> None:
    with pytest.raises(ValueError, match=sentence):
        evaluate_curve(curve, settings=given_settings)


@st.composite
def anything(draw: st.DrawFn) -> Curve:
    """Jumps, lines and scatter of any size on even and uneven grids; often no curve at all."""
    quantity, low, high = draw(
        st.sampled_from([("pH", -2.0, 16.0), ("mV", -2e3, 2e3), ("conductivity", -1e3, 1e3), ("absorbance", -1.0, 5.0)])
    )
    size, top = draw(st.integers(8, 40)), draw(st.sampled_from([1e-3, 1.0, 20.0, 1e3]))
    rng = np.random.default_rng(draw(st.integers(0, 10**6)))
    v = np.sort(rng.uniform(0, top, size)) if draw(st.booleans()) else np.linspace(0, top, size)
    if draw(st.integers(0, 4)) == 0:
        return clean_curve(v, draw(st.lists(st.floats(low, high), min_size=size, max_size=size)), quantity=quantity)
    at, width = draw(st.floats(0, 1)) * top, draw(st.sampled_from([1e-3, 0.02, 0.3])) * top
    step, line = draw(st.floats(-0.45, 0.45)) * np.tanh((v - at) / width), draw(st.floats(-0.2, 0.2)) * v / top
    y = (low + high) / 2 + (high - low) * (step + line + rng.normal(0, 1, size) * draw(st.sampled_from([0, 1e-3, 0.1])))
    return clean_curve(v, np.clip(y, low, high), quantity=quantity)


@settings(max_examples=300, deadline=None)
@given(st.data(), st.sampled_from(FAMILIES), st.sampled_from([None, ACETIC, STRONG]))
def test_evaluate_curve_finds_or_refuses_on_any_curve(data: st.DataObject, family: str, system: System | None) -> None:
    said, volume, u = "", 0.0, 0.0
    try:
        curve = data.draw(anything())
        end = evaluate_curve(
            curve, settings=CurveSettings(family, "gran", fixed_reading=8.2, system=system)
        ).decided  # fmt: skip
        volume, u = end.volume, end.standard_uncertainty
    except ValueError as refusal:
        said = str(refusal)
    assert said == "" or said.endswith((".", "needed"))
    assert np.isfinite(volume)
    assert 0 <= u < np.inf


@pytest.mark.parametrize("family", ["derivative", "model", "fixed"])
def test_evaluate_curve_takes_ten_thousand_points_in_less_than_a_second(family: str) -> None:
    volumes = np.linspace(0.0, 20.0, 10_000)
    settings = CurveSettings(family, "gran", fixed_reading=7.0, system=replace(STRONG, activity=False))
    start = time.perf_counter()
    found = evaluate_curve(strong_acid(volumes, noise=0.01), settings=settings)
    assert time.perf_counter() - start < 1.0
    assert found.decided.volume == pytest.approx(10.0, abs=0.01)
