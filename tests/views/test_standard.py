"""Pages of reference standards."""

from __future__ import annotations

import pytest
from django.core.files.uploadedfile import SimpleUploadedFile
from django.urls import reverse

from labrecords.models import LotState, Question, ReferenceStandard, StoredFile, User
from tests.factories.bench import Bench, approved_standardization
from tests.factories.people import typed_by
from tests.factories.register import CERTIFICATE, days_ago, phthalate, some_standard
from tests.support.trail import all_records, one_event

pytestmark = pytest.mark.django_db


def typed(**given: object) -> dict[str, object]:
    return {
        "supplier_lot": "L2609-41", "purity": "99,98", "purity_expanded": "0,03", "purity_k": "2",
        "received_on": str(days_ago(9)), "expires_on": str(days_ago(-300)),
    } | given  # fmt: skip


def new(supervisor: User, **given: object) -> dict[str, object]:
    file = SimpleUploadedFile("certificate.pdf", CERTIFICATE[2])
    return typed(number="KHP-26-01", substance=phthalate(supervisor).pk, certificate=file, **given)


def test_record_shows_a_lot_in_quarantine(client, analyst: User, supervisor: User) -> None:
    client.force_login(analyst)
    data = new(supervisor)
    with one_event("standard.record"):
        page = client.post("/standards/record/", data, follow=True).content.decode()
    assert "(99.98 ± 0.03) %" in page
    assert "quarantined" in page
    assert "Release it from quarantine" not in page
    assert bytes(StoredFile.objects.get().content) == CERTIFICATE[2]


def test_record_refuses_a_fraction_where_per_cent_is_asked(client, analyst: User, supervisor: User) -> None:
    client.force_login(analyst)
    answer = client.post("/standards/record/", new(supervisor) | {"purity": "0.9998"})
    assert answer.status_code == 400
    assert "Purity, % is 0.9998 %; 50 to 101 % is expected" in answer.content.decode()
    assert not ReferenceStandard.objects.exists()


def test_record_refuses_a_page_as_a_certificate(client, analyst: User, supervisor: User) -> None:
    client.force_login(analyst)
    file = SimpleUploadedFile("certificate.pdf", b"<html>", content_type="application/pdf")
    answer = client.post("/standards/record/", new(supervisor) | {"certificate": file})
    assert "“certificate.pdf” is neither PDF, PNG nor JPEG" in answer.content.decode()
    assert not StoredFile.objects.exists()


def test_record_of_a_number_twice_is_refused(client, analyst: User, supervisor: User) -> None:
    client.force_login(analyst)
    data = new(supervisor)
    client.post("/standards/record/", data)
    answer = client.post("/standards/record/", data | {"certificate": SimpleUploadedFile("c.pdf", CERTIFICATE[2])})
    assert answer.status_code == 409
    assert ReferenceStandard.objects.count() == 1


def test_issue_puts_it_in_use(client, analyst: User, supervisor: User) -> None:
    some_standard(analyst, phthalate(supervisor))
    client.force_login(supervisor)
    assert "Release it from quarantine" in client.get("/standards/KHP-26-01/").content.decode()
    with one_event("standard.issue"):
        page = client.post("/standards/KHP-26-01/issue/", follow=True).content.decode()
    assert "KHP-26-01 is in use." in page
    assert client.post("/standards/KHP-26-01/issue/").status_code == 409
    assert client.get("/standards/KHP-26-01/issue/").status_code == 405


def test_detail_says_why_a_lot_is_not_issued(client, analyst: User, supervisor: User) -> None:
    some_standard(analyst, phthalate(supervisor), certificate=None)
    client.force_login(supervisor)
    page = client.get("/standards/KHP-26-01/").content.decode()
    assert "KHP-26-01 has no certificate. Correct it, with the file of its certificate." in page
    assert 'aria-disabled="true"' in page


def test_correct_adds_a_certificate(client, analyst: User, supervisor: User) -> None:
    some_standard(analyst, phthalate(supervisor), certificate=None)
    client.force_login(analyst)
    file = SimpleUploadedFile("late.pdf", CERTIFICATE[2])
    with one_event("standard.correct"):
        answer = client.post("/standards/KHP-26-01/correct/", typed(certificate=file, reason="it came by post"))
    assert answer["Location"] == "/standards/KHP-26-01/"
    page = client.get("/standards/KHP-26-01/").content.decode()
    assert "late.pdf" in page
    assert "<q>it came by post</q>" in page


def test_correct_of_a_lot_in_use_is_refused(client, bench: Bench) -> None:
    client.force_login(bench.analyst)
    before = all_records()
    answer = client.post("/standards/KHP-26-01/correct/", typed(purity="99.95", reason="a slip"))
    assert answer.status_code == 409
    assert "only a lot in quarantine is corrected" in answer.content.decode()
    assert all_records() == before


def test_supersede_asks_for_a_new_number_and_file(client, bench: Bench) -> None:
    client.force_login(bench.supervisor)
    assert 'value="99.98"' in client.get("/standards/KHP-26-01/supersede/").content.decode()
    file = SimpleUploadedFile("c.pdf", CERTIFICATE[2])
    data = typed(number="KHP-26-02", substance=bench.standard.substance_id, certificate=file, reason="reissued")
    with one_event("standard.supersede"):
        assert client.post("/standards/KHP-26-01/supersede/", data)["Location"] == "/standards/KHP-26-02/"
    assert "superseded by KHP-26-02" in client.get("/standards/").content.decode()


def test_withdraw_with_a_signature_questions_what_rests_on_it(client, bench: Bench) -> None:
    made = approved_standardization(bench)
    client.force_login(bench.supervisor)
    data = typed_by(bench.supervisor, reason="the certificate was recalled")
    with one_event("standard.withdraw"):
        page = client.post("/standards/KHP-26-01/withdraw/", data, follow=True).content.decode()
    assert "the certificate was recalled" in page
    assert Question.objects.get().standardization == made


@pytest.mark.parametrize(
    ("data", "sentence"),
    [
        ({"username": "", "password": "x", "reason": "recalled"}, "Your name for signing in is empty"),
        ({"username": "mokafor", "password": "", "reason": "recalled"}, "Your password is empty"),
        (
            {"username": "icastell", "password": "correct horse 42", "reason": "recalled"},
            "Sign with your own name",
        ),
        ({"username": "mokafor", "password": "correct horse 42", "reason": ""}, "say in a sentence why"),
    ],
)
def test_withdraw_refuses(client, bench: Bench, data: dict[str, str], sentence: str) -> None:
    client.force_login(bench.supervisor)
    answer = client.post("/standards/KHP-26-01/withdraw/", data)
    assert answer.status_code == 409
    assert sentence in answer.content.decode()
    bench.standard.refresh_from_db()
    assert bench.standard.state == LotState.IN_USE


def test_certificate_serves_no_other_file(client, bench: Bench, auditor: User) -> None:
    client.force_login(auditor)
    assert client.get(reverse("standard-certificate", args=[bench.standard.certificate_id])).status_code == 200
    assert client.get(reverse("standard-certificate", args=[bench.standard.certificate_id + 1])).status_code == 404


def test_list_filters_and_pins_its_queries(client, bench: Bench, django_assert_num_queries) -> None:
    client.force_login(bench.analyst)
    with django_assert_num_queries(4):  # session, person, count, rows
        client.get("/standards/")
    for number in range(10, 30):
        some_standard(bench.analyst, bench.standard.substance, number=f"KHP-26-{number}")
    with django_assert_num_queries(4):
        page = client.get("/standards/", {"state": "quarantined", "q": "khp"}).content.decode()
    assert "KHP-26-29" in page
    assert 'href="/standards/KHP-26-01/"' not in page
