"""The registers over the API: read by everybody signed in, recorded by the same services."""

from __future__ import annotations

import base64
from typing import Any

import pytest
from django.urls import reverse

from labrecords.models import InstrumentCalibration, ReferenceStandard, Substance, Titrant, TitrantLot, User
from tests.factories.bench import Bench, approved_standardization
from tests.factories.register import CERTIFICATE, days_ago, phthalate, some_instrument, some_substance
from tests.support.trail import all_records, one_event

pytestmark = pytest.mark.django_db
LISTS = ["substance-list", "instrument-list", "standard-list", "titrant-list", "titrant_lot-list"]


def address(name: str, *arguments: Any) -> str:
    return reverse(f"api:{name}", args=arguments)


def send(client, by: User, name: str, data: dict[str, Any], *arguments: Any) -> Any:
    client.force_login(by)
    return client.post(address(name, *arguments), data, content_type="application/json")


def get(client, by: User, name: str, *arguments: Any, **query: str) -> Any:
    client.force_login(by)
    return client.get(address(name, *arguments), query)


@pytest.mark.parametrize("name", LISTS)
def test_list_is_closed_to_strangers(client, name: str) -> None:
    assert client.get(address(name)).status_code == 403
    assert client.post(address(name), {}, content_type="application/json").status_code == 403


@pytest.mark.parametrize("name", LISTS)
def test_list_is_open_to_an_auditor_and_recording_is_not(client, bench: Bench, auditor: User, name: str) -> None:
    before = all_records()
    assert get(client, auditor, name).json()["count"] >= 1
    answer = send(client, auditor, name, {})
    assert answer.status_code == 403
    assert "You are signed in as Rhea Lindqvist" in answer.json()["detail"]
    assert all_records() == before


@pytest.mark.parametrize("name", LISTS)
def test_list_takes_no_other_method(client, supervisor: User, name: str) -> None:
    client.force_login(supervisor)
    assert client.put(address(name), {}, content_type="application/json").status_code == 405
    assert client.delete(address(name)).status_code == 405


def test_substance_list_records(client, supervisor: User) -> None:
    with one_event("substance.record"):
        answer = send(client, supervisor, "substance-list", {"name": "sodium chloride", "formula": "NaCl"})
    assert answer.status_code == 201
    assert answer.json()["molar_mass"] == pytest.approx(58.44, abs=0.01)
    assert Substance.objects.get().pk == answer.json()["id"]


def test_substance_list_answers_a_refusal_with_its_sentences(client, supervisor: User) -> None:
    some_substance(supervisor)
    answer = send(client, supervisor, "substance-list", {"name": "sodium hydroxide", "formula": "NaOH"})
    assert answer.status_code == 409
    assert answer.json()["reasons"][0].startswith("sodium hydroxide is in the register already")


def test_substance_list_answers_a_wrong_shape_with_400(client, supervisor: User) -> None:
    answer = send(client, supervisor, "substance-list", {"name": "x", "hazards": ["biting"]})
    assert answer.status_code == 400
    assert set(answer.json()) == {"formula", "hazards"}


def test_substance_detail_says_what_took_its_place(client, auditor: User, supervisor: User) -> None:
    salt = some_substance(supervisor)
    answer = get(client, auditor, "substance-detail", salt.pk).json()
    assert (answer["name"], answer["superseded_by"]) == ("sodium hydroxide", None)
    assert get(client, auditor, "substance-detail", salt.pk + 1).status_code == 404


def test_substance_list_finds(client, auditor: User, supervisor: User) -> None:
    some_substance(supervisor)
    phthalate(supervisor)
    found = get(client, auditor, "substance-list", q="phthal").json()
    assert [row["name"] for row in found["results"]] == ["potassium hydrogen phthalate"]


def test_instrument_list_records(client, administrator: User) -> None:
    data = {"identifier": "B-07", "kind": "burette", "unit": "mL", "capacity": "50", "resolution": "0.05",
            "tolerance": "0.05"}  # fmt: skip
    with one_event("instrument.record"):
        answer = send(client, administrator, "instrument-list", data)
    assert answer.status_code == 201
    assert answer.json()["capacity"] == "50.0000"
    assert get(client, administrator, "instrument-detail", "B-07").json()["due_on"] is None


def test_instrument_calibrations_record(client, analyst: User, supervisor: User) -> None:
    some_instrument(supervisor)
    data = {"calibrated_on": str(days_ago(1)), "due_on": str(days_ago(-99)), "performed_by": "the bench",
            "corrections": [["10.00", "0.012"]]}  # fmt: skip
    with one_event("instrument.calibrate"):
        answer = send(client, analyst, "instrument-calibrations", data, "B-07")
    assert answer.status_code == 201
    assert InstrumentCalibration.objects.get().corrections == [["10.00", "0.012"]]
    assert get(client, analyst, "instrument-calibrations", "B-07").json()[0]["due_on"] == str(days_ago(-99))
    assert get(client, analyst, "instrument-detail", "B-07").json()["due_on"] == str(days_ago(-99))


def test_instrument_calibrations_refuse_a_table_that_goes_down(client, analyst: User, supervisor: User) -> None:
    some_instrument(supervisor)
    data = {"calibrated_on": str(days_ago(1)), "due_on": str(days_ago(-99)), "performed_by": "the bench",
            "corrections": [["10", "0"], ["5", "0"]]}  # fmt: skip
    answer = send(client, analyst, "instrument-calibrations", data, "B-07")
    assert answer.status_code == 409
    assert "Write them upward" in answer.json()["reasons"][0]


def standard_data(substance: Substance, **given: Any) -> dict[str, Any]:
    return {
        "number": "KHP-26-01", "substance": substance.pk, "supplier_lot": "L1", "purity": "0.9998",
        "purity_expanded": "0.0003", "purity_k": "2", "received_on": str(days_ago(9)),
        "expires_on": str(days_ago(-300)),
    } | given  # fmt: skip


def test_standard_list_records_with_its_certificate(client, analyst: User, supervisor: User) -> None:
    file = {"name": "c.pdf", "content": base64.b64encode(CERTIFICATE[2]).decode()}
    data = standard_data(phthalate(supervisor), certificate=file)
    with one_event("standard.record"):
        answer = send(client, analyst, "standard-list", data)
    assert (answer.status_code, answer.json()["state"]) == (201, "quarantined")
    stored = ReferenceStandard.objects.get().certificate
    assert stored is not None
    assert (bytes(stored.content), stored.media_type) == (CERTIFICATE[2], "application/pdf")
    assert answer.json()["certificate_sha256"] == stored.sha256


@pytest.mark.parametrize(("content", "status"), [("no base64", 400), (base64.b64encode(b"MZ a program").decode(), 409)])
def test_standard_list_takes_no_other_file(client, analyst: User, supervisor: User, content: str, status: int) -> None:
    file = {"name": "c.pdf", "content": content}
    answer = send(client, analyst, "standard-list", standard_data(phthalate(supervisor), certificate=file))
    assert answer.status_code == status
    assert not ReferenceStandard.objects.exists()


def test_standard_list_filters_by_state(client, bench: Bench, auditor: User) -> None:
    assert get(client, auditor, "standard-list", state="in use").json()["count"] == 1
    assert get(client, auditor, "standard-list", state="quarantined").json()["count"] == 0
    assert get(client, auditor, "standard-detail", "KHP-26-01").json()["purity"] == "0.9998000"


def test_titrant_list_records(client, bench: Bench) -> None:
    acid = some_substance(bench.supervisor, name="hydrochloric acid", formula="HCl")
    data = {
        "code": "HCl-0.1", "name": "hydrochloric acid 0.1 mol/L", "substance": acid.pk, "nominal": "0.1",
        "window_low": "0.095", "window_high": "0.105", "restandardization_days": 30, "shelf_life_days": 90,
        "standard_titrant": "NaOH-0.1", "ratio": "1", "aliquot": "20", "replicates_needed": 3,
        "policy": "all",
        "limit": "0.25", "limit_kind": "rsd_percent",
    }  # fmt: skip
    with one_event("titrant.record"):
        answer = send(client, bench.supervisor, "titrant-list", data)
    assert answer.status_code == 201, answer.json()
    assert Titrant.objects.get(code="HCl-0.1").standard_titrant == bench.titrant
    assert get(client, bench.analyst, "titrant-detail", "HCl-0.1").json()["standard_titrant"] == "NaOH-0.1"


def test_titrant_lot_list_records(client, bench: Bench) -> None:
    data = {"titrant": "NaOH-0.1", "number": "N26-118", "prepared_on": str(days_ago(0)),
    "prepared_by": "icastell",
            "reagent_lot": "NA-2611", "volume": "5000"}  # fmt: skip
    with one_event("titrant_lot.record"):
        answer = send(client, bench.analyst, "titrant_lot-list", data)
    assert (answer.status_code, answer.json()["expires_on"]) == (201, str(days_ago(-45)))
    assert TitrantLot.objects.get(number="N26-118").prepared_by == bench.analyst
    again = send(client, bench.analyst, "titrant_lot-list", data)
    assert (again.status_code, again.json()["reasons"][0][:7]) == (409, "Number:")


def test_titrant_lot_detail_gives_a_concentration_with_its_uncertainty(client, bench: Bench) -> None:
    assert get(client, bench.analyst, "titrant_lot-detail", "N26-117").json()["concentration"] is None
    made = approved_standardization(bench)
    held = get(client, bench.analyst, "titrant_lot-detail", "N26-117").json()["concentration"]
    assert (held["standardization"], held["value"]) == (made.number, made.calculation.value)
    assert held["expanded_uncertainty"] == made.calculation.expanded_uncertainty
    assert held["unit"] == "mol/L"


def test_schema_names_every_register(client, auditor: User) -> None:
    said = get(client, auditor, "schema").content.decode()
    for path in ("substances", "instruments", "standards", "titrants", "lots"):
        assert f"/api/{path}/:" in said
