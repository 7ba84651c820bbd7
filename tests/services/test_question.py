"""Questions about records: raised by a withdrawal, answered by a second person, several at once."""

from __future__ import annotations

import pytest

from labrecords.errors import Refused
from labrecords.models import AuditEvent, Question, Signature
from labrecords.services.question import answer_question, answer_questions
from labrecords.services.standard import withdraw_standard
from tests.factories.bench import approved_run, approved_standardization, set_up_bench
from tests.factories.people import signed_by

pytestmark = pytest.mark.django_db
WHY = "The bottle was dried before use, and the control results of these days are good."


@pytest.fixture
def questions(analyst, supervisor) -> list[Question]:
    bench = set_up_bench(analyst, supervisor)
    approved_standardization(bench)
    approved_run(bench)
    withdraw_standard(
        bench.standard, by=supervisor, credentials=signed_by(supervisor), reason="moisture in part of the lot"
    )
    return list(Question.objects.all())


def test_withdrawn_standard_puts_standardization_and_run_in_question(questions):
    assert {"run" if each.run_id else "standardization" for each in questions} == {"run", "standardization"}
    assert all("is withdrawn: moisture" in each.because for each in questions)


def test_answer_questions_signs_each_record(questions, supervisor):
    answer_questions(questions, by=supervisor, credentials=signed_by(supervisor), answer=WHY)
    assert not Question.objects.filter(answered_at__isnull=True).exists()
    assert Signature.objects.filter(meaning="re-evaluated by").count() == 2
    assert AuditEvent.objects.filter(action="question.answer", actor=supervisor).count() == 2


def test_answer_question_refuses_a_second_answer(questions, supervisor):
    answer_question(questions[0], by=supervisor, credentials=signed_by(supervisor), answer=WHY)
    with pytest.raises(Refused, match="answered already"):
        answer_question(questions[0], by=supervisor, credentials=signed_by(supervisor), answer=WHY)


def test_answer_questions_keeps_none_when_one_is_refused(questions, supervisor):
    answer_question(questions[0], by=supervisor, credentials=signed_by(supervisor), answer=WHY)
    with pytest.raises(Refused):
        answer_questions(questions, by=supervisor, credentials=signed_by(supervisor), answer=WHY)
    assert Question.objects.filter(answered_at__isnull=True).count() == 1


@pytest.mark.parametrize(("answer", "sentence"), [("", "say in a sentence"), ("fine", "say in a sentence")])
def test_answer_question_refuses_an_empty_answer(questions, supervisor, answer, sentence):
    with pytest.raises(Refused, match=sentence):
        answer_question(questions[0], by=supervisor, credentials=signed_by(supervisor), answer=answer)


def test_answer_question_refuses_the_analyst_and_a_wrong_password(questions, analyst, supervisor):
    with pytest.raises(Refused, match="not a supervisor"):
        answer_question(questions[0], by=analyst, credentials=signed_by(analyst), answer=WHY)
    with pytest.raises(Refused, match="password is not right"):
        answer_question(questions[0], by=supervisor, credentials=signed_by(supervisor, "wrong"), answer=WHY)


def test_page_answers_others_of_the_same_cause_with_it(client, questions, supervisor):
    client.force_login(supervisor)
    page = client.get(f"/questions/{questions[0].pk}/").content.decode()
    assert "Re-evaluate others of the same cause with it (1)" in page
    typed = {"username": supervisor.username, "password": signed_by(supervisor).password, "reason": WHY}
    client.post(f"/questions/{questions[0].pk}/", typed | {"beside": questions[1].pk})
    assert not Question.objects.filter(answered_at__isnull=True).exists()
