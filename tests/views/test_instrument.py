"""Pages of instruments and their calibrations."""

from __future__ import annotations

import pytest
from django.core.files.uploadedfile import SimpleUploadedFile
from django.urls import reverse

from labrecords.models import InstrumentCalibration, Question, User
from tests.factories.bench import Bench, approved_standardization
from tests.factories.people import typed_by
from tests.factories.register import CERTIFICATE, calibrated, days_ago, some_calibration, some_instrument
from tests.support.trail import all_records, one_event

pytestmark = pytest.mark.django_db
BURETTE = {
    "identifier": "B-07", "kind": "burette", "unit": "mL", "capacity": "50", "resolution": "0,05",
    "tolerance": "0.05",
}  # fmt: skip


def calibration(**given: object) -> dict[str, object]:
    return {
        "calibrated_on": str(days_ago(1)), "due_on": str(days_ago(-364)), "performed_by": "the bench",
    } | given  # fmt: skip


def test_record_shows_an_instrument_that_is_not_calibrated(client, administrator: User) -> None:
    client.force_login(administrator)
    with one_event("instrument.record"):
        page = client.post("/instruments/record/", BURETTE, follow=True).content.decode()
    assert "Burette B-07" in page
    assert "not calibrated" in page
    assert "50 mL" in page


def test_record_refuses_a_second_one(client, supervisor: User) -> None:
    some_instrument(supervisor)
    client.force_login(supervisor)
    answer = client.post("/instruments/record/", BURETTE)
    assert answer.status_code == 409
    assert "Identifier: B-07 is recorded already" in answer.content.decode()


def test_calibrate_keeps_table_and_certificate(client, analyst: User, supervisor: User) -> None:
    some_instrument(supervisor)
    client.force_login(analyst)
    file = SimpleUploadedFile("b 07.pdf", CERTIFICATE[2])
    typed = calibration(corrections="10,00 0,012\r\n20.00 0.020", certificate=file)
    with one_event("instrument.calibrate"):
        page = client.post("/instruments/B-07/calibrate/", typed, follow=True).content.decode()
    assert "10.00: 0.012, 20.00: 0.020" in page
    assert "364 days left" in page
    assert "calibrated instrument B-07" in page


def test_calibrate_refuses_a_table_that_goes_down(client, analyst: User, supervisor: User) -> None:
    some_instrument(supervisor)
    client.force_login(analyst)
    answer = client.post("/instruments/B-07/calibrate/", calibration(corrections="20 0.01\n10 0.02"))
    assert answer.status_code == 409
    assert "Write them upward" in answer.content.decode()
    assert not InstrumentCalibration.objects.exists()


def test_certificate_of_a_calibration_is_saved_and_not_opened(client, auditor: User, supervisor: User) -> None:
    held = some_calibration(some_instrument(supervisor), by=supervisor, certificate=CERTIFICATE)
    client.force_login(auditor)
    answer = client.get(reverse("standard-certificate", args=[held.certificate.pk]))
    assert (answer.content, answer["Content-Type"]) == (CERTIFICATE[2], "application/pdf")
    assert answer["Content-Disposition"] == 'attachment; filename="certificate.pdf"'
    assert (answer["X-Content-Type-Options"], answer["Content-Security-Policy"]) == ("nosniff", "sandbox")


def test_certificate_name_cannot_leave_its_header(client, supervisor: User) -> None:
    file = ('a"; filename="b.exe', "application/pdf", b"%PDF-1.4")
    held = some_calibration(some_instrument(supervisor), by=supervisor, certificate=file)
    client.force_login(supervisor)
    answer = client.get(reverse("standard-certificate", args=[held.certificate.pk]))
    assert answer["Content-Disposition"] == 'attachment; filename="a___filename__b.exe"'


def test_supersede_starts_with_the_values_of_the_old_one(client, supervisor: User) -> None:
    some_instrument(supervisor)
    client.force_login(supervisor)
    assert 'value="0.05"' in client.get("/instruments/B-07/supersede/").content.decode()
    typed = BURETTE | {"identifier": "B-17", "reason": "a new stopcock"}
    with one_event("instrument.supersede"):
        assert client.post("/instruments/B-07/supersede/", typed)["Location"] == "/instruments/B-17/"
    assert "superseded by B-17" in client.get("/instruments/B-07/").content.decode()


def test_withdraw_takes_it_out_of_use(client, supervisor: User) -> None:
    calibrated(supervisor)
    client.force_login(supervisor)
    assert client.post("/instruments/B-07/withdraw/", {"reason": ""}).status_code == 409
    with one_event("instrument.withdraw"):
        page = client.post("/instruments/B-07/withdraw/", {"reason": "the tip is broken"}, follow=True)
    assert "the tip is broken" in page.content.decode()
    assert "Record a calibration" not in page.content.decode()
    assert client.get("/instruments/B-07/withdraw/").status_code == 405


def test_withdraw_calibration_with_a_signature(client, bench: Bench) -> None:
    made = approved_standardization(bench)
    client.force_login(bench.supervisor)
    address = reverse("instrument-withdraw_calibration", args=[bench.burette.calibrations.get().pk])
    with one_event("instrument.withdraw_calibration"):
        answer = client.post(address, typed_by(bench.supervisor, reason="wrong weights"), follow=True)
    assert "withdrawn: wrong weights" in answer.content.decode()
    assert Question.objects.get().standardization == made


def test_withdraw_calibration_refuses_a_wrong_password(client, bench: Bench) -> None:
    client.force_login(bench.supervisor)
    address = reverse("instrument-withdraw_calibration", args=[bench.burette.calibrations.get().pk])
    before = all_records()
    answer = client.post(address, typed_by(bench.supervisor, reason="wrong weights", password="guess"))
    assert answer.status_code == 409
    assert "The password is not right" in answer.content.decode()
    assert "guess" not in answer.content.decode()
    assert all_records() == before


def test_detail_names_where_it_was_used(client, bench: Bench, auditor: User) -> None:
    made = approved_standardization(bench)
    client.force_login(auditor)
    page = client.get("/instruments/B-07/").content.decode()
    assert f'href="/standardizations/{made.number}/"' in page
    assert client.get("/instruments/B-99/").status_code == 404


def test_list_filters_by_kind_and_pins_its_queries(client, bench: Bench, django_assert_num_queries) -> None:
    client.force_login(bench.analyst)
    with django_assert_num_queries(4):  # session, person, count, rows
        page = client.get("/instruments/", {"kind": "burette"}).content.decode()
    assert "B-07" in page
    assert "W-01" not in page
    for number in range(20, 40):
        some_instrument(bench.supervisor, identifier=f"B-{number}")
    with django_assert_num_queries(4):
        assert "B-39" in client.get("/instruments/", {"q": "b-"}).content.decode()
