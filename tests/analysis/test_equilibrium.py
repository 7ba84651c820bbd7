"""The fit of one curve: it finds the truth, agrees with another route, and refuses what it cannot know."""

from __future__ import annotations

import numpy as np
import pytest
from scipy import optimize

from analysis.activity import water_pK
from analysis.curve import Curve
from analysis.equilibrium import Fit, fit_equilibrium
from analysis.simulate import grid, simulate_curve
from analysis.system import Analyte, System

ACETIC = Analyte("acetic acid", (4.756,))
HYDROCHLORIC, PHOSPHORIC = Analyte("hydrochloric acid"), Analyte("phosphoric acid", (2.148, 7.198, 12.35))
VOLUMES = grid(end=24.0, near=10.0, coarse=0.5, fine=0.1)


def acid_base(titrant: str, *analytes: Analyte, **more: object) -> System:
    return System("acid_base", titrant, 0.1, 50.0, analytes, **more)  # type: ignore[arg-type]


def recorded(system: System, *amounts: float, volumes: np.ndarray = VOLUMES, **more: object) -> Curve:
    imperfections = {"noise": 0.006, "volume_noise": 0.003, "offset": 0.03, "slope": 0.99} | more
    quantity = str(more.get("quantity", "pH"))
    reading = simulate_curve(
        system,
        amounts=np.array(amounts),
        volumes=volumes,
        generator=np.random.default_rng(11),
        **imperfections,
    )  # type: ignore[arg-type]
    return Curve(volumes, reading, quantity, ())


@pytest.mark.parametrize(
    ("system", "amounts", "expected"),
    [
        (acid_base("base", HYDROCHLORIC), (1.0,), (10.0,)),
        (acid_base("base", ACETIC), (1.0,), (10.0,)),
        (acid_base("base", ACETIC, carbonate=0.02), (1.0,), (10.0,)),
        (acid_base("base", PHOSPHORIC), (1.0,), (10.0, 20.0)),
        (acid_base("base", Analyte("citric acid", (3.128, 4.761, 6.396))), (0.4,), (12.0,)),
        (acid_base("base", Analyte("phthalic acid", (2.95, 5.408), lost=1)), (1.0,), (10.0,)),
        (acid_base("base", HYDROCHLORIC, ACETIC), (0.6, 0.6), (6.0, 12.0)),
        (
            acid_base("base", HYDROCHLORIC, ACETIC, Analyte("boric acid", (9.24,))),
            (0.5, 0.5, 0.6),
            (5.0, 10.0, 16.0),
        ),
        (acid_base("acid", Analyte("sodium hydroxide")), (1.0,), (10.0,)),
        (acid_base("acid", Analyte("ammonia", (9.246,), 1)), (1.0,), (10.0,)),
        (acid_base("acid", Analyte("carbonate", (6.352, 10.329))), (1.0,), (10.0, 20.0)),
    ],
)
def test_fit_equilibrium_finds_every_jump(
    system: System, amounts: tuple[float, ...], expected: tuple[float, ...]
) -> None:
    fit = fit_equilibrium(recorded(system, *amounts), system=system)
    assert len(fit.endpoints) == len(expected)
    for found, u, truth in zip(fit.endpoints, fit.endpoint_us, expected, strict=True):
        assert abs(found - truth) < 4 * u
        assert u < 0.1
    assert fit.flags == ()


def test_fit_equilibrium_agrees_with_scipy_on_the_explicit_volume() -> None:
    """Second route: V(pH) written by hand, its scatter by that of a reading, minimized by scipy."""
    system = acid_base("base", ACETIC, activity=False)
    curve = recorded(system, 1.0, noise=0.002, volume_noise=0.0, offset=0.0, slope=1.0)
    ka, kw, x = 10.0**-4.756, 10.0 ** -water_pK(), curve.reading

    def volume(n: float, x: np.ndarray) -> np.ndarray:
        excess = 10.0**-x - kw * 10.0**x
        return (n * ka / (ka + 10.0**-x) - 50.0 * excess) / (0.1 + excess)

    def residuals(p: np.ndarray) -> np.ndarray:
        steep = (volume(p[0], x + 1e-5) - volume(p[0], x - 1e-5)) / 2e-5
        return (curve.volume - volume(p[0], x)) / np.hypot(0.003, 0.002 * steep)

    by_hand = optimize.least_squares(residuals, [0.9], x_scale=0.01).x[0] / 0.1
    fit = fit_equilibrium(curve, system=system, nuisance=(), noise=0.002, robust=False)
    assert fit.endpoints[0] == pytest.approx(by_hand, abs=0.3 * fit.endpoint_us[0])


def test_fit_equilibrium_keeps_what_it_was_given() -> None:
    system = acid_base("base", ACETIC)
    curve = recorded(system, 1.0)
    fit = fit_equilibrium(curve, system=system, noise=0.006)
    assert (fit.curve, fit.system, fit.settings.noise) == (curve, system, 0.006)


def test_fit_equilibrium_gives_readings_close_to_those_recorded() -> None:
    system = acid_base("base", ACETIC)
    curve = recorded(system, 1.0, lag=0.02, drift=0.01)
    fit = fit_equilibrium(curve, system=system)
    flat = np.abs(curve.volume - 10.0) > 1.0
    assert np.abs(fit.fitted - curve.reading)[flat].max() < 4 * fit.noise
    assert np.abs(fit.residuals).max() < 4.5


def test_fit_equilibrium_gives_the_reading_at_equivalence() -> None:
    system = acid_base("base", HYDROCHLORIC)
    fit = fit_equilibrium(recorded(system, 1.0, offset=0.0, slope=1.0), system=system, nuisance=())
    assert fit.equivalences[0].reading == pytest.approx(water_pK() / 2, abs=0.01)


def test_fit_equilibrium_repeats_to_the_last_bit() -> None:
    system = acid_base("base", PHOSPHORIC)
    curve = recorded(system, 1.0)
    assert fit_equilibrium(curve, system=system).values == fit_equilibrium(curve, system=system).values


def test_fit_equilibrium_is_not_moved_by_bad_readings() -> None:
    system = acid_base("base", ACETIC)
    good = recorded(system, 1.0)
    reading = good.reading.copy()
    reading[[5, 15, 40]] += [0.5, -0.3, 0.4]
    fit = fit_equilibrium(Curve(good.volume, reading, "pH", ()), system=system)
    assert abs(fit.endpoints[0] - 10.0) < 4 * fit.endpoint_us[0]
    assert fit.endpoint_us[0] < 0.03


def test_fit_equilibrium_takes_a_glass_electrode_in_mV() -> None:
    system = acid_base("base", ACETIC)
    curve = recorded(system, 1.0, quantity="mV", noise=0.4, offset=12.0)
    fit = fit_equilibrium(curve, system=system)
    assert abs(fit.endpoints[0] - 10.0) < 4 * fit.endpoint_us[0]


def test_fit_equilibrium_takes_10000_points() -> None:
    system = acid_base("base", ACETIC)
    fit = fit_equilibrium(recorded(system, 1.0, volumes=np.linspace(0.0, 15.0, 10_000)), system=system)
    assert fit.endpoints[0] == pytest.approx(10.0, abs=0.005)


@pytest.mark.parametrize("factor", [0.1, 10.0])
def test_fit_equilibrium_scales_with_the_volumes(factor: float) -> None:
    system = acid_base("base", ACETIC)
    larger = System("acid_base", "base", 0.1, 50.0 * factor, (ACETIC,))
    curve = recorded(system, 1.0)
    one = fit_equilibrium(curve, system=system, volume_sd=0.003)
    other = fit_equilibrium(
        Curve(factor * curve.volume, curve.reading, "pH", ()), system=larger, volume_sd=0.003 * factor
    )
    assert other.endpoints[0] == pytest.approx(factor * one.endpoints[0], rel=1e-8)
    assert other.endpoint_us[0] == pytest.approx(factor * one.endpoint_us[0], rel=1e-6)


@pytest.mark.parametrize("guess", [3.0, 9.0, 14.0])
def test_fit_equilibrium_does_not_depend_on_the_guess(guess: float) -> None:
    system = acid_base("base", ACETIC)
    curve = recorded(system, 1.0)
    expected: Fit = fit_equilibrium(curve, system=system)
    assert fit_equilibrium(curve, system=system, guess=guess).endpoints == pytest.approx(expected.endpoints, abs=1e-5)
