"""What rests on what: walked by recursive SQL, up to certificates and down to batches."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from datetime import datetime
from decimal import Decimal

from django.db import connection
from django.db.models import Q, QuerySet

from labrecords.models import (
    Batch,
    Instrument,
    InstrumentCalibration,
    ReferenceStandard,
    Run,
    Sample,
    Signature,
    UsedInstrument,
)

RESTING = """
WITH RECURSIVE resting (id) AS (
    SELECT id FROM labrecords_standardization WHERE id = ANY (%s)
    UNION
    SELECT below.id FROM labrecords_standardization AS below JOIN resting ON below.against_id = resting.id
)
"""

CHAIN_UP = """
WITH RECURSIVE chain (id, depth, via) AS (
    SELECT standardization_id, 1, 'titrant' FROM labrecords_run WHERE id = %(run)s
    UNION ALL
    SELECT excess_standardization_id, 1, 'excess solution' FROM labrecords_run
        WHERE id = %(run)s AND excess_standardization_id IS NOT NULL
    UNION ALL
    SELECT id, 0, 'titrant' FROM labrecords_standardization WHERE id = %(standardization)s
    UNION ALL
    SELECT above.against_id, chain.depth + 1, chain.via
        FROM labrecords_standardization AS above JOIN chain ON above.id = chain.id
        WHERE above.against_id IS NOT NULL AND chain.depth < 64
)
SELECT chain.depth, chain.via, s.id, s.number, s.state, lot.number, titrant.name, s.basis, calc.value,
       calc.expanded_uncertainty, person.full_name, s.started_at, standard.number, substance.name,
       standard.purity, standard.state, file.id, file.name, file.sha256
FROM chain
JOIN labrecords_standardization AS s ON s.id = chain.id
JOIN labrecords_titrantlot AS lot ON lot.id = s.lot_id
JOIN labrecords_titrant AS titrant ON titrant.id = lot.titrant_id
JOIN labrecords_user AS person ON person.id = s.started_by_id
LEFT JOIN labrecords_calculation AS calc ON calc.id = s.calculation_id
LEFT JOIN labrecords_referencestandard AS standard ON standard.id = s.reference_standard_id
LEFT JOIN labrecords_substance AS substance ON substance.id = standard.substance_id
LEFT JOIN labrecords_storedfile AS file ON file.id = standard.certificate_id
ORDER BY chain.via DESC, chain.depth
"""

FAN_DOWN = """
SELECT run.id, run.number, run.state, method.code, sample.number, batch.number, product.name, batch.state,
       calc.value, calc.expanded_uncertainty, calc.unit, calc.outcome, run.started_at,
       EXISTS (SELECT 1 FROM labrecords_question AS q WHERE q.run_id = run.id AND q.answered_at IS NULL)
FROM labrecords_run AS run
JOIN labrecords_methodversion AS version ON version.id = run.method_version_id
JOIN labrecords_method AS method ON method.id = version.method_id
JOIN labrecords_sample AS sample ON sample.id = run.sample_id
LEFT JOIN labrecords_batch AS batch ON batch.id = sample.batch_id
LEFT JOIN labrecords_product AS product ON product.id = batch.product_id
LEFT JOIN labrecords_calculation AS calc ON calc.id = run.calculation_id
WHERE run.standardization_id IN (SELECT id FROM resting)
   OR run.excess_standardization_id IN (SELECT id FROM resting) OR run.id = ANY (%s)
ORDER BY run.started_at DESC, run.id DESC
"""


@dataclass(frozen=True, slots=True)
class ChainLink:
    """One standardization on the way up, with the standard and its certificate where the chain ends."""

    depth: int
    via: str
    standardization_id: int
    number: str
    state: str
    lot: str
    titrant: str
    basis: str
    value: float | None
    expanded_uncertainty: float | None
    started_by: str
    started_at: datetime
    standard: str | None
    substance: str | None
    purity: Decimal | None
    standard_state: str | None
    certificate_id: int | None
    certificate: str | None
    certificate_sha256: str | None


@dataclass(frozen=True, slots=True)
class RestingRun:
    """One run on the way down, with its batch."""

    id: int
    number: str
    state: str
    method: str
    sample: str
    batch: str | None
    product: str | None
    batch_state: str | None
    value: float | None
    expanded_uncertainty: float | None
    unit: str | None
    outcome: str | None
    started_at: datetime
    in_question: bool


def chain_up(*, run_id: int | None = None, standardization_id: int | None = None) -> list[ChainLink]:
    """The standardizations a run (or a standardization, itself first) rests on, up to the certificates."""
    with connection.cursor() as cursor:
        cursor.execute(CHAIN_UP, {"run": run_id, "standardization": standardization_id})
        return [ChainLink(*row) for row in cursor.fetchall()]


def fan_down(standardization_ids: Sequence[int], *, run_ids: Sequence[int] = ()) -> list[RestingRun]:
    """Every run that rests on these standardizations at any remove, and these runs, newest first."""
    with connection.cursor() as cursor:
        cursor.execute(RESTING + FAN_DOWN, [list(standardization_ids), list(run_ids)])
        return [RestingRun(*row) for row in cursor.fetchall()]


def standardizations_resting_on(ids: Sequence[int]) -> list[int]:
    """The given standardizations and every one that rests on them through other titrants."""
    with connection.cursor() as cursor:
        cursor.execute(RESTING + "SELECT id FROM resting ORDER BY id", [list(ids)])
        return [row[0] for row in cursor.fetchall()]


def runs_on_instrument(instrument: Instrument) -> list[RestingRun]:
    """Every run that used an instrument, or rests on a standardization that did."""
    uses = UsedInstrument.objects.filter(instrument=instrument)
    standardizations = uses.filter(standardization__isnull=False).values_list("standardization_id", flat=True)
    runs = uses.filter(run__isnull=False).values_list("run_id", flat=True)
    return fan_down([key for key in standardizations if key], run_ids=[key for key in runs if key])


def runs_of_source(source: Batch | Sample) -> list[RestingRun]:
    """Every run of a sample, or of all samples of a batch."""
    of = Q(sample__batch=source) if isinstance(source, Batch) else Q(sample=source)
    return fan_down([], run_ids=list(Run.objects.filter(of).values_list("pk", flat=True)))


def certified_by(name: str) -> ReferenceStandard | Instrument | None:
    """What a certificate is of, by the name of its file: a reference standard or a calibrated instrument."""
    standard = ReferenceStandard.objects.filter(certificate__name__iexact=name).order_by("-id").first()
    if standard is not None:
        return standard
    calibrations = InstrumentCalibration.objects.filter(certificate__name__iexact=name).order_by("-id")
    calibration = calibrations.select_related("instrument").first()
    return calibration.instrument if calibration else None


def signatures_on_chain(run: Run | None, links: Sequence[ChainLink]) -> QuerySet[Signature]:
    """The signatures on a run and on every standardization above it, oldest first."""
    on = Q(noun="standardization", record_id__in=[link.standardization_id for link in links])
    if run is not None:
        on |= Q(noun="run", record_id=run.pk)
    return Signature.objects.filter(on).order_by("id")


def instruments_on_chain(run: Run | None, links: Sequence[ChainLink]) -> QuerySet[UsedInstrument]:
    """The instruments of a run and of every standardization above it, each with the calibration that held."""
    used = Q(standardization_id__in=[link.standardization_id for link in links])
    if run is not None:
        used |= Q(run=run)
    found = UsedInstrument.objects.filter(used).select_related(
        "run", "standardization", "instrument", "calibration__certificate"
    )
    return found.order_by("-run_id", "-standardization__started_at", "id")


def runs_resting_on(ids: Sequence[int]) -> list[int]:
    """Ids of every run whose titrant or excess solution has its concentration, at any remove, from these."""
    return [run.id for run in fan_down(ids)]
