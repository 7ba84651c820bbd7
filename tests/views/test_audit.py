"""The trail on pages: events in sentences, found by filters, exported harmlessly, reviewed by signature."""

from __future__ import annotations

import csv
import io
from pathlib import Path
from typing import Any

import pytest
from django.db import connection
from django.test import Client
from django.test.utils import CaptureQueriesContext
from django.urls import reverse
from django.utils import timezone

from labrecords.models import AuditCheckpoint, AuditEvent, Signature, User
from labrecords.services import audit
from labrecords.services.seal import seal_trail
from tests.factories.people import typed_by
from tests.factories.register import some_instrument, some_substance
from tests.support.trail import one_event

pytestmark = pytest.mark.django_db


@pytest.fixture(autouse=True)
def _anchor_file(settings, tmp_path: Path) -> None:
    settings.ANCHOR_FILE = tmp_path / "anchors.txt"


@pytest.fixture
def desk(client: Client, auditor: User) -> Client:
    client.force_login(auditor)
    return client


def shown(client: Client, name: str, *arguments: object, **query: Any) -> str:
    answer = client.get(reverse(name, args=arguments), query)
    assert answer.status_code == 200
    return " ".join(answer.content.decode().split())


def write(by: User, *, action: str = "x.y", subject: str = "", reason: str = "") -> None:
    with audit.event(action, by=by, subject=subject, reason=reason):
        pass


def exported(client: Client, **query: Any) -> list[dict[str, str]]:
    answer = client.get(reverse("audit-export"), query)
    text = b"".join(answer.streaming_content).decode()  # type: ignore[attr-defined]
    return list(csv.DictReader(io.StringIO(text, newline="")))


def test_list_tells_events_in_sentences(desk: Client, supervisor: User) -> None:
    some_instrument(supervisor)
    assert "Maren Okafor recorded instrument B-07" in shown(desk, "audit-list")


def test_list_is_filtered_by_person_kind_record_and_reason(desk: Client, supervisor: User, analyst: User) -> None:
    write(supervisor, action="first.record", subject="R-1", reason="because of one")
    write(analyst, action="second.record", subject="R-2", reason="because of two")
    for query in ({"person": "mokafor"}, {"action": "first"}, {"q": "r-1"}, {"q": "of one"}):
        told = shown(desk, "audit-list", **query)
        assert "recorded first R-1" in told
        assert "recorded second R-2" not in told


def test_list_is_filtered_by_day(desk: Client, supervisor: User) -> None:
    write(supervisor, action="first.record", subject="R-1")
    day = timezone.localdate()
    assert "recorded first R-1" in shown(desk, "audit-list", since=day, until=day)
    assert "No events like that" in shown(desk, "audit-list", until=day - timezone.timedelta(days=1))


@pytest.mark.parametrize(
    ("query", "sentence"),
    [
        ({"since": "yesterday"}, "From is not a day: write it as 2026-11-24."),
        ({"until": "2026-02-30"}, "To is not a day: write it as 2026-11-24."),
        ({"since": "2026-11-25", "until": "2026-11-24"}, "To is 2026-11-24, before From, which is 2026-11-25."),
        ({"person": "nobody"}, "nobody is not one of the available choices"),
    ],
)
def test_list_says_which_filter_is_wrong(desk: Client, query: dict[str, str], sentence: str) -> None:
    assert sentence in shown(desk, "audit-list", **query)


def test_list_asks_as_much_for_many_events_as_for_few(
    desk: Client, supervisor: User, django_assert_num_queries
) -> None:
    with CaptureQueriesContext(connection) as few:
        shown(desk, "audit-list")
    for _ in range(9):
        write(supervisor)
    with django_assert_num_queries(len(few)):
        shown(desk, "audit-list")


def test_list_has_fifty_events_a_page(desk: Client, supervisor: User) -> None:
    for number in range(51):
        write(supervisor, subject=f"N-{number:02d}")
    assert "N-00" not in shown(desk, "audit-list", action="x")
    assert "N-00" in shown(desk, "audit-list", action="x", page=2)


def test_detail_shows_each_column_before_and_after(desk: Client, analyst: User) -> None:
    with audit.event("user.correct", by=analyst, subject="icastell", reason="she <b>married</b>") as event:
        User.objects.filter(pk=analyst.pk).update(full_name="Ines C. Castell")
    told = shown(desk, "audit-detail", event.id)
    assert '<th scope="row">full_name</th><td>Ines Castell</td><td>Ines C. Castell</td>' in told
    assert "she &lt;b&gt;married&lt;/b&gt;" in told
    assert "within a minute" in told


def test_detail_says_the_place_in_the_sealed_trail(desk: Client, supervisor: User) -> None:
    substance = some_substance(supervisor)
    seal_trail()
    event = AuditEvent.objects.get(action="substance.record", subject=substance.name)
    assert f"place {event.leaf.position} " in shown(desk, "audit-detail", event.pk)


def test_export_has_every_event_that_was_found(desk: Client, supervisor: User) -> None:
    some_instrument(supervisor)
    rows = exported(desk, person="mokafor")
    assert [(row["action"], row["subject"], row["simulated clock"]) for row in rows] == [
        ("instrument.record", "B-07", "no")
    ]
    assert len(exported(desk)) == AuditEvent.objects.count()


@pytest.mark.parametrize(
    "text", ["=HYPERLINK('x')", "+1+1", "-1+cmd|' /C calc'!A0", "@SUM(1)", "\t=1", "\r=1", "\n=1", " =1", "＝1"]
)
def test_export_runs_no_formula_in_a_spreadsheet(desk: Client, supervisor: User, text: str) -> None:
    """The starts that spreadsheets take for a formula: OWASP, CSV injection."""
    write(supervisor, subject="S", reason=text)
    (row,) = exported(desk, q="S", action="x")
    assert row["reason"] == f"'{text}"


@pytest.mark.parametrize("text", ["-0.12", "-5", "a = b", "1+1", 'Größe, "klein"\nand more'])
def test_export_leaves_numbers_and_words_as_they_are(desk: Client, supervisor: User, text: str) -> None:
    write(supervisor, subject="S", reason=text)
    (row,) = exported(desk, q="S", action="x")
    assert row["reason"] == text


def test_integrity_runs_when_it_is_asked(desk: Client, supervisor: User) -> None:
    assert "Run the checks now" in shown(desk, "audit-integrity")
    told = desk.post(reverse("audit-integrity")).content.decode()
    assert "0 findings" in told
    assert told.count('class="is-good"') >= 8


def test_integrity_names_what_was_altered(desk: Client, analyst: User, as_enemy) -> None:
    as_enemy("UPDATE labrecords_user SET full_name = 'Nobody' WHERE id = %s", analyst.pk)
    told = desk.post(reverse("audit-integrity")).content.decode()
    assert f"Row {analyst.pk} of labrecords_user is not what the trail says it became." in told
    assert "1 finding" in told


def test_review_is_signed_over_the_root(desk: Client, auditor: User, supervisor: User) -> None:
    checkpoint = seal_trail()
    assert checkpoint is not None
    sent = typed_by(auditor, reason="All events of the week; nothing found.")
    with one_event("trail.review"):
        answer = desk.post(reverse("audit-review"), sent | {"tree_size": str(checkpoint.tree_size)})
    assert answer.status_code == 302
    signature = Signature.objects.get(noun="trail")
    assert bytes(checkpoint.root_hash).hex() in signature.content
    assert (signature.signer, signature.record_id) == (auditor, checkpoint.tree_size)
    assert f"reviewed to place {checkpoint.tree_size - 1} " in shown(desk, "audit-list")


def test_review_shows_what_happened_since_the_last_one(desk: Client, auditor: User, supervisor: User) -> None:
    first = seal_trail()
    assert first is not None
    sent = typed_by(auditor, reason="All events; nothing found.") | {"tree_size": str(first.tree_size)}
    desk.post(reverse("audit-review"), sent)
    write(supervisor, action="replicate.correct", subject="R-26-00001", reason="a slip of the pen")
    seal_trail()
    told = shown(desk, "audit-review")
    assert "Maren Okafor corrected a reading of R-26-00001" in told
    assert "replicate: corrected" in told
    assert f"2 events <small>from place {first.tree_size} " in told  # its own event is the other one


def test_review_refuses_what_was_reviewed_and_empty_remarks(desk: Client, auditor: User, supervisor: User) -> None:
    checkpoint = seal_trail()
    assert checkpoint is not None
    size = {"tree_size": str(checkpoint.tree_size)}
    answer = desk.post(reverse("audit-review"), typed_by(auditor) | size)
    assert "Remarks are empty" in answer.content.decode()
    sent = typed_by(auditor, reason="All events; nothing found.")
    assert desk.post(reverse("audit-review"), sent | size).status_code == 302
    answer = desk.post(reverse("audit-review"), sent | size)
    assert (answer.status_code, Signature.objects.filter(noun="trail").count()) == (409, 1)
    answer = desk.post(reverse("audit-review"), sent | {"tree_size": "x"})
    assert "There is no checkpoint of this size" in answer.content.decode()


def test_review_has_nothing_to_show_before_the_first_seal(desk: Client) -> None:
    assert not AuditCheckpoint.objects.exists()
    assert "Nothing to review" in shown(desk, "audit-review")
