"""Investigations: opened with the result, assessed, planned and concluded by somebody who took no part."""

from __future__ import annotations

from dataclasses import replace
from typing import Any

import pytest
from django.db import DatabaseError, transaction

from labrecords.models import Batch, Investigation, MethodVersion, Run, Signature, User
from labrecords.queries.batch import required_tests
from labrecords.services import audit
from labrecords.services.batch import release_batch
from labrecords.services.run import approve_run, start_run, void_run
from tests.factories.bench import Bench, approved_standardization, compute, fill, some_version
from tests.factories.investigations import INSIDE, OUTSIDE, YES, approved_retest, assess, close, plan, retest
from tests.factories.people import signed_by
from tests.factories.products import approved_run_of, some_batch, some_product, submitted_run_of
from tests.support.trail import all_records, one_event, refusal_of

pytestmark = pytest.mark.django_db
LEAKED = "the burette leaked at its tap"
CAUSE = "a pipette of the wrong volume was used"


@pytest.fixture
def version(bench: Bench) -> MethodVersion:
    approved_standardization(bench)
    return some_version(bench)


@pytest.fixture
def batch(bench: Bench, version: MethodVersion) -> Batch:
    return some_batch(bench, some_product(bench, version))


@pytest.fixture
def opened(bench: Bench, batch: Batch, version: MethodVersion) -> Investigation:
    return Investigation.objects.get(run=submitted_run_of(bench, batch, version, OUTSIDE))


@pytest.fixture
def assessed(opened: Investigation, supervisor: User) -> Investigation:
    return assess(opened, supervisor)


@pytest.fixture
def planned(assessed: Investigation, supervisor: User) -> Investigation:
    return plan(assessed, supervisor)


def void_out_of_limits(bench: Bench, batch: Batch, version: MethodVersion) -> Run:
    """A run that its analyst made void when its result was out of the limits."""
    instruments = {"burette": bench.burette, "pipette": bench.pipette}
    given = {"by": bench.analyst, "method_version": version, "lot": bench.lot, "instruments": instruments}
    run = start_run(batch.samples.get(), **given)
    fill(run, [("10.00", OUTSIDE)] * 3, by=bench.analyst)
    compute(run)
    return void_run(run, by=bench.analyst, credentials=signed_by(bench.analyst), reason=LEAKED)


def test_submitted_run_out_of_its_limits_opens_one_in_the_same_event(
    bench: Bench, batch: Batch, version: MethodVersion
) -> None:
    run = submitted_run_of(bench, batch, version, OUTSIDE)
    found = Investigation.objects.get()
    assert (found.number[:2], found.number[-4:], found.state) == ("I-", "-001", "open")
    assert (found.run, found.calculation, found.calculation.outcome) == (run, run.calculation, "does_not_conform")


def test_result_within_its_limits_opens_none(bench: Bench, batch: Batch, version: MethodVersion) -> None:
    submitted_run_of(bench, batch, version, INSIDE)
    assert not Investigation.objects.exists()


def test_void_run_out_of_its_limits_is_investigated_too(bench: Bench, batch: Batch, version: MethodVersion) -> None:
    run = void_out_of_limits(bench, batch, version)
    assert Investigation.objects.get().run == run
    assert required_tests(batch)[0].status == "under investigation"


def test_open_investigation_locks_its_run_and_its_sample(opened: Investigation, bench: Bench) -> None:
    run, number, by = opened.run, opened.number, bench.supervisor
    assert f"{number} is open. Conclude the investigation first." in refusal_of(
        approve_run, run, by=by, credentials=signed_by(by)
    )
    said = refusal_of(void_run, run, by=by, credentials=signed_by(by), reason=LEAKED)
    assert "is under investigation; it becomes void only by the investigation's conclusion" in said
    again = {"method_version": run.method_version, "lot": bench.lot, "instruments": {}}
    said = refusal_of(start_run, run.sample, by=bench.analyst, **again)
    assert f"Sample {run.sample.number} is under investigation {number}." in said


def test_assess_investigation_signs_the_answers(opened: Investigation, supervisor: User) -> None:
    with one_event("investigation.assess"):
        assess(opened, supervisor)
    stored = Investigation.objects.get(pk=opened.pk)
    assert (stored.state, stored.checklist, stored.assessment) == ("phase 1", YES, "Nothing was found.")
    signature = Signature.objects.get(noun="investigation")
    assert (signature.meaning, signature.signer) == ("assessed by", supervisor)
    assert '"titrant":{"answer":"yes"' in signature.content


@pytest.mark.parametrize(
    ("answers", "sentence"),
    [
        ({"titrant": {}}, "in force? Answer yes, no or unclear; the answer is ''."),
        ({"control": {"answer": "perhaps"}}, "the answer is 'perhaps'"),
        ({"endpoint": {"answer": "no", "note": " "}}, "The answer is no: write a note what was found."),
        ({"analyst": {"answer": "unclear"}}, "The answer is unclear: write a note what was found."),
    ],
)
def test_assess_investigation_refuses_a_gap_in_the_list(
    opened: Investigation, supervisor: User, answers: dict, sentence: str
) -> None:
    assert sentence in refusal_of(assess, opened, supervisor, checklist=YES | answers)


def test_assess_investigation_may_be_repeated_until_a_plan_is_signed(assessed: Investigation, supervisor: User) -> None:
    assess(assessed, supervisor, assessment="The bench note is missing.")
    plan(assessed, supervisor)
    assert "is in phase 2; the assessment is done" in refusal_of(assess, assessed, supervisor)


def test_plan_retests_says_how_many_before_the_first(assessed: Investigation, supervisor: User, bench: Bench) -> None:
    assert "retests start after the plan is authorised" in refusal_of(retest, assessed, bench)
    with one_event("investigation.plan"):
        plan(assessed, supervisor)
    stored = Investigation.objects.get(pk=assessed.pk)
    assert (stored.state, stored.retests_planned, stored.plan_authorised_by) == ("phase 2", 2, supervisor)
    assert Signature.objects.filter(noun="investigation", meaning="plan authorised by").count() == 1
    assert "is in phase 2; a plan follows the laboratory assessment" in refusal_of(plan, stored, supervisor)


@pytest.mark.parametrize(
    ("given", "sentence"),
    [
        ({"plan": "again"}, "Plan is 'again': say who retests what"),
        ({"retests": 0}, "Retests planned is 0: a whole number from 1 to 10"),
        ({"retests": 11}, "Retests planned is 11"),
        ({"retests": None}, "Retests planned is None"),
    ],
)
def test_plan_retests_refuses(assessed: Investigation, supervisor: User, given: dict, sentence: str) -> None:
    assert sentence in refusal_of(plan, assessed, supervisor, **given)


def test_plan_retests_follows_the_assessment(opened: Investigation, supervisor: User) -> None:
    assert "is in open; a plan follows the laboratory assessment" in refusal_of(plan, opened, supervisor)


def test_retests_never_exceed_the_plan(planned: Investigation, bench: Bench) -> None:
    runs = [approved_retest(planned, bench) for _ in range(2)]
    assert [run.retest_for for run in runs] == [planned, planned]
    assert f"{planned.number} plans 2 retests and 2 were started. Conclude it." in refusal_of(retest, planned, bench)


def test_retest_out_of_its_limits_belongs_to_the_same_investigation(planned: Investigation, bench: Bench) -> None:
    run = approved_retest(planned, bench, OUTSIDE)
    assert run.calculation.outcome == "does_not_conform"
    assert Investigation.objects.get() == planned


def test_void_retest_out_of_its_limits_is_investigated_itself(planned: Investigation, bench: Bench) -> None:
    run, by = approved_retest(planned, bench, OUTSIDE), bench.supervisor
    void_run(run, by=by, credentials=signed_by(by), reason=LEAKED)
    assert Investigation.objects.get(state="open").run == run
    for _ in range(2):
        approved_retest(planned, bench)
    close(planned, by, conclusion="not confirmed")
    assert required_tests(run.sample.batch)[0].status == "under investigation"


def test_close_investigation_with_a_cause_makes_the_run_void(
    assessed: Investigation, supervisor: User, bench: Bench, batch: Batch, version: MethodVersion
) -> None:
    with one_event("investigation.close"):
        close(assessed, supervisor, conclusion="assignable cause", cause=CAUSE)
    run = Run.objects.get(pk=assessed.run_id)
    assert (run.state, run.void_reason) == ("void", f"{assessed.number}: {CAUSE}")
    assert (Investigation.objects.get().state, Investigation.objects.get().closed_by) == ("closed", supervisor)
    assert list(Signature.objects.order_by("pk").values_list("noun", "meaning"))[-2:] == [
        ("run", "voided by"),
        ("investigation", "concluded by"),
    ]
    assert required_tests(batch)[0].status == "missing"
    approved_run_of(bench, batch, version)
    assert required_tests(batch)[0].status == "approved"


def test_close_investigation_confirmed_leaves_the_result(
    assessed: Investigation, supervisor: User, batch: Batch
) -> None:
    close(assessed, supervisor)
    approve_run(assessed.run, by=supervisor, credentials=signed_by(supervisor))
    assert required_tests(batch)[0].status == "out of limits"
    said = refusal_of(release_batch, batch, by=supervisor, credentials=signed_by(supervisor))
    assert "is out of limits. The batch may be rejected or held, not released." in said


def test_close_investigation_confirmed_holds_for_a_void_run_too(
    bench: Bench, batch: Batch, version: MethodVersion, supervisor: User
) -> None:
    void_out_of_limits(bench, batch, version)
    close(assess(Investigation.objects.get(), supervisor), supervisor)
    approved_run_of(bench, batch, version)
    assert required_tests(batch)[0].status == "out of limits"
    assert "is out of limits" in refusal_of(release_batch, batch, by=supervisor, credentials=signed_by(supervisor))


def test_close_investigation_not_confirmed_needs_every_retest_within_the_limits(
    planned: Investigation, supervisor: User, bench: Bench, batch: Batch
) -> None:
    given = {"conclusion": "not confirmed"}
    approved_retest(planned, bench)
    assert "2 retests are planned and 1 are approved" in refusal_of(close, planned, supervisor, **given)
    approved_retest(planned, bench)
    close(planned, supervisor, **given)
    approve_run(planned.run, by=supervisor, credentials=signed_by(supervisor))
    assert required_tests(batch)[0].status == "approved"


def test_close_investigation_refuses_what_the_retests_contradict(
    planned: Investigation, supervisor: User, bench: Bench
) -> None:
    approved_retest(planned, bench)
    outside = approved_retest(planned, bench, OUTSIDE)
    said = refusal_of(close, planned, supervisor, conclusion="not confirmed")
    assert f"{outside.number} did not meet the limits: the result is confirmed" in said


def test_close_investigation_waits_for_open_retests(planned: Investigation, supervisor: User, bench: Bench) -> None:
    run = retest(planned, bench)
    assert f"{run.number} of the plan is open. Every retest is approved or void" in refusal_of(
        close, planned, supervisor
    )


@pytest.mark.parametrize(
    ("given", "sentence"),
    [
        ({"conclusion": "forgotten"}, "Conclusion is 'forgotten'; choose one of the list."),
        ({"text": "it is so"}, "Conclusion in words is 'it is so'"),
        ({"conclusion": "assignable cause", "cause": "outlier"}, "An outlier test is no cause"),
        ({"conclusion": "not confirmed"}, "0 retests are planned and 0 are approved"),
    ],
)
def test_close_investigation_refuses(assessed: Investigation, supervisor: User, given: dict, sentence: str) -> None:
    assert sentence in refusal_of(close, assessed, supervisor, **given)


def test_close_investigation_follows_the_assessment(opened: Investigation, supervisor: User) -> None:
    assert "is open; it is concluded after its phase 1" in refusal_of(close, opened, supervisor)


@pytest.mark.parametrize("step", [assess, plan, close])
def test_investigating_is_a_supervisors_who_took_no_part(
    step: Any, bench: Bench, batch: Batch, version: MethodVersion, other_supervisor: User, supervisor: User
) -> None:
    run = submitted_run_of(replace(bench, analyst=other_supervisor), batch, version, OUTSIDE)
    investigation = Investigation.objects.get()
    if step is not assess:
        assess(investigation, supervisor)
    assert "Ines Castell is not a supervisor. A supervisor investigates." in refusal_of(
        step, investigation, bench.analyst
    )
    said = refusal_of(step, investigation, other_supervisor)
    assert f"You performed or entered a part of {run.number}. Another supervisor investigates it." in said


@pytest.mark.parametrize("step", [assess, plan, close])
def test_step_needs_the_own_password_and_the_trail(
    step: Any, opened: Investigation, supervisor: User, break_trail: Any
) -> None:
    if step is not assess:
        assess(opened, supervisor)
    wrong = signed_by(supervisor, "guess")
    assert "The password is not right" in refusal_of(step, opened, supervisor, credentials=wrong)
    before = all_records()
    break_trail()
    with pytest.raises(DatabaseError, match="no room for the trail"):
        step(opened, supervisor)
    assert all_records() == before


@pytest.mark.parametrize(
    "change", [{"state": "phase 1"}, {"conclusion": "not confirmed"}, {"plan": "x"}, {"checklist": {}}]
)
def test_closed_investigation_is_frozen_by_the_database(
    change: dict, assessed: Investigation, supervisor: User
) -> None:
    close(assessed, supervisor)
    with (
        pytest.raises(DatabaseError, match=r"frozen|cannot go"),
        transaction.atomic(),
        audit.event("investigation.correct", by=supervisor),
    ):
        Investigation.objects.filter(pk=assessed.pk).update(**change)
