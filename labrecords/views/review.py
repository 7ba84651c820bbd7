"""What waits for a supervisor."""

from __future__ import annotations

from django.http import HttpRequest, HttpResponse
from django.shortcuts import render
from django.views.decorators.http import require_GET

from labrecords.queries.investigation import investigations
from labrecords.queries.question import open_questions
from labrecords.queries.review import waiting_for_review
from labrecords.views.access import for_roles


@for_roles("supervisor", "auditor")
@require_GET
def list(request: HttpRequest) -> HttpResponse:
    """Submitted records, open investigations, open questions."""
    questions = open_questions()
    context = {
        "waiting": waiting_for_review(),
        "investigations": investigations().exclude(state="closed"),
        "questions": questions[:300],
        "question_count": questions.count(),
    }
    return render(request, "review/list.html", context)
