"""The fit of many curves: the same as one by one, whatever their lengths, and honest about those that
fail.
"""

from __future__ import annotations

import numpy as np
import pytest
from scipy import stats

from analysis.batch import PIECE, fit_equilibrium_batch
from analysis.curve import Curve
from analysis.equilibrium import fit_equilibrium
from analysis.fit_problem import FitSettings
from analysis.simulate import simulate_curve
from analysis.system import Analyte, System

ACETIC = System("acid_base", "base", 0.1, 50.0, (Analyte("acetic acid", (4.756,)),))
VOLUMES = np.arange(0.0, 15.01, 0.25)


def recorded(count: int, *, seed: int = 1) -> tuple[list[Curve], np.ndarray]:
    generator = np.random.default_rng(seed)
    truth = generator.uniform(9.0, 11.0, count)
    readings = simulate_curve(
        ACETIC, amounts=truth[:, None] * 0.1, volumes=VOLUMES, generator=generator, noise=0.0085,
        volume_noise=0.003, offset=generator.normal(0.0, 0.06, count),
    )  # fmt: skip
    return [Curve(VOLUMES, row, "pH", ()) for row in readings], truth


def test_fit_equilibrium_batch_gives_what_single_fits_give() -> None:
    curves, _ = recorded(5)
    batch = fit_equilibrium_batch(curves, system=ACETIC, tolerance=1e-8)
    for row, curve in enumerate(curves):
        single = fit_equilibrium(curve, system=ACETIC)
        assert batch.volumes[row, 0] == pytest.approx(single.endpoints[0], abs=0.01 * single.endpoint_us[0])
        assert batch.volume_us[row, 0] == pytest.approx(single.endpoint_us[0], rel=0.01)


def test_fit_equilibrium_batch_stops_well_inside_the_uncertainty() -> None:
    curves, _ = recorded(300)
    quick = fit_equilibrium_batch(curves, system=ACETIC)
    exact = fit_equilibrium_batch(curves, system=ACETIC, tolerance=1e-8)
    assert (np.abs(quick.volumes - exact.volumes) < 0.05 * exact.volume_us).all()


def test_fit_equilibrium_batch_takes_curves_of_different_lengths() -> None:
    curves, _ = recorded(4)
    short = [Curve(c.volume[: 50 - k], c.reading[: 50 - k], "pH", ()) for k, c in enumerate(curves)]
    batch = fit_equilibrium_batch(short, system=ACETIC, tolerance=1e-8)
    for row, curve in enumerate(short):
        single = fit_equilibrium(curve, system=ACETIC)
        assert batch.volumes[row, 0] == pytest.approx(single.endpoints[0], abs=0.01 * single.endpoint_us[0])
        assert batch.runs_z[row] == pytest.approx(single.runs_z)


def test_fit_equilibrium_batch_says_which_curve_failed() -> None:
    curves, _ = recorded(3)
    curves[1] = Curve(VOLUMES, np.full(VOLUMES.size, 7.0), "pH", ())
    batch = fit_equilibrium_batch(curves, system=ACETIC)
    assert [bool(text) for text in batch.problems] == [False, True, False]
    assert np.isnan(batch.volumes[1]).all()
    with pytest.raises(ValueError, match="does not converge"):
        batch.fit(1)


def test_fit_equilibrium_batch_leaves_out_only_the_curve_that_goes_the_wrong_way() -> None:
    curves, _ = recorded(3)
    curves[2] = Curve(VOLUMES, curves[2].reading[::-1], "pH", ())
    problems = fit_equilibrium_batch(curves, system=ACETIC).problems
    assert problems[:2] == ("", "")
    assert "a base titrated with an acid; the titrant is given as base" in problems[2]


def test_fit_equilibrium_batch_covers_the_truth_and_reaches_the_stated_uncertainty() -> None:
    curves, truth = recorded(3 * PIECE + 17, seed=2)
    batch = fit_equilibrium_batch(curves, system=ACETIC, settings=FitSettings(nuisance=("offset", "pKa")))
    z = (batch.volumes[:, 0] - truth) / batch.volume_us[:, 0]
    assert np.mean(np.abs(z) < stats.t.ppf(0.975, batch.degrees_of_freedom)) == pytest.approx(0.95, abs=0.03)
    assert np.sqrt(np.mean(z**2)) == pytest.approx(1.0, abs=0.1)


def test_fit_equilibrium_batch_fits_one_of_them_in_full() -> None:
    curves, truth = recorded(2)
    fit = fit_equilibrium_batch(curves, system=ACETIC).fit(1)
    assert fit.fitted.shape == VOLUMES.shape
    assert abs(fit.endpoints[0] - truth[1]) < 4 * fit.endpoint_us[0]


def test_fit_equilibrium_batch_refuses_no_curves_and_mixed_quantities() -> None:
    curves, _ = recorded(2)
    with pytest.raises(ValueError, match="No curve is given"):
        fit_equilibrium_batch([], system=ACETIC)
    mixed = [*curves, Curve(VOLUMES, np.linspace(300.0, -300.0, VOLUMES.size), "mV", ())]
    with pytest.raises(ValueError, match="The curve is of mV"):
        fit_equilibrium_batch(mixed, system=ACETIC)
