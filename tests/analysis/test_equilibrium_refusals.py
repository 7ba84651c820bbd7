"""What the fit of a curve refuses, and what it tells the analyst."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from analysis.curve import Curve
from analysis.equilibrium import fit_equilibrium
from analysis.simulate import simulate_curve
from analysis.system import Analyte, System

ACETIC = System("acid_base", "base", 0.1, 50.0, (Analyte("acetic acid", (4.756,)),))
SILVER = System("precipitation", "silver", 0.1, 50.0, (Analyte("chloride", charge=-1, pKs=9.752),))
CARBONATE = System("acid_base", "acid", 0.1, 50.0, (Analyte("carbonate", (6.352, 10.329)),))
VOLUMES = np.arange(0.0, 15.01, 0.25)


def recorded(system: System, *amounts: float, volumes: np.ndarray = VOLUMES, **more: float) -> Curve:
    reading = simulate_curve(
        system, amounts=np.array(amounts), volumes=volumes, generator=np.random.default_rng(5), noise=0.006,
        volume_noise=0.003, **more,
    )  # fmt: skip
    return Curve(volumes, reading, "pH", ())


def flags(system: System, curve: Curve) -> str:
    return " ".join(fit_equilibrium(curve, system=system, noise=0.006).flags)


def test_fit_equilibrium_names_the_parameter_that_cannot_be_known() -> None:
    twice = System("acid_base", "base", 0.1, 50.0, (Analyte("one"), Analyte("other")))
    with pytest.raises(ValueError, match=r"does not tell V\((one|other)\)"):
        fit_equilibrium(recorded(System("acid_base", "base", 0.1, 50.0, (Analyte("one"),)), 1.0), system=twice)


@pytest.mark.parametrize(
    ("reading", "quantity", "sentence"),
    [
        (np.full(61, 7.0), "pH", "does not converge"),
        (np.linspace(11.0, 3.0, 61), "pH", "a base titrated with an acid; the titrant is given as base"),
        (
            np.linspace(1.0, 2.0, 61),
            "absorbance",
            "The curve is of absorbance; the model of acid base takes pH or mV",
        ),
    ],
)
def test_fit_equilibrium_refuses_curves_of_something_else(reading: np.ndarray, quantity: str, sentence: str) -> None:
    with pytest.raises(ValueError, match=sentence):
        fit_equilibrium(Curve(VOLUMES, reading, quantity, ()), system=ACETIC)


def test_fit_equilibrium_refuses_too_few_points() -> None:
    with pytest.raises(ValueError, match="The curve has 7 points; the model needs at least 8"):
        fit_equilibrium(recorded(ACETIC, 1.0, volumes=np.linspace(0.0, 14.0, 7)), system=ACETIC)


@pytest.mark.parametrize(
    ("volume", "reading", "sentence"),
    [
        (VOLUMES, np.where(VOLUMES == 2.0, np.nan, 5.0), "Reading 9 is nan; a finite number is expected"),
        (VOLUMES[::-1], VOLUMES, "The volumes do not rise from point to point"),
        (VOLUMES - 1.0, VOLUMES, "The volumes do not rise from point to point, from 0 on"),
    ],
)
def test_fit_equilibrium_refuses_a_curve_that_was_not_cleaned(
    volume: np.ndarray, reading: np.ndarray, sentence: str
) -> None:
    with pytest.raises(ValueError, match=sentence):
        fit_equilibrium(Curve(volume, reading, "pH", ()), system=ACETIC)


@pytest.mark.parametrize(
    ("changes", "sentence"),
    [
        ({"noise": -0.1}, "Noise is -0.1; a finite number above 0"),
        ({"volume_sd": 0.0}, "Volume sd is 0.0; a finite number above 0"),
        ({"guess": float("nan")}, "Guess is nan"),
        ({"nuisance": ("moon",)}, "Parameter group is 'moon'; expected some of offset"),
        ({"priors": {"pKa": 0.0}}, "Prior of pKa is 0.0"),
    ],
)
def test_fit_equilibrium_refuses_settings_by_name(changes: dict[str, object], sentence: str) -> None:
    with pytest.raises(ValueError, match=sentence):
        fit_equilibrium(recorded(ACETIC, 1.0), system=ACETIC, **changes)  # type: ignore[arg-type]


def test_fit_equilibrium_flags_a_worn_electrode() -> None:
    assert "Electrode slope 90." in flags(ACETIC, recorded(ACETIC, 1.0, slope=0.90))


def test_fit_equilibrium_flags_a_wrong_constant() -> None:
    wrong = System("acid_base", "base", 0.1, 50.0, (Analyte("acetic acid", (5.1,)),))
    assert "The fit moves the pKa of acetic acid by -0.3" in flags(wrong, recorded(ACETIC, 1.0))


def test_fit_equilibrium_flags_a_hidden_second_acid() -> None:
    two = System("acid_base", "base", 0.1, 50.0, (*ACETIC.analytes, Analyte("other", (8.0,))))
    assert "its chemistry does not describe this curve" in flags(ACETIC, recorded(two, 0.97, 0.03))


def test_fit_equilibrium_flags_a_curve_that_stops_early() -> None:
    curve = recorded(ACETIC, 1.0, volumes=np.linspace(0.0, 8.0, 40))
    assert "The curve stops at 8.00 mL, before the equivalence point at" in flags(ACETIC, curve)


def test_fit_equilibrium_raises_no_false_alarm_in_200_curves() -> None:
    reading = simulate_curve(
        ACETIC, amounts=np.full((200, 1), 1.0), volumes=VOLUMES, generator=np.random.default_rng(8),
        noise=0.006,
        volume_noise=0.003,
    )  # fmt: skip
    raised = [row for row in reading if flags(ACETIC, Curve(VOLUMES, row, "pH", ()))]
    assert len(raised) <= 1  # a limit of three standard deviations is passed by about one in 700


def number_or_sentence(curve: Curve, system: System) -> bool:
    """Whether a fit gives finite endpoints and uncertainties, or a sentence."""
    try:
        fit = fit_equilibrium(curve, system=system)
    except ValueError as problem:
        return str(problem).endswith(".")
    return bool(np.isfinite([*fit.endpoints, *fit.endpoint_us]).all())


@settings(max_examples=60, deadline=1000)
@given(
    st.lists(st.floats(-2.0, 16.0), min_size=8, max_size=40),
    st.sampled_from([ACETIC, CARBONATE]),
)
def test_fit_equilibrium_of_any_readings_gives_a_number_or_a_sentence(readings: list[float], system: System) -> None:
    curve = Curve(np.arange(len(readings)) * 0.5, np.array(readings), "pH", ())
    assert number_or_sentence(curve, system)


@settings(max_examples=40, deadline=1000)
@given(st.lists(st.floats(-2000.0, 2000.0), min_size=8, max_size=40))
def test_fit_equilibrium_of_any_potentials_gives_a_number_or_a_sentence(readings: list[float]) -> None:
    curve = Curve(np.arange(len(readings)) * 0.5, np.array(readings), "mV", ())
    assert number_or_sentence(curve, SILVER)
