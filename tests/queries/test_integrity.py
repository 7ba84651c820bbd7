"""The integrity check names what somebody with the superuser's password altered, whichever way round.

The enemy of these tests works with every trigger switched off: tests/support/enemy.py.
"""

from __future__ import annotations

from pathlib import Path

import pytest
from django.core.management import CommandError, call_command
from django.db import connection

from labrecords.models import AuditCheckpoint, AuditEvent, AuditLeaf, Calculation, Run, Signature
from labrecords.queries.integrity import checks, simulated_events
from labrecords.services import audit
from labrecords.services.seal import anchor, seal_trail
from tests.factories.bench import Bench, approved_run, approved_standardization
from tests.factories.register import some_instrument

pytestmark = pytest.mark.django_db


@pytest.fixture(autouse=True)
def _anchor_file(settings, tmp_path: Path) -> None:
    settings.ANCHOR_FILE = tmp_path / "anchors.txt"


@pytest.fixture
def run(bench: Bench) -> Run:
    """An approved run on an approved standardization, its trail sealed and anchored."""
    approved_standardization(bench)
    run = approved_run(bench)
    sealed()
    return run


def sealed() -> AuditCheckpoint:
    """Seal, and anchor at once: the test's transaction never ends."""
    checkpoint = seal_trail()
    assert checkpoint is not None
    anchor(checkpoint)
    return checkpoint


def findings() -> list[str]:
    return [finding for check in checks().values() for finding in check()]


def only_finding(sentence: str) -> None:
    """One finding, and it says this."""
    found = findings()
    assert len(found) == 1, found
    assert sentence in found[0]


def test_nothing_is_found_where_nothing_was_done(run: Run) -> None:
    assert findings() == []
    call_command("check_integrity")


def test_altered_row_is_named(run: Run, as_enemy) -> None:
    as_enemy("UPDATE labrecords_run SET void_reason = 'made up' WHERE id = %s", run.pk)
    only_finding(f"Row {run.pk} of labrecords_run is not what the trail says it became.")


def test_altered_reading_is_named_by_its_row_and_by_its_signature(run: Run, as_enemy) -> None:
    reading = run.replicates.get(kind="sample", number=2)
    as_enemy("UPDATE labrecords_replicate SET \"end\" = '12.31' WHERE id = %s", reading.pk)
    assert findings() == [
        f"Row {reading.pk} of labrecords_replicate is not what the trail says it became.",
        f"{run.number} is not what its reviewer signed.",
    ]


def test_column_that_came_later_has_its_value_of_then(bench: Bench, as_enemy) -> None:
    """A row from before a migration says nothing of the new column; another value than the first is named."""
    approved_standardization(bench)
    as_enemy("UPDATE labrecords_auditchange SET after = after - 'buoyancy' WHERE table_name = 'labrecords_titrant'")
    sealed()
    assert findings() == []
    as_enemy("UPDATE labrecords_titrant SET buoyancy = true")
    only_finding(f"Row {bench.titrant.pk} of labrecords_titrant is not what the trail says it became.")


def test_deleted_row_is_named(run: Run, as_enemy) -> None:
    reading = run.replicates.get(kind="blank")
    as_enemy("DELETE FROM labrecords_replicate WHERE id = %s", reading.pk)
    assert f"Row {reading.pk} of labrecords_replicate is on the trail and gone from the table." in findings()


def test_row_written_from_below_is_named_even_in_an_empty_table(run: Run, as_enemy) -> None:
    as_enemy("INSERT INTO labrecords_product (id, code, name) VALUES (7, 'X', 'made up')")
    only_finding("Row 7 of labrecords_product stands outside the trail.")


def test_change_of_the_trail_that_covers_a_change_of_a_row_is_named(run: Run, as_enemy) -> None:
    """The cleverer enemy alters the row, the trail and the signature alike: the seal says so."""
    as_enemy("UPDATE labrecords_sample SET place = 'elsewhere'")
    as_enemy(
        "UPDATE labrecords_auditchange SET after = jsonb_set(after, '{place}', '\"elsewhere\"')"
        " WHERE table_name = 'labrecords_sample'"
    )
    event = AuditEvent.objects.get(action="sample.record")
    only_finding(f"Event {event.pk} (sample.record CS-A-1) was altered after it was sealed")


@pytest.mark.parametrize(
    "change",
    ["actor_name = 'Nobody'", "reason = 'made up'", "occurred_at = occurred_at - interval '1 hour'"],
)
def test_altered_event_is_named(run: Run, as_enemy, change: str) -> None:
    event = AuditEvent.objects.get(action="run.approve")
    as_enemy(f"UPDATE labrecords_auditevent SET {change} WHERE id = %s", event.pk)
    only_finding(f"Event {event.pk} (run.approve {run.number}) was altered after it was sealed")


def test_event_cut_out_of_the_tree_is_named(run: Run, as_enemy) -> None:
    leaf = AuditLeaf.objects.get(event__action="run.submit")
    as_enemy("DELETE FROM labrecords_auditleaf WHERE position = %s", leaf.position)
    assert f"Place {leaf.position} of the sealed trail is missing." in findings()


def test_tree_sealed_anew_without_the_key_is_named(run: Run, as_enemy, settings) -> None:
    size, key = AuditLeaf.objects.count(), settings.SEALING_KEY
    as_enemy("DELETE FROM labrecords_auditleaf")
    as_enemy("DELETE FROM labrecords_auditcheckpoint")
    as_enemy("UPDATE labrecords_auditevent SET reason = 'made up' WHERE action = 'run.approve'")
    settings.SEALING_KEY = "guessed"
    assert seal_trail() is not None
    settings.SEALING_KEY = key
    found = findings()
    assert f"The mark of the checkpoint at {size} events is not this laboratory's." in found
    assert f"The anchor file has another root at {size} events than the database." in found


def test_tail_cut_off_with_its_checkpoint_is_named_by_the_anchor(run: Run, as_enemy, bench: Bench) -> None:
    first = AuditLeaf.objects.count()
    some_instrument(bench.supervisor, identifier="B-99")
    last = sealed()
    as_enemy("DELETE FROM labrecords_auditleaf WHERE position >= %s", first)
    as_enemy("DELETE FROM labrecords_auditcheckpoint WHERE tree_size > %s", first)
    only_finding(f"The anchor file has a checkpoint at {last.tree_size} events, and the database has none.")


def test_anchor_file_that_is_not_readable_is_named(run: Run, settings) -> None:
    with settings.ANCHOR_FILE.open("ab") as file:
        file.write(b"\xff\xfe nonsense\n")
    only_finding("The anchor file has a checkpoint at -1 events")


def test_signature_over_other_content_is_named(run: Run, as_enemy) -> None:
    signature = Signature.objects.get(noun="run", record_id=run.pk, meaning="reviewed by")
    as_enemy(
        "UPDATE labrecords_signature SET content = replace(content, '12.30', '12.31') WHERE id = %s",
        signature.pk,
    )
    found = findings()
    assert f"Signature {signature.pk} on {run.number} does not cover its stored content." in found
    assert f"{run.number} is not what its reviewer signed." in found


def test_signature_of_the_same_person_is_named(run: Run, as_enemy, bench: Bench) -> None:
    as_enemy(
        "UPDATE labrecords_signature SET signer_id = %s WHERE record_number = %s AND meaning = 'reviewed by'",
        bench.analyst.pk,
        run.number,
    )
    assert f"{run.number} is approved without the signature of a second person." in findings()


def test_calculation_with_other_inputs_is_named(run: Run, as_enemy) -> None:
    calculation = Calculation.objects.get(run=run)
    as_enemy("UPDATE labrecords_calculation SET inputs = inputs || ' ' WHERE id = %s", calculation.pk)
    assert f"Calculation {calculation.pk} has other inputs than it was made from." in findings()


def test_result_out_of_specification_without_an_investigation_is_named(run: Run, as_enemy) -> None:
    as_enemy("UPDATE labrecords_calculation SET outcome = 'does_not_conform' WHERE id = %s", run.calculation_id)
    assert f"{run.number} is out of specification and was never investigated." in findings()


def test_number_that_is_missing_is_named(run: Run, as_enemy) -> None:
    as_enemy("UPDATE labrecords_numberseries SET last = 2 WHERE series = 'R'")
    only_finding("Series R-26- gave 2 numbers and 1 records have one.")


def test_trigger_that_is_switched_off_is_named(run: Run, as_enemy) -> None:
    as_enemy("ALTER TABLE labrecords_replicate DISABLE TRIGGER write_change")
    only_finding("Changes of labrecords_replicate are not written on the trail")


def test_check_integrity_fails_and_says_what_to_do(run: Run, as_enemy, capsys) -> None:
    as_enemy("UPDATE labrecords_run SET void_reason = 'made up'")
    with pytest.raises(CommandError, match=r"1 findings\. Keep the database as it is"):
        call_command("check_integrity")
    assert f"Row {run.pk} of labrecords_run" in capsys.readouterr().out


def test_simulated_events_are_counted(bench: Bench, as_owner) -> None:
    assert simulated_events() == 0
    with as_owner(), connection.cursor() as cursor:
        cursor.execute("SELECT set_config('labrecords.simulated_clock', '2020-01-01T00:00:00Z', false)")
        with audit.event("x.y", by=bench.analyst):
            pass
    assert simulated_events() == 1
