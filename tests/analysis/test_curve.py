"""A recorded curve put in order: what was done is said, and what cannot be a curve is refused by name."""

from __future__ import annotations

import math

import numpy as np
import pytest

from analysis.curve import clean_curve

VOLUMES = [float(k) for k in range(10)]
READINGS = [3.0, 3.2, 3.5, 3.9, 4.5, 8.0, 10.0, 10.5, 10.8, 11.0]


def test_clean_curve_keeps_a_good_curve_as_it_is() -> None:
    curve = clean_curve(VOLUMES, READINGS, quantity="pH")
    assert (curve.volume.tolist(), curve.reading.tolist(), curve.notes) == (VOLUMES, READINGS, ())


def test_clean_curve_leaves_rows_out_that_go_backwards_and_says_so() -> None:
    curve = clean_curve([*VOLUMES[:5], 3.5, *VOLUMES[5:]], [*READINGS[:5], 1.0, *READINGS[5:]], quantity="pH")
    assert curve.volume.tolist() == VOLUMES
    assert curve.notes == ("1 rows go backwards in volume (first at row 6, 3.5 mL) and were left out.",)


def test_clean_curve_averages_repeated_volumes_and_says_so() -> None:
    curve = clean_curve([*VOLUMES, 9.0], [*READINGS, 11.2], quantity="pH")
    assert curve.reading[-1] == pytest.approx(11.1)
    assert curve.notes == ("1 volumes are repeated (first 9 mL); their readings were averaged.",)


def test_clean_curve_takes_volumes_less_than_a_nanolitre_apart_as_one() -> None:
    curve = clean_curve([*VOLUMES, 9.0 + 1e-12], [*READINGS, 11.2], quantity="pH")
    assert curve.volume.size == 10
    assert np.diff(curve.volume).min() > 1e-7


@pytest.mark.parametrize(
    ("volume", "reading", "quantity", "sentence"),
    [
        (VOLUMES, READINGS, "colour", "Quantity is 'colour'; expected one of pH, mV, conductivity, temperature, abs"),
        (VOLUMES, READINGS[:9], "pH", "There are 10 volumes and 9 readings; as many of both are expected"),
        ([], [], "pH", "No endpoint can be found: 0 usable points, at least 8 needed"),
        (VOLUMES[:7], READINGS[:7], "pH", "No endpoint can be found: 7 usable points, at least 8 needed"),
        ([1.0] * 10, READINGS, "pH", "No endpoint can be found: 1 usable points, at least 8 needed"),
        ([math.nan, *VOLUMES[1:]], READINGS, "pH", "Volume 1 is nan; a finite number is expected"),
        (VOLUMES, [*READINGS[:9], math.inf], "pH", "Reading 10 is inf; a finite number is expected"),
        ([-0.1, *VOLUMES[1:]], READINGS, "pH", "Volume 1 is -0.1 mL; volumes from 0 are expected"),
        ([*VOLUMES[:9], 1e9], READINGS, "pH", r"Volume 10 is 1e\+09 mL; volumes up to 10000 mL are expected"),
        (VOLUMES, [*READINGS[:9], 310.0], "pH", "Reading 10 is 310: values outside -2 to 16 look like mV, but pH was"),
        (VOLUMES, [*READINGS[:9], -2500.0], "mV", "Reading 10 is -2500 mV; -2000 to 2000 is expected"),
        (VOLUMES, [*READINGS[:9], -300.0], "temperature", "Reading 10 is -300 temperature; -273.15 to 1000 is exp"),
    ],
)
def test_clean_curve_refuses_by_name(volume: list, reading: list, quantity: str, sentence: str) -> None:
    with pytest.raises(ValueError, match=sentence):
        clean_curve(volume, reading, quantity=quantity)
