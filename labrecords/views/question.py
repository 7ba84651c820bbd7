"""Questions about records: a supervisor re-evaluates and signs why the record stands."""

from __future__ import annotations

from django.http import HttpRequest, HttpResponse
from django.shortcuts import get_object_or_404, redirect, render
from django.views.decorators.http import require_http_methods

from labrecords.errors import Refused
from labrecords.models import Question
from labrecords.services.question import answer_question
from labrecords.views.access import for_roles
from labrecords.views.sheet import typed_credentials


@for_roles("supervisor")
@require_http_methods(["GET", "POST"])
def answer(request: HttpRequest, pk: int) -> HttpResponse:
    """Answer one question."""
    question = get_object_or_404(Question.objects.select_related("run", "standardization", "raised_by"), pk=pk)
    refused: tuple[str, ...] = ()
    if request.method == "POST":
        try:
            credentials, reason = typed_credentials(request.POST)
            answer_question(question, by=request.user, credentials=credentials, answer=reason)
            return redirect("review-list")
        except Refused as refusal:
            refused = refusal.reasons
    context = {"question": question, "refused": refused, "reason": request.POST.get("reason", "")}
    return render(request, "question/answer.html", context, status=409 if refused else 200)
