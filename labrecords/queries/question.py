"""Reading questions about records."""

from __future__ import annotations

from django.db.models import QuerySet

from labrecords.models import Question


def open_or_answered_questions() -> QuerySet[Question]:
    """Every question with the record it is about."""
    return Question.objects.select_related(
        "run__sample", "run__method_version__method", "standardization__lot", "raised_by"
    )


def open_questions() -> QuerySet[Question]:
    """Questions nobody has answered yet, by their cause, then the oldest record first."""
    return open_or_answered_questions().filter(answered_at__isnull=True).order_by("because", "pk")


def questions_beside(question: Question) -> QuerySet[Question]:
    """The other open questions of the same cause."""
    return open_questions().filter(because=question.because).exclude(pk=question.pk)
