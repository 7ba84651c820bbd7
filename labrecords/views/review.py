"""What waits for a supervisor."""

from __future__ import annotations

from django.http import HttpRequest, HttpResponse
from django.shortcuts import render
from django.views.decorators.http import require_GET

from labrecords.models import Question
from labrecords.queries.investigation import investigations
from labrecords.queries.review import waiting_for_review
from labrecords.views.access import for_roles


@for_roles("supervisor", "auditor")
@require_GET
def list(request: HttpRequest) -> HttpResponse:
    """Submitted records, open investigations, open questions."""
    questions = Question.objects.filter(answered_at__isnull=True).select_related("run", "standardization", "raised_by")
    context = {
        "waiting": waiting_for_review(),
        "investigations": investigations().exclude(state="closed"),
        "questions": questions[:60],
        "question_count": questions.count(),
    }
    return render(request, "review/list.html", context)
