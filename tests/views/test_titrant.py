"""Pages of titrants and their lots."""

from __future__ import annotations

import re

import pytest

from labrecords.models import LotState, Question, Substance, Titrant, TitrantLot, User
from tests.factories.bench import Bench, approved_run, approved_standardization
from tests.factories.people import typed_by
from tests.factories.register import days_ago, phthalate, some_lot, some_substance
from tests.support.trail import all_records, one_event

pytestmark = pytest.mark.django_db


def rule(alkali: Substance, standard: Substance, **given: object) -> dict[str, object]:
    return {
        "code": "NaOH-0.1", "name": "sodium hydroxide 0.1 mol/L", "substance": alkali.pk,
        "nominal": "0,1", "window_low": "0,095", "window_high": "0,105", "restandardization_days": "14",
        "shelf_life_days": "45", "standard_substance": standard.pk, "ratio": "1", "standard_mass": "0.42",
        "indicator_bias": "0.02", "indicator_u": "0.01", "replicates_needed": "3", "policy": "all",
        "limit": "0.25",
        "limit_kind": "rsd_percent", "coverage": "k2", "expands_like": "water", "temperature_within": "4",
        "endpoint": "indicator", "agreement_limit": "3", "blanks_needed": "1",
    } | given  # fmt: skip


def bottle(analyst: User, **given: object) -> dict[str, object]:
    return {
        "number": "N26-118", "prepared_on": str(days_ago(0)), "prepared_by": analyst.pk,
        "reagent_lot": "NA-2611",
        "volume": "5000", "expires_on": "",
    } | given  # fmt: skip


def test_record_shows_the_rule(client, supervisor: User) -> None:
    client.force_login(supervisor)
    data = rule(some_substance(supervisor), phthalate(supervisor))
    with one_event("titrant.record"):
        page = client.post("/titrants/record/", data, follow=True).content.decode()
    assert "accepted 0.095 to 0.105 mol/L" in page
    assert "potassium hydrogen phthalate" in page


def test_record_refuses_a_window_that_misses_the_nominal(client, supervisor: User) -> None:
    client.force_login(supervisor)
    data = rule(some_substance(supervisor), phthalate(supervisor), window_high="0.099")
    answer = client.post("/titrants/record/", data)
    assert answer.status_code == 409
    assert "Window is 0.095 to 0.099 mol/L" in answer.content.decode()
    assert not Titrant.objects.exists()


def test_supersede_starts_with_the_rule(client, bench: Bench) -> None:
    client.force_login(bench.supervisor)
    assert 'value="0.095"' in client.get("/titrants/NaOH-0.1/supersede/").content.decode()
    data = rule(bench.titrant.substance, bench.standard.substance, code="NaOH-0.1b", reason="it drifts in a week")
    with one_event("titrant.supersede"):
        assert client.post("/titrants/NaOH-0.1/supersede/", data)["Location"] == "/titrants/NaOH-0.1b/"
    page = client.get("/titrants/NaOH-0.1/").content.decode()
    assert "superseded by NaOH-0.1b" in page
    assert "/lots/record/" not in page


def test_lot_record_starts_with_today_and_the_person(client, bench: Bench) -> None:
    client.force_login(bench.analyst)
    page = client.get("/titrants/NaOH-0.1/lots/record/").content.decode()
    assert f'value="{days_ago(0)}"' in page
    assert re.search(rf'<option value="{bench.analyst.pk}" selected>', page)
    assert "left empty: 45 days after it was prepared" in page


def test_lot_record_keeps_a_bottle_in_quarantine(client, bench: Bench) -> None:
    client.force_login(bench.analyst)
    with one_event("titrant_lot.record"):
        answer = client.post("/titrants/NaOH-0.1/lots/record/", bottle(bench.analyst))
    assert answer["Location"] == "/lots/N26-118/"
    lot = TitrantLot.objects.get(number="N26-118")
    assert (lot.state, lot.expires_on) == (LotState.QUARANTINED, days_ago(-45))


def test_lot_record_refuses_a_shelf_life_of_its_own(client, bench: Bench) -> None:
    client.force_login(bench.analyst)
    answer = client.post("/titrants/NaOH-0.1/lots/record/", bottle(bench.analyst, expires_on=str(days_ago(-46))))
    assert answer.status_code == 409
    assert "after the shelf life of 45 days" in answer.content.decode()


def test_lot_detail_before_its_standardization(client, bench: Bench) -> None:
    client.force_login(bench.analyst)
    page = client.get("/lots/N26-117/").content.decode()
    assert "standardize it before it is used" in page
    assert 'href="/standardizations/start/N26-117/"' in page
    assert "0 started" in page
    assert "Wear eye protection" in page


def test_lot_detail_shows_concentration_days_and_volume(client, bench: Bench, auditor: User) -> None:
    made = approved_standardization(bench)
    approved_run(bench)
    client.force_login(auditor)
    page = client.get("/lots/N26-117/").content.decode()
    assert f'href="/standardizations/{made.number}/"' in page
    assert "14 days left" in page
    assert "1 started" in page
    assert "99 mL in 8 recorded titrations; 4901 mL should be left" in page  # 62.00 and 37.00 mL of 5000 mL
    assert "1 run rests on it" in page
    assert 'href="/standardizations/start/N26-117/"' not in page


def test_lot_label_carries_a_code_and_the_cautions(client, bench: Bench) -> None:
    approved_standardization(bench)
    client.force_login(bench.analyst)
    page = client.get("/lots/N26-117/label/").content.decode()
    assert "<svg" in page
    assert "Corrosive base: wear gloves" in page
    assert "mol/L" in page
    assert "style=" not in page


def test_lot_expire_is_refused_before_its_time(client, bench: Bench) -> None:
    client.force_login(bench.analyst)
    answer = client.post("/lots/N26-117/expire/")
    assert answer.status_code == 409
    assert "Withdraw it to end its use now" in answer.content.decode()
    assert "Mark as expired" not in answer.content.decode()


@pytest.mark.parametrize(("ticked", "questions"), [({"is_doubtful": "1"}, 1), ({}, 0)])
def test_lot_withdraw_with_a_signature(client, bench: Bench, ticked: dict[str, str], questions: int) -> None:
    approved_standardization(bench)
    client.force_login(bench.supervisor)
    data = typed_by(bench.supervisor, reason="the bottle stood open") | ticked
    with one_event("titrant_lot.withdraw"):
        page = client.post("/lots/N26-117/withdraw/", data, follow=True).content.decode()
    assert "the bottle stood open" in page
    assert Question.objects.count() == questions


def test_lot_withdraw_without_a_password_changes_nothing(client, bench: Bench) -> None:
    client.force_login(bench.supervisor)
    before = all_records()
    answer = client.post("/lots/N26-117/withdraw/", typed_by(bench.supervisor, reason="open", password=""))
    assert answer.status_code == 409
    assert "Your password is empty" in answer.content.decode()
    assert all_records() == before


def test_lot_list_filters_and_pins_its_queries(client, bench: Bench, django_assert_num_queries) -> None:
    client.force_login(bench.analyst)
    with django_assert_num_queries(4):  # session, person, count, rows
        client.get("/lots/")
    for number in range(118, 138):
        some_lot(bench.titrant, by=bench.analyst, number=f"N26-{number}")
    with django_assert_num_queries(4):
        page = client.get("/lots/", {"q": "N26-13", "state": "quarantined"}).content.decode()
    assert page.count('href="/lots/N26-13') == 8
    assert "No lots here" in client.get("/lots/", {"state": "in use"}).content.decode()


def test_titrant_list_and_detail_pin_their_queries(client, bench: Bench, django_assert_max_num_queries) -> None:
    client.force_login(bench.analyst)
    with django_assert_max_num_queries(4):
        assert "NaOH-0.1" in client.get("/titrants/", {"q": "naoh"}).content.decode()
    for number in range(118, 138):
        some_lot(bench.titrant, by=bench.analyst, number=f"N26-{number}")
    with django_assert_max_num_queries(10):
        assert "N26-137" in client.get("/titrants/NaOH-0.1/").content.decode()
