"""What stands in the way of a run."""

from __future__ import annotations

from datetime import datetime

from labrecords.models import (
    BatchState,
    Investigation,
    InvestigationState,
    MethodVersion,
    RecordState,
    Run,
    Sample,
    TitrantLot,
    User,
    VersionState,
)  # fmt: skip
from labrecords.queries.calculation import latest_calculation, latest_request
from labrecords.queries.investigation import open_investigation_of_sample
from labrecords.queries.run import unfinished_runs_of
from labrecords.rules.calculation import objections_to_latest_calculation
from labrecords.rules.replicate import objections_to_working_on
from labrecords.rules.titrant import objections_to_using_lot


def objections_to_starting_run(
    sample: Sample,
    *,
    by: User,
    version: MethodVersion,
    lot: TitrantLot,
    excess_lot: TitrantLot | None,
    retest_for: Investigation | None,
    at: datetime,
) -> list[str]:
    """Everything that stands in the way of a new run, each with what to do."""
    found = [] if by.is_analyst else [f"{by.full_name} is not an analyst. An analyst starts runs."]
    found += _objections_to_sample(sample, version=version, retest_for=retest_for)
    if version.state != VersionState.EFFECTIVE:
        found.append(f"{version} is {version.state}. Choose the effective version of {version.method.code}.")
    found += objections_to_using_lot(lot, titrant=version.titrant, at=at)
    if version.excess_titrant is not None:
        if excess_lot is None:
            found.append(f"Excess solution: choose a lot of {version.excess_titrant.name}.")
        else:
            found += objections_to_using_lot(excess_lot, titrant=version.excess_titrant, at=at)
    return found


def _objections_to_sample(sample: Sample, *, version: MethodVersion, retest_for: Investigation | None) -> list[str]:
    found = []
    if sample.void_reason:
        found.append(f"Sample {sample.number} is void: {sample.void_reason}")
    if sample.batch is not None and sample.batch.state in (BatchState.RELEASED, BatchState.REJECTED):
        found.append(f"Batch {sample.batch.number} is {sample.batch.state}. Nothing more is tested on it.")
    unfinished = unfinished_runs_of(sample, method_id=version.method_id, apart_from=retest_for).first()
    if unfinished is not None:
        found.append(f"{unfinished.number} is {unfinished.state} for this sample and test. Finish that one first.")
    investigation = open_investigation_of_sample(sample, method_id=version.method_id)
    if investigation is not None and retest_for is None:
        found.append(
            f"Sample {sample.number} is under investigation {investigation.number}. "
            "Only a retest of its authorised plan may be started, from the investigation's page."
        )
    if retest_for is not None:
        found += _objections_to_retest(retest_for)
    return found


def _objections_to_retest(investigation: Investigation) -> list[str]:
    if investigation.state != InvestigationState.PHASE_2:
        return [f"{investigation.number} is in {investigation.state}; retests start after the plan is authorised."]
    done = investigation.retests.exclude(state=RecordState.VOID).count()
    planned = investigation.retests_planned or 0
    if done >= planned:
        return [f"{investigation.number} plans {planned} retests and {done} were started. Conclude it."]
    return []


def objections_to_submitting_run(run: Run, *, by: User) -> list[str]:
    """A run is submitted by an analyst, on a calculation of exactly the present readings that is acceptable."""
    return [*objections_to_working_on(run, by=by), *objections_to_latest_calculation(run)]


def objections_to_approving_run(run: Run, *, by: User) -> list[str]:
    """What must be settled before a second person may approve."""
    found = [
        f"{item.number} is {item.get_state_display()}. Conclude the investigation first."
        for item in run.investigations.exclude(state=InvestigationState.CLOSED)
    ]
    found += [
        f"{run.number} is in question: {question.because} A supervisor answers the question first."
        for question in run.questions.filter(answered_at__isnull=True)
    ]
    if run.standardization.state != RecordState.APPROVED:
        found.append(f"{run.standardization.number} is {run.standardization.state}. Void the run and start again.")
    return found


def objections_to_voiding_run(run: Run, *, by: User) -> list[str]:
    """An open or submitted run may be voided by an analyst or a supervisor; an approved one by a supervisor."""
    found = []
    if run.state == RecordState.VOID:
        found.append(f"{run.number} is void already.")
    if run.state == RecordState.APPROVED and not by.is_supervisor:
        found.append(f"{run.number} is approved. A supervisor may void it.")
    if not (by.is_analyst or by.is_supervisor):
        found.append(f"{by.full_name} is neither analyst nor supervisor. Ask one of them.")
    if run.investigations.exclude(state=InvestigationState.CLOSED).exists():
        found.append(f"{run.number} is under investigation; it becomes void only by the investigation's conclusion.")
    if run.state == RecordState.APPROVED and run.sample.batch and run.sample.batch.state == BatchState.RELEASED:
        found.append(f"Batch {run.sample.batch.number} is released on this run. Ask quality assurance before anything.")
    waiting = latest_request(run)
    if run.state == RecordState.OPEN and waiting is not None and waiting.state == "waiting":
        found.append(f"{run.number} is being computed. Wait for the result; then void it if it must be.")
    return found


def needs_an_investigation(run: Run) -> bool:
    """Out of specification and not yet investigated.

    A planned retest belongs to the investigation that planned it, unless it is made void: its result would be gone.
    """
    latest = latest_calculation(run)
    is_outside = latest is not None and latest.outcome == "does_not_conform"
    is_planned = run.retest_for_id is not None and run.state != RecordState.VOID
    return is_outside and not is_planned and not run.investigations.exists()
