"""No event, no change: tried every way round, as the role the site runs as."""

from __future__ import annotations

import pytest
from django.db import DatabaseError, connection, transaction

from labrecords.models import AuditChange, AuditEvent, User
from labrecords.services import audit

pytestmark = pytest.mark.django_db


def refused(statement: str, *arguments: object) -> str:
    """Run raw SQL that must fail; what the database said."""
    with pytest.raises(DatabaseError) as caught, transaction.atomic(), connection.cursor() as cursor:
        cursor.execute(statement, arguments)
    return str(caught.value)


def test_tests_run_as_the_application_role() -> None:
    with connection.cursor() as cursor:
        cursor.execute("SELECT current_user")
        assert cursor.fetchone() == ("lab_app",)


def test_application_role_owns_nothing() -> None:
    with connection.cursor() as cursor:
        cursor.execute("SELECT count(*) FROM pg_class WHERE relowner = 'lab_app'::regrole")
        assert cursor.fetchone() == (0,)


def test_update_without_an_event_changes_nothing(analyst: User) -> None:
    with pytest.raises(DatabaseError, match="no event, no change"), transaction.atomic():
        User.objects.update(full_name="Somebody Else")
    assert User.objects.get(pk=analyst.pk).full_name == analyst.full_name


def test_bulk_update_without_an_event_changes_nothing(analyst: User) -> None:
    analyst.full_name = "Somebody Else"
    with pytest.raises(DatabaseError, match="no event, no change"), transaction.atomic():
        User.objects.bulk_update([analyst], ["full_name"])


def test_raw_sql_without_an_event_changes_nothing(analyst: User) -> None:
    assert "no event, no change" in refused("UPDATE labrecords_user SET full_name = 'Somebody Else'")


def test_old_event_opens_nothing_again(analyst: User) -> None:
    with connection.cursor() as cursor:
        cursor.execute("SELECT set_config('labrecords.event', '0', true)")
    assert "no event, no change" in refused("UPDATE labrecords_user SET is_active = false")


@pytest.mark.parametrize("table", ["auditevent", "auditchange", "signature", "calculation", "storedfile"])
@pytest.mark.parametrize("verb", ["DELETE FROM {}", "UPDATE {} SET id = id", "TRUNCATE {} CASCADE"])
def test_trail_is_only_ever_added_to(table: str, verb: str) -> None:
    assert "permission denied" in refused(verb.format(f"labrecords_{table}"))


def test_changes_are_written_by_triggers_only(analyst: User) -> None:
    event = AuditEvent.objects.first()
    assert event is not None
    statement = (
        "INSERT INTO labrecords_auditchange (event_id, table_name, record_key, operation) VALUES (%s, 'x', '1', 'x')"
    )
    assert "permission denied" in refused(statement, event.pk)


def test_records_are_never_deleted(analyst: User) -> None:
    assert "permission denied" in refused("DELETE FROM labrecords_user")


def test_triggers_cannot_be_switched_off() -> None:
    assert "must be owner" in refused("ALTER TABLE labrecords_user DISABLE TRIGGER ALL")
    assert "permission denied" in refused("SET session_replication_role = replica")


def test_simulated_clock_is_the_owners_alone(analyst: User) -> None:
    with connection.cursor() as cursor:
        cursor.execute("SELECT set_config('labrecords.simulated_clock', '2020-01-01T00:00:00Z', true)")
    with (
        pytest.raises(DatabaseError, match="simulated clock"),
        transaction.atomic(),
        audit.event("x.y", by=analyst),
    ):
        pass


def test_simulated_events_say_so(analyst: User, as_owner) -> None:
    with as_owner(), connection.cursor() as cursor:
        cursor.execute("SELECT set_config('labrecords.simulated_clock', '2020-01-01T00:00:00Z', false)")
        with audit.event("x.y", by=analyst) as event:
            pass
    stored = AuditEvent.objects.get(pk=event.id)
    assert stored.is_simulated
    assert stored.occurred_at.year == 2020


def test_change_keeps_before_and_after(analyst: User) -> None:
    with audit.event("user.correct", by=analyst, subject=analyst.username) as event:
        User.objects.filter(pk=analyst.pk).update(full_name="Ines C. Castell")
    change = AuditChange.objects.get(event_id=event.id)
    assert change.before == {"full_name": "Ines Castell"}
    assert change.after == {"full_name": "Ines C. Castell"}


def test_actor_name_comes_from_the_account(analyst: User) -> None:
    with connection.cursor() as cursor:
        cursor.execute(
            "INSERT INTO labrecords_auditevent (actor_id, actor_name, action, subject, reason)"
            " VALUES (%s, 'Nobody', 'x.y', '', '') RETURNING actor_name",
            [analyst.pk],
        )
        assert cursor.fetchone() == ("Ines Castell",)


def test_password_is_on_the_trail_as_a_digest_only(analyst: User) -> None:
    change = AuditChange.objects.get(table_name="labrecords_user", record_key=str(analyst.pk), operation="INSERT")
    assert change.after is not None
    assert change.after["password"].startswith("sha256:")
