"""What must not move an endpoint, what must move it by exactly so much, and what no input may do."""

from __future__ import annotations

import math
import time
from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from analysis.curve import QUANTITIES, Curve, clean_curve
from analysis.derivative import inverse_square_parabola, local_polynomial, second_derivative_zero
from analysis.detection import endpoints_near
from analysis.endpoint import FAMILIES, CurveSettings, evaluate_curve
from analysis.gran import gran
from analysis.noise import noise_of
from tests.support.known_curves import ACETIC, STRONG, recorded, strong_acid, two_lines

few = settings(derandomize=True, deadline=None, max_examples=40)
many = settings(derandomize=True, deadline=None, max_examples=200)
SLOPES = {"derivative": second_derivative_zero, "parabola": inverse_square_parabola, "polynomial": local_polynomial}
IDEAL = replace(STRONG, activity=False)


@st.composite
def jumps(draw: st.DrawFn) -> Curve:
    """A strong acid with its endpoint anywhere, on three grids, with and without scatter; in mV it falls."""
    step, at = draw(st.sampled_from([0.1, 0.25, 0.5])), draw(st.floats(6.0, 14.0))
    noise, seed = draw(st.sampled_from([0.0, 0.003, 0.01])), draw(st.integers(0, 999))
    curve = strong_acid(np.arange(0.0, 20.01, step), at=at, noise=noise, seed=seed)
    return Curve(curve.volume, 59.16 * (7.0 - curve.reading), "mV", ())


@st.composite
def bends(draw: st.DrawFn) -> Curve:
    """Conductivity with its bend anywhere, with and without scatter."""
    slopes = draw(st.sampled_from([(-0.4, 0.3), (0.05, 0.6), (0.5, 0.0)]))
    return two_lines(np.arange(0.0, 20.01, 0.5), at=draw(st.floats(5.0, 15.0)), slopes=slopes,
                     noise=draw(st.sampled_from([0.0, 0.005])))  # fmt: skip


def ends(curve: Curve) -> dict[str, tuple[float, float]]:
    """The endpoint of each family that needs no chemistry and its standard uncertainty."""
    family = "derivative" if curve.quantity == "mV" else "segments"
    settings = CurveSettings(family, fixed_reading=0.0 if curve.quantity == "mV" else None)
    found = evaluate_curve(curve, settings=settings).endpoints
    return {name: (end[0].volume, end[0].standard_uncertainty) for name, end in found.items()}


def changed(curve: Curve, *, zero: float = 0.0, scale: float = 1.0, add: float = 0.0, turn: float = 1.0) -> Curve:
    """The curve on another burette and another meter."""
    return Curve(zero + scale * curve.volume, add + turn * curve.reading, curve.quantity, ())


@few
@given(st.one_of(jumps(), bends()), st.floats(0.0, 50.0))
def test_every_family_moves_with_the_zero_of_the_burette(curve: Curve, zero: float) -> None:
    before, after = ends(curve), ends(changed(curve, zero=zero))
    for family, (volume, u) in before.items():
        assert after[family] == pytest.approx((volume + zero, u), abs=1e-6), family


@few
@given(st.one_of(jumps(), bends()), st.sampled_from([0.01, 0.1, 2.0, 10.0, 37.5]))
def test_every_family_scales_with_the_volume(curve: Curve, scale: float) -> None:
    before, after = ends(curve), ends(changed(curve, scale=scale))
    for family, (volume, u) in before.items():
        assert after[family] == pytest.approx((scale * volume, scale * u), rel=1e-6), family


@few
@given(st.one_of(jumps(), bends()))
def test_every_family_reads_a_curve_upside_down_alike(curve: Curve) -> None:
    before, after = ends(curve), ends(changed(curve, turn=-1.0))
    for family, (volume, u) in before.items():
        assert after[family] == pytest.approx((volume, u), abs=1e-6), family


@few
@given(st.one_of(jumps(), bends()))
def test_every_family_reads_a_curve_back_to_front_as_its_mirror_image(curve: Curve) -> None:
    mirrored = Curve(20.0 - curve.volume[::-1], curve.reading[::-1], curve.quantity, ())
    before, after = ends(curve), ends(mirrored)
    for family, (volume, u) in before.items():
        assert after[family][0] == pytest.approx(20.0 - volume, abs=max(0.5 * u, 1e-6)), family


@few
@given(st.one_of(jumps(), bends()), st.floats(-900.0, 900.0))
def test_a_constant_on_the_meter_moves_no_slope_and_no_bend(curve: Curve, add: float) -> None:
    before, after = ends(curve), ends(replace(changed(curve, add=add)))
    for family in set(before) - {"fixed"}:
        assert after[family] == pytest.approx(before[family], abs=1e-6), family


@few
@given(jumps(), st.floats(-900.0, 900.0), st.floats(0.0, 50.0), st.sampled_from([-1.0, 1.0]))
def test_endpoints_near_counts_the_same_on_any_meter_and_burette(
    curve: Curve, add: float, zero: float, turn: float
) -> None:
    noise = noise_of(curve)
    before = endpoints_near(curve, noise=noise)
    after = endpoints_near(changed(curve, add=add, zero=zero, turn=turn), noise=noise)
    assert after == pytest.approx([place + zero for place in before], abs=1e-4)


def test_rows_in_reverse_order_are_refused() -> None:
    curve = strong_acid(np.linspace(0.0, 20.0, 41))
    with pytest.raises(ValueError, match="No endpoint can be found: 1 usable points, at least 8 needed"):
        clean_curve(curve.volume[::-1], curve.reading[::-1], quantity="pH")


@pytest.mark.parametrize("scale", [0.5, 2.0, 4.0])
@pytest.mark.parametrize("system", [STRONG, ACETIC], ids=["strong", "acetic"])
@pytest.mark.parametrize("family", ["model", "gran"])
def test_chemistry_scales_with_the_volume(scale: float, system, family: str) -> None:
    # The same solution in vessels of other sizes. The scatter of the burette does not grow with them, so that other
    # points weigh more: alike within the uncertainties, and without scatter in the readings close to the truth.
    curve = recorded(system, 1.0, noise=0.0)
    larger = replace(system, sample_volume=scale * system.sample_volume)
    first = evaluate_curve(curve, settings=CurveSettings(family, system=system)).decided
    second = evaluate_curve(changed(curve, scale=scale), settings=CurveSettings(family, system=larger)).decided
    combined = math.hypot(first.standard_uncertainty, second.standard_uncertainty / scale)
    assert abs(second.volume / scale - first.volume) < combined < 0.1 / min(scale, 1.0)
    assert second.volume / scale == pytest.approx(10.0, abs=0.02 / min(scale, 1.0))


@few
@given(st.floats(8.0, 12.0), st.floats(0.0, 20.0))
def test_gran_of_a_strong_acid_moves_with_the_zero_of_the_burette(at: float, zero: float) -> None:
    # What the burette has delivered before the zero counts as part of the sample volume.
    curve = strong_acid(np.linspace(0.0, 16.0, 65), at=at)
    moved = replace(IDEAL, sample_volume=50.0 - zero)
    found = gran(changed(curve, zero=zero), system=moved, near=at + zero)[0]
    assert found - zero == pytest.approx(at, abs=2e-3)


ANY = st.one_of(st.floats(), st.integers(-(10**300), 10**300), st.sampled_from([0.0, -0.0, 1e-320, 1e308, math.pi]))


@many
@given(st.lists(ANY, max_size=30), st.lists(ANY, max_size=30), st.sampled_from([*QUANTITIES, "", "colour"]))
def test_clean_curve_takes_or_refuses_any_numbers(volume: list, reading: list, quantity: str) -> None:
    curve, said = None, ""
    try:
        curve = clean_curve(volume, reading, quantity=quantity)
    except ValueError as refusal:
        said = str(refusal)
    assert (curve is None) == (len(said) > 20)  # a sentence
    if curve is not None:
        assert curve.volume.size == curve.reading.size >= 8
        assert np.all(np.diff(curve.volume) > 0)


@st.composite
def rows(draw: st.DrawFn) -> tuple[list[float], list[float], str]:
    """Rows that may pass for a curve: volumes in any order, some twice, readings within what a meter shows."""
    size = draw(st.integers(8, 24))
    volume = draw(st.lists(st.sampled_from([0.0, 1e-9, 1e-6, 0.1, 1.0, 9.9, 10.0, 10.1, 12.5, 20.0, 999.0, 9999.0]) |
                           st.floats(0.0, 25.0), min_size=size, max_size=size))  # fmt: skip
    quantity, low, high = draw(st.sampled_from([("pH", -2.0, 16.0), ("mV", -2e3, 2e3), ("absorbance", -1e4, 1e4)]))
    reading = draw(st.lists(st.floats(low, high) | st.sampled_from([low, 0.0, 5e-324, high]),
                            min_size=size, max_size=size))  # fmt: skip
    if draw(st.booleans()):
        volume = sorted(volume)
    return volume, sorted(reading) if draw(st.booleans()) else reading, quantity


@many
@given(rows(), st.sampled_from(FAMILIES), st.sampled_from([None, ACETIC, STRONG]), st.integers(1, 3))
def test_evaluate_curve_finds_or_refuses_on_any_rows(given_rows: tuple, family: str, system, chosen: int) -> None:
    volume, reading, quantity = given_rows
    method = CurveSettings(family, "derivative", fixed_reading=8.2, system=system, chosen=chosen)
    end, said = None, ""
    try:
        end = evaluate_curve(clean_curve(volume, reading, quantity=quantity), settings=method).decided
    except ValueError as refusal:
        said = str(refusal)
    assert (end is None) == (len(said) > 20)  # a sentence
    if end is not None:
        assert math.isfinite(end.volume)
        assert 0 <= end.standard_uncertainty < math.inf


@pytest.mark.parametrize("family", ["gran", "polynomial", "parabola"])
def test_ten_thousand_rows_in_any_order_take_less_than_a_second(family: str) -> None:
    good = strong_acid(np.linspace(0.0, 20.0, 10_000), noise=0.02)
    start = time.perf_counter()
    found = evaluate_curve(
        clean_curve(good.volume, good.reading, quantity="pH"), settings=CurveSettings(family, system=IDEAL)
    )
    mixed = np.random.default_rng(1).permutation(10_000)
    with pytest.raises(ValueError, match=r"usable points, at least 8 needed|No endpoint found"):
        evaluate_curve(clean_curve(good.volume[mixed], good.reading[mixed], quantity="pH"), settings=found.settings)
    assert time.perf_counter() - start < 1.0
    assert found.decided.volume == pytest.approx(10.0, abs=0.05)
