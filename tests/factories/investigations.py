"""The steps of an investigation, each with what a supervisor would write; ``what_differs`` by name."""

from __future__ import annotations

from typing import Any

from labrecords.models import Investigation, Run, User
from labrecords.rules.investigation import CHECKLIST
from labrecords.services.investigation import assess_investigation, close_investigation, plan_retests
from labrecords.services.run import approve_run, start_run, submit_run
from tests.factories.bench import Bench, compute, fill
from tests.factories.people import signed_by

OUTSIDE, INSIDE = "15.00", "12.30"
PLAN = "Tomas Brandvold titrates two aliquots from the retained bottle; both must meet the limits."
TEXT = "The pipette of 10 mL was taken for the one of 20 mL, as the bench note shows."
YES = {key: {"answer": "yes", "note": ""} for key in CHECKLIST}


def assess(investigation: Investigation, by: User, **given: Any) -> Investigation:
    """Phase 1, every question answered with yes."""
    said = {"credentials": signed_by(by), "checklist": YES, "assessment": "Nothing was found."}
    return assess_investigation(investigation, by=by, **said | given)


def plan(investigation: Investigation, by: User, **given: Any) -> Investigation:
    """Phase 2, two retests."""
    return plan_retests(investigation, by=by, **{"credentials": signed_by(by), "plan": PLAN, "retests": 2} | given)


def close(investigation: Investigation, by: User, **given: Any) -> Investigation:
    """The result is confirmed."""
    said = {"credentials": signed_by(by), "conclusion": "confirmed", "text": TEXT}
    return close_investigation(investigation, by=by, **said | given)


def retest(investigation: Investigation, bench: Bench) -> Run:
    """An open retest of the plan."""
    run = investigation.run
    instruments = {"burette": bench.burette, "pipette": bench.pipette}
    return start_run(
        run.sample,
        by=bench.analyst,
        method_version=run.method_version,
        lot=bench.lot,
        instruments=instruments,
        retest_for=investigation,
    )


def approved_retest(investigation: Investigation, bench: Bench, titre: str = INSIDE) -> Run:
    """The same after its review."""
    run = retest(investigation, bench)
    fill(run, [("10.00", titre)] * 3, by=bench.analyst)
    compute(run)
    run = submit_run(run, by=bench.analyst, credentials=signed_by(bench.analyst))
    return approve_run(run, by=bench.supervisor, credentials=signed_by(bench.supervisor))
