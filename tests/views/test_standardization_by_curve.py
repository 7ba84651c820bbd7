"""A titrant whose rule takes a recorded curve: its standardization from the file to the concentration."""

from __future__ import annotations

import re
from decimal import Decimal as D

import numpy as np
import pytest
from django.core.files.uploadedfile import SimpleUploadedFile

from analysis.simulate import grid, simulate_curve
from analysis.system import System
from labrecords.errors import Refused
from labrecords.models import Standardization
from labrecords.services.replicate import attach_curve, record_readings
from labrecords.services.standardization import approve_standardization, start_standardization, submit_standardization
from labrecords.services.titrant import record_titrant
from tests.factories.bench import Bench, compute, set_up_bench, started_standardization
from tests.factories.people import signed_by
from tests.factories.register import calibrated, some_lot

pytestmark = pytest.mark.django_db

TRUE = 0.1012  # mol/L
PHTHALATE = {"kind": "acid_base", "titrant": "base", "carbonate": 0.0, "activity": True,
             "analytes": [{"name": "hydrogen phthalate", "pKa": [2.950, 5.408], "charge": 0, "lost": 1}]}  # fmt: skip
RULE = {
    "code": "NaOH-0.1-E", "name": "sodium hydroxide 0.1 mol/L by curve", "nominal": D("0.1"), "window_low": D("0.095"),
    "window_high": D("0.105"), "restandardization_days": 14, "shelf_life_days": 45, "ratio": "1",
    "standard_titrant": None, "standard_mass": D("0.42"), "replicates_needed": 3, "policy": "all", "limit": D("0.5"),
    "limit_kind": "rsd_percent", "coverage": "k2", "endpoint": "curve", "curve_quantity": "pH",
    "deciding_family": "model", "checking_family": "gran", "system": PHTHALATE, "initial_volume": D(60),
    "blanks_needed": 0, "temperature_within": D(2), "buoyancy": True,
}  # fmt: skip


@pytest.fixture
def bench(analyst, supervisor) -> Bench:
    return set_up_bench(analyst, supervisor)


@pytest.fixture
def record(bench, analyst, supervisor) -> Standardization:
    given = {"substance": bench.titrant.substance, "standard_substance": bench.standard.substance}
    titrant = record_titrant(by=supervisor, **RULE, **given)
    lot = some_lot(titrant, by=analyst, number="N26-E1")
    instruments = {"burette": bench.burette, "balance": bench.balance, "electrode": calibrated(supervisor, "electrode")}
    return start_standardization(lot, by=analyst, instruments=instruments, reference_standard=bench.standard)


def recording(mass: str, seed: int) -> bytes:
    """The file of a titration of so much phthalate, weighed in air."""
    amount = float(mass) * 1.00058 / 204.222 * 1000 * 0.9998
    system = System.from_json(PHTHALATE | {"titrant_concentration": TRUE, "sample_volume": 60.0})
    volume = grid(end=amount / TRUE * 1.4, near=amount / TRUE, coarse=0.5, fine=0.1)
    reading = simulate_curve(
        system, amounts=np.array([amount]), volumes=volume, noise=0.004, generator=np.random.default_rng(seed)
    )
    rows = "\n".join(f"{v:.3f},{y:.3f}" for v, y in zip(volume, reading, strict=True))
    return f"Volume mL,pH\n{rows}\n".encode()


def dropped(client, record: Standardization) -> None:
    """Every titration gets its mass and its file, in the browser's two steps."""
    masses = ("0.4210", "0.4198", "0.4223")
    rows = record.replicates.filter(kind="sample")
    for seed, (row, mass) in enumerate(zip(rows, masses, strict=True)):
        assert client.post(f"/replicates/{row.pk}/amount/", {f"amount-{row.pk}": mass}).status_code == 200
        file = SimpleUploadedFile(f"{record.number}-{seed}.csv", recording(mass, seed), content_type="text/csv")
        page = client.post(f"/curves/{row.pk}/record/", {"file": file}).content.decode()
        packed = re.search(r'name="packed" value="([^"]+)"', page)
        assert packed is not None
        kept = {"packed": packed[1], "name": file.name, "volume": "1", "reading": "2"}
        answer = client.post(f"/curves/{row.pk}/record/", kept)
        assert answer["Location"] == f"/standardizations/{record.number}/"


def test_concentration_comes_from_the_curves(client, record, analyst, supervisor) -> None:
    client.force_login(analyst)
    dropped(client, record)
    compute(record)
    calculation = record.calculations.get()
    assert abs(calculation.value - TRUE) < calculation.expanded_uncertainty
    assert calculation.expanded_uncertainty < 0.005 * TRUE
    record = submit_standardization(record, by=analyst, credentials=signed_by(analyst))
    approve_standardization(record, by=supervisor, credentials=signed_by(supervisor))


def test_sheet_shows_the_curves_with_every_family(client, record, analyst) -> None:
    client.force_login(analyst)
    page = client.get(f"/standardizations/{record.number}/").content.decode()
    assert "Add the curve" in page
    assert "Start, mL" not in page
    dropped(client, record)
    compute(record)
    page = client.get(f"/standardizations/{record.number}/").content.decode()
    for words in ("Curve of titration 1", "decides", "checks", "Residuals of the model", "density of the air"):
        assert words in page


def test_titrant_says_how_its_curve_is_evaluated(bench, supervisor) -> None:
    given = {"substance": bench.titrant.substance, "standard_substance": bench.standard.substance}
    with pytest.raises(Refused, match="Chemistry is empty"):
        record_titrant(by=supervisor, **RULE | {"system": None}, **given)
    with pytest.raises(Refused, match="Deciding and checking family are both model"):
        record_titrant(by=supervisor, **RULE | {"checking_family": "model"}, **given)


def test_sheet_by_indicator_takes_no_curve(bench, analyst) -> None:
    row = started_standardization(bench).replicates.filter(kind="sample")[0]
    curve = {"quantity": "pH", "mapping": {}, "volumes": ["0"], "readings": ["3"], "notes": []}
    with pytest.raises(Refused, match="takes burette readings, not curves"):
        attach_curve(row, by=analyst, name="x.csv", media_type="text/csv", content=b"x", curve=curve)


def test_row_with_a_curve_takes_no_burette_readings(client, record, analyst) -> None:
    client.force_login(analyst)
    dropped(client, record)
    row = record.replicates.filter(kind="sample")[0]
    with pytest.raises(Refused, match="has a recorded curve"):
        record_readings(row, by=analyst, values={"end": D("12.00")})
