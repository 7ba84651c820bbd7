"""Reading the registers."""

from __future__ import annotations

import pytest

from labrecords.models import User
from labrecords.queries.history import sentences_about
from labrecords.queries.instrument import calibrations_of, records_using
from labrecords.queries.register import counts, instruments, people, substances, titrant_lots, titrants
from labrecords.queries.standard import standards_found, standards_in_use
from labrecords.services.instrument import withdraw_calibration, withdraw_instrument
from tests.factories.bench import Bench, approved_standardization, started_run
from tests.factories.people import signed_by
from tests.factories.register import (
    calibrated,
    days_ago,
    phthalate,
    some_calibration,
    some_standard,
    some_substance,
)

pytestmark = pytest.mark.django_db


def test_substances_are_found_by_name_and_formula(supervisor: User) -> None:
    alkali, khp = some_substance(supervisor), phthalate(supervisor)
    assert list(substances()) == [khp, alkali]
    assert list(substances(q="HYDROX")) == [alkali]
    assert list(substances(q="c8h5")) == [khp]
    assert list(substances(q="%")) == []


def test_instruments_carry_the_last_day_of_their_calibration(bench: Bench) -> None:
    assert [item.identifier for item in instruments(day=days_ago(0))] == ["B-07", "P-10", "W-01"]
    (burette,) = instruments(day=days_ago(0), kind="burette")
    assert burette.due_on == days_ago(-335)
    assert instruments(day=days_ago(31)).get(identifier="B-07").due_on is None


def test_instruments_do_not_count_a_withdrawn_calibration(bench: Bench) -> None:
    by = bench.supervisor
    withdraw_calibration(bench.burette.calibrations.get(), by=by, credentials=signed_by(by), reason="wrong weights")
    assert instruments(day=days_ago(0)).get(identifier="B-07").due_on is None


def test_standards_found_shows_a_lapsed_lot_as_expired(bench: Bench) -> None:
    assert standards_found(day=days_ago(0), state="in use").get() == bench.standard
    later = days_ago(-601)
    assert not standards_found(day=later, state="in use").exists()
    assert standards_found(day=later, state="expired").get() == bench.standard


def test_standards_in_use_leaves_out_quarantine(bench: Bench) -> None:
    khp = bench.standard.substance
    some_standard(bench.analyst, khp, number="KHP-26-02")
    assert list(standards_in_use(khp, day=days_ago(0))) == [bench.standard]
    assert list(standards_found(day=days_ago(0), q="l2609")) != []


def test_titrant_lots_show_a_lapsed_lot_as_expired(bench: Bench) -> None:
    assert titrant_lots(day=days_ago(0), state="quarantined").get() == bench.lot
    assert titrant_lots(day=days_ago(-60), state="expired", q="naoh").get() == bench.lot
    assert not titrant_lots(day=days_ago(-60), state="quarantined").exists()


def test_titrants_count_their_lots(bench: Bench) -> None:
    assert titrants(q="0.1").get().lot_count == 1


def test_people_are_found_by_either_name(analyst: User, auditor: User) -> None:
    assert list(people(q="castell")) == [analyst]
    assert list(people(q="RLIND")) == [auditor]


def test_counts_of_every_register(bench: Bench) -> None:
    known = counts()
    assert (known["substance"], known["instrument"], known["standard"], known["titrant_lot"]) == (2, 3, 1, 1)
    assert known["user"] == 3


def test_calibrations_of_an_instrument_load_no_files(bench: Bench, django_assert_num_queries) -> None:
    some_calibration(bench.burette, by=bench.supervisor, calibrated_on=days_ago(2))
    with django_assert_num_queries(1):
        found = calibrations_of(bench.burette)
        assert [item.calibrated_on for item in found] == [days_ago(2), days_ago(30)]


def test_records_using_an_instrument_newest_first(bench: Bench) -> None:
    standardization = approved_standardization(bench)
    run = started_run(bench)
    assert [use.run or use.standardization for use in records_using(bench.burette)] == [run, standardization]


def test_history_of_an_instrument_tells_of_its_calibrations(supervisor: User) -> None:
    burette = calibrated(supervisor)
    withdraw_instrument(burette, by=supervisor, reason="the tip is broken")
    told = sentences_about(burette, parts=calibrations_of(burette))
    assert [line.sentence for line in told] == [
        "recorded instrument B-07",
        "calibrated instrument B-07",
        "withdrew instrument B-07",
    ]
    assert (told[2].actor, told[2].reason) == ("Maren Okafor", "the tip is broken")
