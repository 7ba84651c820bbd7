"""Lineage up and down: the recursive SQL says what a walk over the objects says."""

from __future__ import annotations

from decimal import Decimal as D

import pytest

from labrecords.models import Question, Run, Standardization, TitrantLot
from labrecords.queries.lineage import (
    certified_by,
    chain_up,
    fan_down,
    instruments_on_chain,
    runs_of_source,
    runs_on_instrument,
    runs_resting_on,
    signatures_on_chain,
    standardizations_resting_on,
)
from labrecords.services.run import start_run, void_run
from labrecords.services.standardization import (
    approve_standardization,
    start_standardization,
    submit_standardization,
    void_standardization,
)
from tests.factories.bench import (
    Bench,
    approved_run,
    approved_standardization,
    compute,
    fill,
    some_sample,
    some_version,
    started_run,
)
from tests.factories.people import signed_by
from tests.factories.register import some_lot, some_substance, some_titrant

pytestmark = pytest.mark.django_db


@pytest.fixture
def first(bench: Bench) -> Standardization:
    """The lot that was standardized against the certified standard."""
    return approved_standardization(bench)


@pytest.fixture
def second(bench: Bench, first: Standardization) -> Standardization:
    """Hydrochloric acid, standardized against the first lot."""
    acid = some_substance(bench.supervisor, name="hydrochloric acid", formula="HCl")
    titrant = some_titrant(
        bench.supervisor, acid, None, code="HCl-0.1", name="hydrochloric acid 0.1 mol/L",
        standard_titrant=bench.titrant, standard_mass=None, aliquot=D("10"),
    )  # fmt: skip
    lot = some_lot(titrant, by=bench.analyst, number="H26-003")
    return standardized_against(bench, lot)


def standardized_against(bench: Bench, lot: TitrantLot) -> Standardization:
    instruments = {"burette": bench.burette, "pipette": bench.pipette}
    record = start_standardization(lot, by=bench.analyst, instruments=instruments, against=bench.lot)
    fill(record, [("10.00", "10.05"), ("10.00", "10.05"), ("10.00", "10.05")], by=bench.analyst)
    compute(record)
    record = submit_standardization(record, by=bench.analyst, credentials=signed_by(bench.analyst))
    return approve_standardization(record, by=bench.supervisor, credentials=signed_by(bench.supervisor))


def run_with(bench: Bench, lot: TitrantLot) -> Run:
    """An open run titrated with a lot."""
    version = some_version(bench, titrant=lot.titrant)
    instruments = {"burette": bench.burette, "pipette": bench.pipette}
    sample = some_sample(bench, version)
    return start_run(sample, by=bench.analyst, method_version=version, lot=lot, instruments=instruments)


def walked_up(record: Standardization | None) -> list[str]:
    """The same chain by following the objects one by one."""
    return [] if record is None else [record.number, *walked_up(record.against)]


def test_chain_up_says_what_a_walk_says(bench: Bench, first: Standardization, second: Standardization) -> None:
    run = run_with(bench, second.lot)
    assert [link.number for link in chain_up(run_id=run.pk)] == walked_up(run.standardization)
    assert walked_up(run.standardization) == [second.number, first.number]


def test_chain_up_ends_at_the_certificate(bench: Bench, second: Standardization) -> None:
    *between, last = chain_up(run_id=run_with(bench, second.lot).pk)
    assert [(link.standard, link.certificate) for link in between] == [(None, None)]
    certificate = bench.standard.certificate
    assert certificate is not None
    assert (last.standard, last.purity) == (bench.standard.number, D("0.9998"))
    assert (last.certificate_id, last.certificate_sha256) == (certificate.pk, certificate.sha256)


def test_chain_up_of_a_standardization_begins_with_itself(first: Standardization, second: Standardization) -> None:
    assert [(link.depth, link.number) for link in chain_up(standardization_id=second.pk)] == [
        (0, second.number),
        (1, first.number),
    ]


def test_chain_up_ends_even_when_somebody_made_a_circle(
    first: Standardization, second: Standardization, as_enemy
) -> None:
    as_enemy(
        "UPDATE labrecords_standardization SET basis = 'titrant', reference_standard_id = NULL,"
        " against_id = %s WHERE id = %s",
        second.pk,
        first.pk,
    )
    assert {link.number for link in chain_up(standardization_id=second.pk)} == {first.number, second.number}
    assert standardizations_resting_on([first.pk]) == sorted([first.pk, second.pk])


def test_fan_down_reaches_runs_at_any_remove(bench: Bench, first: Standardization, second: Standardization) -> None:
    run = run_with(bench, second.lot)
    assert standardizations_resting_on([first.pk]) == [first.pk, second.pk]
    assert runs_resting_on([first.pk]) == runs_resting_on([second.pk]) == [run.pk]


def test_fan_down_of_what_nothing_rests_on_is_empty(first: Standardization) -> None:
    assert fan_down([first.pk]) == []
    assert fan_down([]) == []


def test_fan_down_shows_the_state_and_the_question(bench: Bench, first: Standardization) -> None:
    run = approved_run(bench)
    assert [(row.state, row.in_question) for row in fan_down([first.pk])] == [("approved", False)]
    void_standardization(
        first, by=bench.supervisor, credentials=signed_by(bench.supervisor), reason="the balance was wrong"
    )
    assert Question.objects.filter(run=run, answered_at=None).exists()
    assert [row.in_question for row in fan_down([first.pk])] == [True]


def test_fan_down_keeps_void_runs_in_sight(bench: Bench, first: Standardization) -> None:
    run = started_run(bench)
    void_run(run, by=bench.supervisor, credentials=signed_by(bench.supervisor), reason="the wrong sample")
    assert [row.state for row in fan_down([first.pk])] == ["void"]


def test_runs_on_instrument_count_what_a_standardization_used(bench: Bench, first: Standardization) -> None:
    run = started_run(bench)
    for instrument in (bench.burette, bench.pipette, bench.balance):
        assert [row.id for row in runs_on_instrument(instrument)] == [run.pk]


def test_runs_of_source_are_those_of_the_sample(bench: Bench, first: Standardization) -> None:
    run = started_run(bench)
    assert [row.number for row in runs_of_source(run.sample)] == [run.number]


def test_certified_by_finds_what_a_certificate_is_of(bench: Bench) -> None:
    assert certified_by("Certificate.PDF") == bench.standard
    assert certified_by("another.pdf") is None


def test_signatures_and_instruments_are_those_of_the_whole_chain(bench: Bench, first: Standardization) -> None:
    run = approved_run(bench)
    links = chain_up(run_id=run.pk)
    signed = [(item.record_number, item.meaning) for item in signatures_on_chain(run, links)]
    assert signed == [
        (record.number, meaning) for record in (first, run) for meaning in ("performed by", "reviewed by")
    ]
    used = {(str(item.run or item.standardization), item.part) for item in instruments_on_chain(run, links)}
    assert used == {
        (run.number, "burette"), (run.number, "pipette"), (first.number, "burette"), (first.number, "balance"),
    }  # fmt: skip
