"""One piece of the laboratory's work at a time: a lot, a standardization, a batch with its run."""

from __future__ import annotations

from dataclasses import dataclass
from datetime import date, timedelta
from decimal import Decimal as D

from labrecords.management.demo.bench import ACETIC_ACID, CACO3, CITRIC, KHP, NACL, Bench
from labrecords.models import Batch, Investigation, Run, Sample, Standardization, TitrantLot, User
from labrecords.queries.calculation import latest_calculation
from labrecords.rules.calculation import objections_to_latest_calculation
from labrecords.services.batch import record_batch, record_sample, release_batch
from labrecords.services.run import approve_run, start_run, submit_run
from labrecords.services.standardization import (
    approve_standardization,
    start_standardization,
    submit_standardization,
)
from labrecords.services.titrant import record_lot

BURETTE = ("B-07", 50.0)
PARTS = {
    "TA-VIN": {"burette": "B-07", "pipette": "P-10", "flask 1": "F-03", "aliquot 1": "P-20"},
    "TA-VIN-C": {"burette": "M-02", "pipette": "P-02", "electrode": "E-04"},
    "ALK-EFF": {"burette": "M-02", "pipette": "P-100", "electrode": "E-04"},
    "CL-BRN": {
        "burette": "M-02",
        "pipette": "P-05",
        "flask 1": "F-03",
        "aliquot 1": "P-10",
        "electrode": "E-06",
    },
    "CIT-DSC": {"burette": "B-07", "balance": "W-01"},
    "CAC-SCL": {"burette": "B-07", "balance": "W-01", "excess pipette": "P-50"},
}
MOST_EXTRA = 3


@dataclass
class Team:
    """Who works and who reviews on a day."""

    analyst: User
    supervisor: User


def prepare_lot(bench: Bench, titrant: str, number: str, *, by: User, true: float) -> TitrantLot:
    """Record a fresh lot; its true concentration stays with the bench."""
    bench.true[number] = true
    day = bench.clock.now.date()
    return record_lot(
        bench.lab.titrants[titrant], by=by, number=number, prepared_on=day, prepared_by=by,
        reagent_lot=f"{titrant[:2].upper()}-{day:%y%m}", volume=D("5000"),
    )  # fmt: skip


def standardize(
    bench: Bench,
    lot: TitrantLot,
    team: Team,
    *,
    standard: str | None = None,
    against: TitrantLot | None = None,
) -> Standardization:
    """Standardize a lot, have it reviewed, and leave it in force."""
    lab, by = bench.lab, team.analyst
    parts = {"burette": "B-07", "balance": "W-01"} if standard else {"burette": "B-07", "pipette": "P-20"}
    if lot.titrant.takes_curve:
        parts |= {"burette": "M-02", "electrode": "E-06"}
    record = start_standardization(
        lot, by=by, instruments={part: lab.instruments[name] for part, name in parts.items()},
        reference_standard=lab.standards[standard] if standard else None, against=against,
    )  # fmt: skip
    for blank in bench.rows(record, "blank"):
        bench.titrate(blank, 0.03, by=by, amount=None, burette=BURETTE)
    rows = bench.rows(record, "sample")
    for _ in range(3 + MOST_EXTRA):
        for row in rows:
            _standard_titration(bench, row, lot, by=by, standard=standard, against=against)
        bench.compute(record)
        if not objections_to_latest_calculation(record):
            break
        rows = [bench.another(record, by=by)]
    bench.clock.step(8)
    record = submit_standardization(record, by=by, credentials=lab.credentials(by.username))
    bench.clock.step(35)
    return approve_standardization(record, by=team.supervisor, credentials=lab.credentials(team.supervisor.username))


def _standard_titration(
    bench: Bench, row, lot: TitrantLot, *, by: User, standard: str | None, against: TitrantLot | None
) -> None:  # type: ignore[no-untyped-def]
    true = bench.true[lot.number]
    if against is not None:
        titre = bench.true[against.number] * 20.0 / true + 0.03
        bench.titrate(row, titre, by=by, amount="20", burette=BURETTE)
        return
    molar, nominal = (KHP, 0.42) if (standard or "").startswith("KHP") else (NACL, 0.12)
    mass = bench.weighed(nominal)
    if lot.titrant.takes_curve:
        curve = bench.chloride_curve(1000 * mass * 0.9997 / molar, true)
        bench.attach(row, *curve, by=by, amount=f"{mass:.4f}", header=("Volume mL", "mV"))
        return
    bench.titrate(row, 1000 * mass * 0.9997 / (molar * true) + 0.03, by=by, amount=f"{mass:.4f}", burette=BURETTE)


def titrate_run(bench: Bench, run: Run, *, by: User, content: float, lot: str, excess: str | None = None) -> None:
    """Fill the rows of a run for a sample of a true content, until its replicates are acceptable."""
    for blank in bench.rows(run, "blank"):
        bench.titrate(blank, 0.03, by=by, amount=None, burette=BURETTE)
    rows = bench.rows(run, "sample")
    for _ in range(1 + MOST_EXTRA):
        for row in rows:
            _one_titration(bench, run, row, by=by, content=content, lot=lot, excess=excess)
        bench.compute(run)
        if not objections_to_latest_calculation(run):
            return
        rows = [bench.another(run, by=by)]


def _one_titration(bench: Bench, run: Run, row, *, by: User, content: float, lot: str, excess: str | None) -> None:  # type: ignore[no-untyped-def]
    code, c = run.method_version.method.code, bench.true[lot]
    here = content * (1 + bench.noise(0.0006))
    if code == "TA-VIN":
        bench.titrate(row, here * 10 / ACETIC_ACID * 10 * 0.2 / c + 0.03, by=by, amount="10", burette=BURETTE)
    elif code == "TA-VIN-C":
        bench.attach(row, *bench.vinegar_curve(here, lot), by=by, amount="2", header=("Volume mL", "pH"))
    elif code == "ALK-EFF":
        bench.attach(row, *bench.effluent_curve(here, lot), by=by, amount="100", header=("Volume mL", "pH"))
    elif code == "CL-BRN":
        bench.attach(row, *bench.brine_curve(here, lot), by=by, amount="5", header=("Volume mL", "mV"))
    elif code == "CIT-DSC":
        mass = bench.weighed(0.13, sd=0.02)
        bench.titrate(row, mass * here / 100 / CITRIC * 3000 / c + 0.02, by=by, amount=f"{mass:.4f}", burette=BURETTE)
    else:
        mass = bench.weighed(0.15, sd=0.02)
        left = 50 * bench.true[excess or ""] - mass * here / 100 / CACO3 * 2000
        bench.titrate(row, left / c + 0.02, by=by, amount=f"{mass:.4f}", burette=BURETTE)


def begin_run(
    bench: Bench,
    sample: Sample,
    code: str,
    *,
    by: User,
    lots: dict[str, TitrantLot],
    retest_for: Investigation | None = None,
) -> Run:
    """Start a run with the lots and instruments of the day."""
    version = bench.lab.versions[code]
    return start_run(
        sample, by=by, method_version=version, lot=lots[version.titrant.code],
        instruments={part: bench.lab.instruments[name] for part, name in PARTS[code].items()},
        excess_lot=lots[version.excess_titrant.code] if version.excess_titrant else None, retest_for=retest_for,
    )  # fmt: skip


def do_run(
    bench: Bench, sample: Sample, code: str, team: Team, *, content: float, lots: dict[str, TitrantLot],
    retest_for: Investigation | None = None, approve: bool = True,
) -> Run:  # fmt: skip
    """A whole run: started, titrated, computed, submitted, and approved by the supervisor of the day."""
    run = begin_run(bench, sample, code, by=team.analyst, lots=lots, retest_for=retest_for)
    version = bench.lab.versions[code]
    excess = lots[version.excess_titrant.code].number if version.excess_titrant else None
    titrate_run(bench, run, by=team.analyst, content=content, lot=lots[version.titrant.code].number, excess=excess)
    bench.clock.step(5)
    run = submit_run(run, by=team.analyst, credentials=bench.lab.credentials(team.analyst.username))
    latest = latest_calculation(run)
    if approve and latest is not None and latest.outcome != "does_not_conform":
        bench.clock.step(25)
        run = approve_run(run, by=team.supervisor, credentials=bench.lab.credentials(team.supervisor.username))
    return run


def receive(
    bench: Bench, product: str, number: str, *, by: User, made_on: date, size: str, urgent: bool = False
) -> tuple[Batch, Sample]:
    """Record a batch and the sample drawn from it."""
    batch = record_batch(by=by, number=number, product=bench.lab.products[product], made_on=made_on, size=size)
    sample = record_sample(
        by=by, number=f"{number}-1", drawn_at=bench.clock.now - timedelta(minutes=40), drawn_by="filling line",
        batch=batch, place="line 2" if product != "EF" else "outfall", is_urgent=urgent,
    )  # fmt: skip
    return batch, sample


def release(bench: Bench, batch: Batch, team: Team) -> Batch:
    """Release a batch whose tests are all approved."""
    bench.clock.step(10)
    return release_batch(batch, by=team.supervisor, credentials=bench.lab.credentials(team.supervisor.username))
