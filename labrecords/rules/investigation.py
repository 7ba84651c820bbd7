"""How an out-of-specification result is investigated: phases, and who may take each step."""

from __future__ import annotations

from collections.abc import Mapping

from labrecords.models import Conclusion, Investigation, InvestigationState, RecordState, User
from labrecords.queries.audit import contributor_ids

CHECKLIST = {
    "sample": "Was it the right sample, from the right container, stored as it should be?",
    "titrant": "Was it the right titrant lot, with its concentration in force?",
    "instruments": "Were burette, pipette, balance and electrode the right ones, clean and within calibration?",
    "readings": "Do the readings on the sheet agree with the instrument's record or the bench note?",
    "endpoint": "Was the endpoint seen, or the curve recorded, as the method describes?",
    "calculation": "Do a second person's hand calculation and the result agree?",
    "control": "Do the control sample and the control chart of that day lie within their limits?",
    "analyst": "Was the analyst trained in the method and undisturbed?",
}


def objections_to_assessing(
    investigation: Investigation, *, by: User, checklist: Mapping[str, Mapping[str, str]]
) -> list[str]:
    """Phase 1 is a supervisor's who did not perform the run; every question of the list is answered."""
    found = objections_to_investigating(investigation, by=by)
    if investigation.state not in (InvestigationState.OPEN, InvestigationState.PHASE_1):
        found.append(f"{investigation.number} is in {investigation.state}; the assessment is done.")
    for key, question in CHECKLIST.items():
        answer = checklist.get(key, {}).get("answer", "")
        if answer not in ("yes", "no", "unclear"):
            found.append(f"{question} Answer yes, no or unclear; the answer is {answer!r}.")
        if answer in ("no", "unclear") and not checklist[key].get("note", "").strip():
            found.append(f"{question} The answer is {answer}: write a note what was found.")
    return found


def objections_to_planning(investigation: Investigation, *, by: User, plan: str, retests: int | None) -> list[str]:
    """Phase 2 follows phase 1; the plan says how many retests, before the first of them."""
    found = objections_to_investigating(investigation, by=by)
    if investigation.state != InvestigationState.PHASE_1:
        found.append(f"{investigation.number} is in {investigation.state}; a plan follows the laboratory assessment.")
    if len(plan.strip()) < 20:
        found.append(f"Plan is {plan!r}: say who retests what, from which container, and how the results are judged.")
    if retests is None or not 1 <= retests <= 10:
        found.append(f"Retests planned is {retests}: a whole number from 1 to 10, fixed before the first retest.")
    return found


def objections_to_concluding(
    investigation: Investigation, *, by: User, conclusion: str, text: str, cause: str
) -> list[str]:
    """A conclusion needs its evidence: a cause that was found, or the planned retests, all of them approved."""
    found = objections_to_investigating(investigation, by=by)
    if investigation.state not in (InvestigationState.PHASE_1, InvestigationState.PHASE_2):
        found.append(f"{investigation.number} is {investigation.state}; it is concluded after its phase 1.")
    if conclusion not in Conclusion.values:
        return [*found, f"Conclusion is {conclusion!r}; choose one of the list."]
    if len(text.strip()) < 20:
        found.append(f"Conclusion in words is {text!r}: say in sentences what was found and why it follows.")
    if conclusion == Conclusion.ASSIGNABLE_CAUSE and len(cause.strip()) < 10:
        found.append(f"Cause is {cause!r}: name the laboratory error that was found. An outlier test is no cause.")
    if conclusion == Conclusion.NOT_CONFIRMED:
        found += _objections_to_retests(investigation)
    if investigation.state == InvestigationState.PHASE_2:
        found += [
            f"{run.number} of the plan is {run.state}. Every retest is approved or void before the conclusion."
            for run in investigation.retests.filter(state__in=[RecordState.OPEN, RecordState.SUBMITTED])
        ]
    return found


def objections_to_investigating(investigation: Investigation, *, by: User) -> list[str]:
    """Only a supervisor who took no part in the run."""
    found = [] if by.is_supervisor else [f"{by.full_name} is not a supervisor. A supervisor investigates."]
    if by.pk in contributor_ids(investigation.run):
        found.append(f"You performed or entered a part of {investigation.run}. Another supervisor investigates it.")
    return found


def _objections_to_retests(investigation: Investigation) -> list[str]:
    done = list(investigation.retests.filter(state=RecordState.APPROVED).select_related("calculation"))
    planned = investigation.retests_planned or 0
    found = []
    if investigation.state != InvestigationState.PHASE_2 or len(done) < planned:
        found.append(f"{planned} retests are planned and {len(done)} are approved. Finish the plan first.")
    outside = [run.number for run in done if run.calculation and run.calculation.outcome != "conforms"]
    if outside:
        found.append(f"{', '.join(outside)} did not meet the limits: the result is confirmed, choose that conclusion.")
    return found
