"""Substances: their molar mass comes from the formula."""

from __future__ import annotations

from decimal import Decimal as D

import pytest
from django.db import DatabaseError

from labrecords.models import Substance, User
from labrecords.services.substance import record_substance, supersede_substance
from tests.factories.register import days_ago, some_lot, some_substance, some_titrant
from tests.support.trail import all_records, one_event, refusal_of

pytestmark = pytest.mark.django_db


def supersede(substance: Substance, by: User, **given: object) -> Substance:
    said = {"name": "sodium hydroxide pellets", "formula": "NaOH", "hazards": [], "density": None}
    return supersede_substance(substance, by=by, **said | {"reason": "pellets are bought now"} | given)


def test_record_substance_computes_the_molar_mass(supervisor: User) -> None:
    with one_event("substance.record"):
        substance = some_substance(supervisor, name="sodium chloride", formula="NaCl")
    # IUPAC 2021 standard atomic weights, abridged: Na 22.990, Cl 35.45.
    assert substance.molar_mass == pytest.approx(22.990 + 35.45, abs=0.01)
    assert 0 < substance.molar_mass_u < 0.01


def test_record_substance_refuses_a_formula_it_cannot_read(supervisor: User) -> None:
    assert "NaXx" in refusal_of(record_substance, by=supervisor, name="nonsense", formula="NaXx")


def test_record_substance_refuses_a_second_one_of_the_name(supervisor: User) -> None:
    some_substance(supervisor)
    assert "is in the register already" in refusal_of(some_substance, supervisor)


@pytest.mark.parametrize(
    ("given", "sentence"),
    [
        ({"name": "  "}, "Name is empty"),
        ({"name": "x" * 121}, "up to 120 are kept"),
        ({"hazards": ["biting"]}, "Hazard 'biting' is not known"),
        ({"density": D("100")}, "Density is 100 g"),
    ],
)
def test_record_substance_refuses(supervisor: User, given: dict, sentence: str) -> None:
    assert sentence in refusal_of(some_substance, supervisor, **given)


def test_record_substance_is_no_work_of_an_analyst(analyst: User) -> None:
    assert "neither administrator nor supervisor" in refusal_of(some_substance, analyst)


def test_record_substance_without_a_trail_changes_nothing(supervisor: User, break_trail) -> None:
    before = all_records()
    break_trail()
    with pytest.raises(DatabaseError, match="no room for the trail"):
        some_substance(supervisor)
    assert all_records() == before


def test_supersede_substance_keeps_the_old_one(supervisor: User) -> None:
    old = some_substance(supervisor)
    with one_event("substance.supersede"):
        new = supersede(old, supervisor)
    old.refresh_from_db()
    assert old.superseded_by == new
    assert old.name == "sodium hydroxide"


def test_supersede_substance_leaves_its_lots_alone(supervisor: User) -> None:
    old = some_substance(supervisor)
    salt = some_substance(supervisor, name="sodium chloride", formula="NaCl")
    lot = some_lot(some_titrant(supervisor, old, salt), by=supervisor)
    supersede(old, supervisor)
    lot.refresh_from_db()
    assert (lot.titrant.substance, lot.prepared_on) == (old, days_ago(1))


def test_supersede_substance_refuses_twice_and_without_reason(supervisor: User) -> None:
    old = some_substance(supervisor)
    assert "Reason is ''" in refusal_of(supersede, old, supervisor, reason="")
    assert "is in the register already" in refusal_of(supersede, old, supervisor, name="sodium hydroxide")
    new = supersede(old, supervisor)
    assert f"Open {new.name} instead" in refusal_of(supersede, old, supervisor, name="third")


def test_supersede_substance_without_a_trail_changes_nothing(supervisor: User, break_trail) -> None:
    old = some_substance(supervisor)
    before = all_records()
    break_trail()
    with pytest.raises(DatabaseError, match="no room for the trail"):
        supersede(old, supervisor)
    assert all_records() == before
