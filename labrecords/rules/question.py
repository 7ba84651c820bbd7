"""Who may answer a question about a record."""

from __future__ import annotations

from labrecords.models import Question, User
from labrecords.queries.audit import contributor_ids


def objections_to_answering(question: Question, *, by: User, answer: str) -> list[str]:
    """A supervisor who performed no part of the record, with a sentence that says why it stands."""
    record = question.run or question.standardization
    found = [] if by.is_supervisor else [f"{by.full_name} is not a supervisor. A supervisor re-evaluates records."]
    if question.answered_at is not None:
        found.append("This question is answered already.")
    if record is not None and by.pk in contributor_ids(record):
        found.append(f"You performed or entered a part of {record}. Another supervisor re-evaluates it.")
    if len(answer.strip()) < 10:
        found.append(f"Answer is {answer!r}: say in a sentence why the record stands.")
    return found
