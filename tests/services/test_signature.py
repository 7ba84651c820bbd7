"""Signing: two components, every time; the hash of what was signed; and a database that forges nothing."""

from __future__ import annotations

import hashlib
import json
from typing import Any

import pytest
from django.db import DatabaseError, connection, transaction

from labrecords.models import Meaning, Signature, User
from labrecords.services import audit
from labrecords.services.signature import Credentials, objections_to_credentials, sign
from labrecords.services.user import close_user
from tests.factories.people import PASSWORD, signed_by
from tests.support.trail import refusal_of

pytestmark = pytest.mark.django_db
CONTENT = {"noun": "run", "number": "R-26-00001", "value": 0.7353, "remarks": "klar, größer als 20 °C"}


def signed(by: User, *, actor: User | None = None, **given: Any) -> Signature:
    """A signature under an event of its own, as every service makes it."""
    said = {"credentials": signed_by(by), "noun": "run", "record_id": 1, "number": "R-26-00001", "content": CONTENT}
    with transaction.atomic(), audit.event("run.approve", by=actor or by, subject="R-26-00001"):
        return sign(Meaning.REVIEWED, by=by, **said | given)


@pytest.mark.parametrize("typed", ["mokafor", "MOkafor", " mokafor "])
def test_credentials_are_the_own_name_and_password(supervisor: User, typed: str) -> None:
    assert objections_to_credentials(Credentials(username=typed, password=PASSWORD), by=supervisor) == []


@pytest.mark.parametrize(
    ("credentials", "sentence"),
    [
        (Credentials(username="mokafor", password="guess"), "The password is not right. Nothing was signed"),
        (Credentials(username="mokafor", password=""), "The password is not right"),
        (Credentials(username="mokafor", password=PASSWORD.upper()), "The password is not right"),
        (Credentials(username="icastell", password=PASSWORD), "'icastell'; signed in is mokafor. Sign with your own"),
        (Credentials(username="", password=PASSWORD), "The name typed is ''; signed in is mokafor"),
    ],
)
def test_sign_refuses_other_credentials(supervisor: User, credentials: Credentials, sentence: str) -> None:
    assert sentence in refusal_of(signed, supervisor, credentials=credentials)


def test_sign_refuses_an_account_that_was_closed(supervisor: User, administrator: User) -> None:
    close_user(supervisor, by=administrator, reason="left the laboratory")
    supervisor.refresh_from_db()
    assert "The password is not right" in refusal_of(signed, supervisor)


def test_sign_keeps_exactly_what_was_signed(supervisor: User) -> None:
    stored = Signature.objects.get(pk=signed(supervisor, reason="as it should be", zone="Europe/Berlin").pk)
    assert (stored.signer, stored.printed_name, stored.meaning) == (supervisor, "Maren Okafor", "reviewed by")
    assert (stored.noun, stored.record_id, stored.record_number) == ("run", 1, "R-26-00001")
    assert (stored.reason, stored.zone) == ("as it should be", "Europe/Berlin")
    assert json.loads(stored.content) == CONTENT | {"value": "0.7353"}
    assert stored.content_sha256 == hashlib.sha256(stored.content.encode()).hexdigest()


def test_sign_gives_the_same_hash_whatever_the_order_of_the_content(supervisor: User) -> None:
    first, second = signed(supervisor), signed(supervisor, content=dict(reversed(CONTENT.items())))
    assert first.content_sha256 == second.content_sha256
    assert signed(supervisor, content=CONTENT | {"value": 0.7354}).content_sha256 != first.content_sha256


def test_signature_without_an_event_is_refused_by_the_database(supervisor: User) -> None:
    said = {"credentials": signed_by(supervisor), "noun": "run", "record_id": 1, "number": "R-1", "content": CONTENT}
    with pytest.raises(DatabaseError, match="made by the person who acts"), transaction.atomic():
        sign(Meaning.REVIEWED, by=supervisor, **said)


def test_signature_under_the_event_of_another_is_refused_by_the_database(supervisor: User, analyst: User) -> None:
    with pytest.raises(DatabaseError, match="made by the person who acts"):
        signed(supervisor, actor=analyst)
    assert not Signature.objects.exists()


def test_database_itself_writes_name_hash_and_time_of_a_signature(supervisor: User) -> None:
    with transaction.atomic(), audit.event("run.approve", by=supervisor) as event:
        made = Signature.objects.create(
            signer=supervisor, printed_name="Somebody Else", meaning=Meaning.REVIEWED, noun="run", record_id=1,
            record_number="R-1", content="{}", content_sha256="0" * 64, signed_at="2020-01-01T00:00:00Z", zone="UTC",
        )  # fmt: skip
    stored = Signature.objects.get(pk=made.pk)
    assert (stored.printed_name, stored.content_sha256) == ("Maren Okafor", hashlib.sha256(b"{}").hexdigest())
    assert stored.signed_at >= event.at


@pytest.mark.parametrize(
    "statement",
    [
        "UPDATE labrecords_signature SET meaning = 'performed by'",
        "UPDATE labrecords_signature SET content = '{}'",
        "DELETE FROM labrecords_signature",
        "TRUNCATE labrecords_signature",
    ],
)
def test_signature_is_never_changed(statement: str, supervisor: User) -> None:
    signed(supervisor)
    with (
        pytest.raises(DatabaseError, match=r"permission denied|only ever added"),
        transaction.atomic(),
        audit.event("signature.correct", by=supervisor),
        connection.cursor() as cursor,
    ):
        cursor.execute(statement)


def test_sign_without_a_trail_writes_nothing(supervisor: User, break_trail: Any) -> None:
    break_trail()
    with pytest.raises(DatabaseError, match="no room for the trail"):
        signed(supervisor)
    assert not Signature.objects.exists()
