"""Does the database still say what was recorded? Each check returns the sentences of what it found wrong."""

from __future__ import annotations

from collections.abc import Callable, Iterator

from django.db import connection

from labrecords.canonical import canonical_json, sha256_of
from labrecords.models import (
    AuditEvent,
    Calculation,
    Meaning,
    NumberSeries,
    RecordState,
    Run,
    Signature,
    Standardization,
)
from labrecords.queries import run
from labrecords.queries.audit import contributor_ids
from labrecords.queries.standardization import as_signed
from labrecords.queries.unaltered import (
    altered_leaves,
    altered_records,
    broken_checkpoints,
    missing_triggers,
)

SERIES = {"R": "labrecords_run", "S": "labrecords_standardization", "I": "labrecords_investigation"}


def checks() -> dict[str, Callable[[], Iterator[str]]]:
    """Every check by the sentence that says what must hold."""
    return {
        "Every sealed event still has the hash it was sealed with": altered_leaves,
        "Every checkpoint still has its root, its mark and its anchor": broken_checkpoints,
        "Every record is what the trail says it became": altered_records,
        "Every table still has the triggers that write the trail": missing_triggers,
        "Every signature still covers its stored content": altered_signatures,
        "Every calculation still has the inputs it was made from": altered_calculations,
        "Every approved record was signed by a second person": unsigned_approvals,
        "Every approved record still is what was signed": records_unlike_signatures,
        "Every out-of-specification result has its investigation": uninvestigated_results,
        "Every number of every series is there": missing_numbers,
    }


def simulated_events() -> int:
    """How many events were written with a simulated clock: the demo's history, never a laboratory's."""
    return AuditEvent.objects.filter(is_simulated=True).count()


def altered_signatures() -> Iterator[str]:
    """The hash of a signature is that of its content."""
    for signature in Signature.objects.order_by("id").iterator(chunk_size=500):
        if sha256_of(signature.content) != signature.content_sha256:
            yield f"Signature {signature.pk} on {signature.record_number} does not cover its stored content."


def altered_calculations() -> Iterator[str]:
    """The digest of a calculation is that of its inputs."""
    for pk, inputs, digest in Calculation.objects.values_list("pk", "inputs", "inputs_sha256").iterator():
        if sha256_of(inputs) != digest:
            yield f"Calculation {pk} has other inputs than it was made from."


def unsigned_approvals() -> Iterator[str]:
    """An approval is signed by a person who entered, corrected and computed no part of the record."""
    for noun, model in (("run", Run), ("standardization", Standardization)):
        for record in model.objects.filter(state=RecordState.APPROVED):
            signers = Signature.objects.filter(noun=noun, record_id=record.pk, meaning="reviewed by")
            ids = set(signers.values_list("signer_id", flat=True))
            if not ids - contributor_ids(record):
                yield f"{record.number} is approved without the signature of a second person."


def records_unlike_signatures() -> Iterator[str]:
    """An approved record gives the content again that its last reviewer signed."""
    for noun, model, content in (
        ("run", Run, run.as_signed),
        ("standardization", Standardization, as_signed),
    ):
        signed = dict(
            Signature.objects.filter(noun=noun, meaning=Meaning.REVIEWED)
            .order_by("id")
            .values_list("record_id", "content")
        )
        for record in model.objects.filter(state=RecordState.APPROVED).iterator(chunk_size=500):
            now = canonical_json(content(record))  # type: ignore[arg-type]
            if record.pk in signed and now != signed[record.pk]:
                yield f"{record.number} is not what its reviewer signed."


def uninvestigated_results() -> Iterator[str]:
    """Submitted and approved results out of specification are investigated; void ones too."""
    runs = Run.objects.filter(
        calculation__outcome="does_not_conform", investigations__isnull=True, retest_for__isnull=True
    )
    for each in runs.exclude(state=RecordState.OPEN):
        yield f"{each.number} is out of specification and was never investigated."


def missing_numbers() -> Iterator[str]:
    """Each series counts from one to its last number without a gap."""
    for series in NumberSeries.objects.filter(series__in=SERIES):
        prefix = f"{series.series}-{series.year % 100:02d}-"
        with connection.cursor() as cursor:
            cursor.execute(f"SELECT count(*) FROM {SERIES[series.series]} WHERE number LIKE %s", [f"{prefix}%"])
            (count,) = cursor.fetchone()
        if count != series.last:
            yield f"Series {prefix} gave {series.last} numbers and {count} records have one."
