"""Six methods of a laboratory against their arithmetic written out beside them, step by step in plain Python."""

from __future__ import annotations

import math
from statistics import fmean

import numpy as np
import pytest

from analysis.determination import compute
from analysis.simulate import grid, simulate_curve
from analysis.system import Analyte, System
from tests.support.determinations import burette, by_mass, line, lines, method, run, solution, substance

VINEGAR = {
    "flask": "100", "flask_u": "0.04", "flask_key": "flask:F-1",
    "aliquot": "20", "aliquot_u": "0.012", "aliquot_key": "pipette:P-2",
}  # fmt: skip


def curve(volumes: np.ndarray, readings: np.ndarray) -> dict:
    return {"volume": [repr(float(v)) for v in volumes], "reading": [repr(float(y)) for y in readings]}


def test_compute_acidity_of_vinegar_by_indicator() -> None:
    blanks = lines(["0.05", "0.10"], amount=None, first=4)
    found = compute(
        run(lines(["16.75", "16.80", "16.70"], amount="10.00"), blanks=blanks, dilutions=[VINEGAR],
            titrant=solution("N1", "0.1002"))
    )  # fmt: skip
    net = (16.75 + 16.80 + 16.70) / 3 - (0.05 + 0.10) / 2  # mL of sodium hydroxide
    in_aliquot = 0.1002 * net / 1000  # mol of acetic acid in 20 mL of 100 mL
    per_litre = in_aliquot * (100 / 20) / 10.00 * 1000  # mol/L of vinegar, 10.00 mL in the flask
    assert found["value"] == pytest.approx(per_litre * 60.052, rel=1e-12)
    assert found["blank"] == pytest.approx(0.075, abs=1e-12)
    assert [item["net"] for item in found["titrations"][2:]] == pytest.approx([16.675, 16.725, 16.625])


def test_compute_uncertainty_of_vinegar_by_hand() -> None:
    found = compute(run(lines(["16.75", "16.80", "16.70"], amount="10.00"), dilutions=[VINEGAR]))
    relative = [
        0.0001 / 0.1,  # concentration
        0.05 / math.sqrt(6) / 16.75,  # burette, triangular
        0.01 / 10.0,  # pipette of the sample
        0.04 / 100,
        0.012 / 20,  # flask and pipette of the dilution
        0.001 / 60.052,  # molar mass
        0.05 / math.sqrt(3) / 16.75,  # sd of the three titres is 0.05 mL, more than reading explains
    ]
    assert found["u"] == pytest.approx(found["value"] * math.hypot(*relative), rel=1e-6)
    assert found["U"] == pytest.approx(2 * found["u"])


def test_compute_acidity_of_vinegar_by_curve() -> None:
    system = System("acid_base", "base", 0.1, 50.0, (Analyte("acetic acid", (4.756,)),))
    volumes = grid(end=26.0, near=16.7, coarse=0.5, fine=0.1)
    truths = (1.668, 1.672, 1.670)  # mmol in each aliquot
    titrations = []
    for number, truth in enumerate(truths, start=1):
        readings = simulate_curve(
            system, amounts=np.array([truth]), volumes=volumes, generator=np.random.default_rng(number), noise=0.005
        )
        titrations.append(line(number, None, amount="10.00", start=None, curve=curve(volumes, readings)))
    settings = {"quantity": "pH", "deciding": "model", "checking": "gran", "system": system.to_json()}
    found = compute(run(titrations, method=method(curve=settings), dilutions=[VINEGAR]))
    truth = fmean(truths) / 1000 * (100 / 20) / 10.00 * 1000 * 60.052  # g/L
    assert abs(found["value"] - truth) < 3 * found["u"]
    assert found["value"] == pytest.approx(truth, rel=2e-3)
    for item, truth in zip(found["titrations"], truths, strict=True):
        assert item["endpoint"]["family"] == "model"
        assert item["endpoint"]["checked"]["family"] == "gran"
        assert abs(item["titre"] - truth / 0.1) < 4 * item["endpoint"]["u"]


def test_compute_alkalinity_of_effluent_to_a_fixed_pH() -> None:
    volumes = [float(v) for v in range(13)]
    readings = [9.0, 8.5, 8.0, 7.5, 7.2, 6.9, 6.6, 6.3, 5.9, 5.0, 4.0, 3.5, 3.2]  # pH 4.5 half way from 9 to 10 mL
    settings = {"quantity": "pH", "deciding": "fixed", "fixed_reading": "4.5"}
    found = compute(
        run(
            [line(1, None, amount="100", start=None, curve=curve(np.array(volumes), np.array(readings)))],
            method=method(ratio="1/2", unit="mg/L", curve=settings, replicates_needed=1),
            substance=substance("CaCO3", "100.086"), titrant=solution("H1", "0.02"),
        )
    )  # fmt: skip
    acid = 0.02 * 9.5 / 1000  # mol of hydrochloric acid down to pH 4.5
    carbonate = acid / 2  # mol CaCO3: each takes two protons
    assert found["titrations"][0]["titre"] == pytest.approx(9.5, rel=1e-12)
    assert found["value"] == pytest.approx(carbonate / 0.100 * 100.086 * 1000, rel=1e-12)  # mg/L


def test_compute_chloride_in_brine_by_a_silver_electrode() -> None:
    chloride = System("precipitation", "silver", 0.1, 60.0, (Analyte("chloride", charge=-1, pKs=9.752),))
    volumes = grid(end=18.0, near=12.0, coarse=0.5, fine=0.1)
    readings = simulate_curve(
        chloride, amounts=np.array([1.2]), volumes=volumes, standard=300.0, generator=np.random.default_rng(5),
        noise=0.3,
    )  # fmt: skip
    settings = {"quantity": "mV", "deciding": "model", "checking": "derivative", "system": chloride.to_json()}
    found = compute(
        run(
            [line(1, None, amount="20", start=None, curve=curve(volumes, readings))],
            method=method(curve=settings, replicates_needed=1), substance=substance("NaCl", "58.443"),
            titrant=solution("A1", "0.1"), burette=burette("0.02"),
        )
    )  # fmt: skip
    truth = 1.2 / 1000 / 0.020 * 58.443  # g/L: 1.2 mmol in 20 mL of brine
    assert found["value"] == pytest.approx(truth, rel=2e-3)
    assert abs(found["value"] - truth) < 3 * found["u"]
    assert found["titrations"][0]["endpoint"]["checked"]["volume"] == pytest.approx(12.0, abs=0.06)


def test_compute_citric_acid_in_powder() -> None:
    titrations = [
        line(1, "15.60", amount="0.1010"),
        line(2, "15.45", amount="0.1000"),
        line(3, "15.30", amount="0.0990"),
    ]
    found = compute(
        run(
            titrations, method=method(ratio="1/3", quantity="mass_fraction", unit="%"),
            substance=substance("C6H8O7", "192.123"), sample=by_mass(),
        )
    )  # fmt: skip
    each = [100 * (0.1 * v / 1000 / 3) * 192.123 / m for v, m in ((15.60, 0.1010), (15.45, 0.1000), (15.30, 0.0990))]
    assert [item["value"] for item in found["titrations"]] == pytest.approx(each, rel=1e-12)
    assert found["value"] == pytest.approx(fmean(each), rel=1e-12)
    assert found["acceptable"]


def test_compute_calcium_carbonate_in_scale_by_back_titration() -> None:
    excess = {**solution("H1", "0.5010", "0.0005"), "volume": "25", "volume_u": "0.012", "key": "pipette:P-9"}
    found = compute(
        run(
            lines(["22.40", "22.50", "22.45"], amount="0.5000"), excess=excess, sample=by_mass(),
            method=method(titration="back", ratio="1/2", quantity="mass_fraction", unit="%"),
            substance=substance("CaCO3", "100.086"), titrant=solution("N5", "0.2000"),
        )
    )  # fmt: skip
    added = 0.5010 * 25 / 1000  # mol of hydrochloric acid
    left = 0.2000 * 22.45 / 1000  # mol that the carbonate did not take
    percent = (added - left) / 2 * 100.086 / 0.5000 * 100
    assert found["value"] == pytest.approx(percent, rel=1e-12)


def test_compute_by_blank_difference() -> None:
    settings = method(titration="blank_difference", ratio="1/2", replicates_needed=2)
    replicates = lines(["18.20", "18.30"], amount="25")
    found = compute(run(replicates, method=settings, blanks=lines(["24.95", "25.05"], amount=None, first=3)))
    assert found["value"] == pytest.approx(0.1 * (25.00 - 18.25) / 1000 / 2 / 0.025 * 60.052, rel=1e-12)


def test_compute_titrant_equivalent_of_an_oil() -> None:
    settings = method(
        quantity="titrant_equivalent", unit="mg KOH/g", equivalent_formula="KOH", replicates_needed=2
    )  # fmt: skip
    found = compute(
        run(lines(["9.80", "9.90"], amount="5.000"), method=settings, sample=by_mass(),
            substance=substance("KOH", "56.105"))
    )  # fmt: skip
    assert found["value"] == pytest.approx(56.105 * 0.1 * 9.85 / 5.000, rel=1e-12)  # acid value, mg KOH/g
    assert found["unit"] == "mg KOH/g"


def test_compute_on_the_dry_basis() -> None:
    settings = method(quantity="mass_fraction", unit="%", basis="dried", loss_percent="8.0", loss_u="0.1")
    ends = ["15.60", "15.60", "15.60"]
    found = compute(run(lines(ends, amount="0.1000"), method=settings, sample=by_mass()))
    assert found["value"] == pytest.approx(0.1 * 15.60 / 1000 * 60.052 / 0.1000 * 100 / 0.92, rel=1e-12)
    dried = next(item for item in found["budget"] if item["key"] == "loss")
    assert abs(dried["contribution"]) == pytest.approx(found["value"] / 0.92 * 0.001, rel=1e-9)
