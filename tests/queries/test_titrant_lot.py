"""How much of a lot was used: what titrations delivered and what was pipetted from it."""

from __future__ import annotations

from decimal import Decimal as D

import pytest

from labrecords.models import ExclusionCause, Replicate
from labrecords.queries.titrant_lot import runs_on_lot, volume_balance
from labrecords.services.replicate import attach_curve, exclude_replicate, record_readings
from labrecords.services.run import void_run
from labrecords.services.standardization import start_standardization
from tests.factories.bench import Bench, approved_standardization, fill, started_run, started_standardization
from tests.factories.people import signed_by
from tests.factories.register import some_lot, some_substance, some_titrant

pytestmark = pytest.mark.django_db
BY_CURVE = {
    "endpoint": "curve", "curve_quantity": "pH", "deciding_family": "derivative", "blanks_needed": 0,
    "initial_volume": D("60"),
}  # fmt: skip
CURVE = {
    "quantity": "pH", "mapping": {}, "volumes": ["0.00", "12.50", "25.00"], "readings": ["3", "7", "11"],
    "notes": [],
}  # fmt: skip


def test_volume_balance_of_a_full_bottle(bench: Bench) -> None:
    balance = volume_balance(bench.lot)
    assert (balance.prepared, balance.used, balance.left, balance.titrations) == (D("5000"), 0, D("5000"), 0)


def test_volume_balance_counts_replicates_and_blanks(bench: Bench) -> None:
    fill(
        started_standardization(bench),
        [("0.42", "20.65"), ("0.42", "20.60"), ("0.42", "20.70")],
        by=bench.analyst,
    )
    balance = volume_balance(bench.lot)
    assert (balance.delivered, balance.titrations) == (D("62.00"), 4)  # 20.65 + 20.60 + 20.70 + 0.05
    assert balance.left == D("4938.00")


def test_volume_balance_counts_a_titration_that_is_excluded(bench: Bench) -> None:
    record = started_standardization(bench)
    row = record.replicates.filter(kind="sample").first()
    record_readings(row, by=bench.analyst, values={"start": D("1.00"), "end": D("31.00")})
    exclude_replicate(row, by=bench.analyst, cause=ExclusionCause.SPILL, sentence="knocked over while swirling")
    assert Replicate.objects.get(pk=row.pk).is_excluded
    assert volume_balance(bench.lot).delivered == D("30.00")


def test_volume_balance_counts_the_aliquots_another_lot_took(bench: Bench) -> None:
    approved_standardization(bench)
    before = volume_balance(bench.lot)
    acid = some_substance(bench.supervisor, name="hydrochloric acid", formula="HCl")
    given = {"code": "HCl-0.1", "standard_titrant": bench.titrant, "aliquot": D("10")}
    other = some_lot(some_titrant(bench.supervisor, acid, None, **given), by=bench.analyst, number="H26-01")
    parts = {"burette": bench.burette, "pipette": bench.pipette}
    record = start_standardization(other, by=bench.analyst, instruments=parts, against=bench.lot)
    fill(record, [("10.00", "10.05"), ("10.00", "10.00"), ("10.00", "10.05")], by=bench.analyst)
    after = volume_balance(bench.lot)
    assert (after.pipetted - before.pipetted, after.delivered - before.delivered) == (D("30.00"), 0)
    assert volume_balance(other).delivered == D("30.15")


def test_volume_balance_counts_a_curve_to_its_end(bench: Bench) -> None:
    approved_standardization(bench)
    before = volume_balance(bench.lot)
    run = started_run(bench, **BY_CURVE)
    row = run.replicates.filter(kind="sample").first()
    attach_curve(row, by=bench.analyst, name="a.csv", media_type="text/csv", content=b"0;3", curve=CURVE)
    after = volume_balance(bench.lot)
    assert (after.delivered - before.delivered, after.titrations - before.titrations) == (D("25.00"), 1)


def test_runs_on_lot_leaves_out_void_ones(bench: Bench) -> None:
    approved_standardization(bench)
    run = started_run(bench)
    assert runs_on_lot(bench.lot) == 1
    void_run(run, by=bench.analyst, credentials=signed_by(bench.analyst), reason="the wrong sample")
    assert runs_on_lot(bench.lot) == 0
