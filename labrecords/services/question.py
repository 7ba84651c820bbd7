"""Questions: records put in question when what they rest on becomes doubtful, until a supervisor answers."""

from __future__ import annotations

from collections.abc import Iterable, Sequence

from django.db import transaction
from django.utils import timezone

from labrecords.errors import refuse_if
from labrecords.models import Meaning, Question, RecordState, Run, Standardization, User
from labrecords.queries.lineage import runs_resting_on, standardizations_resting_on
from labrecords.rules.question import objections_to_answering
from labrecords.services import audit
from labrecords.services.signature import Credentials, sign


def raise_questions_on(standardization_ids: list[int], *, because: str, by: User) -> None:
    """Put everything that rests on these standardizations in question; called inside a service's open event."""
    resting = standardizations_resting_on(standardization_ids)
    live = [RecordState.SUBMITTED, RecordState.APPROVED, RecordState.OPEN]
    for standardization in Standardization.objects.filter(pk__in=resting, state__in=live):
        Question.objects.create(standardization=standardization, because=because, raised_by=by)
    raise_questions_on_runs(runs_resting_on(resting), because=because, by=by)


def raise_questions_on_runs(run_ids: Iterable[int], *, because: str, by: User) -> None:
    """Put runs in question; void ones are past it."""
    for run in Run.objects.filter(pk__in=list(run_ids)).exclude(state=RecordState.VOID):
        Question.objects.create(run=run, because=because, raised_by=by)


@transaction.atomic(durable=True)
def answer_questions(
    questions: Sequence[Question], *, by: User, credentials: Credentials, answer: str
) -> list[Question]:
    """A supervisor re-evaluates records and signs why they stand: one event and one signature for each record.

    Nothing is answered when one of them is refused.
    """
    ids = [question.pk for question in questions]
    locked = Question.objects.select_for_update(of=("self",)).select_related("run", "standardization").order_by("pk")
    found = list(locked.filter(pk__in=ids))
    refuse_if([sentence for each in found for sentence in objections_to_answering(each, by=by, answer=answer)])
    for question in found:
        _answered(question, by=by, credentials=credentials, answer=answer)
    return found


def answer_question(question: Question, *, by: User, credentials: Credentials, answer: str) -> Question:
    """The same for one record."""
    return answer_questions([question], by=by, credentials=credentials, answer=answer)[0]


def _answered(question: Question, *, by: User, credentials: Credentials, answer: str) -> None:
    number, noun = str(question.run or question.standardization), "run" if question.run_id else "standardization"
    question.answer, question.answered_by = answer, by
    with audit.event("question.answer", by=by, subject=number, reason=answer) as event:
        question.answered_at = event.at
        question.save(update_fields=["answer", "answered_by", "answered_at"])
        sign(
            Meaning.REEVALUATED,
            by=by,
            credentials=credentials,
            noun=noun,
            record_id=question.run_id or question.standardization_id or 0,
            number=number,
            content={"noun": "question", "about": number, "because": question.because, "answer": answer},
            reason=answer,
            zone=timezone.get_current_timezone_name(),
        )
