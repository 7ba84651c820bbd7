"""Questions about records: a supervisor re-evaluates and signs why the record stands."""

from __future__ import annotations

from django.contrib import messages
from django.http import HttpRequest, HttpResponse
from django.shortcuts import get_object_or_404, redirect, render
from django.views.decorators.http import require_http_methods

from labrecords.errors import Refused
from labrecords.queries.question import open_or_answered_questions, questions_beside
from labrecords.services.question import answer_questions
from labrecords.views.access import for_roles
from labrecords.views.sheet import typed_credentials


@for_roles("supervisor")
@require_http_methods(["GET", "POST"])
def answer(request: HttpRequest, pk: int) -> HttpResponse:
    """Answer one question, and others of the same cause with it."""
    question = get_object_or_404(open_or_answered_questions(), pk=pk)
    siblings, refused = questions_beside(question), ()
    chosen = {int(text) for text in request.POST.getlist("beside") if text.isascii() and text.isdigit()}
    if request.method == "POST":
        try:
            credentials, reason = typed_credentials(request.POST)
            together = [question, *(each for each in siblings if each.pk in chosen)]
            answer_questions(together, by=request.user, credentials=credentials, answer=reason)
            messages.info(
                request, f"Re-evaluated: {', '.join(str(each.run or each.standardization) for each in together)}."
            )
            return redirect("review-list")
        except Refused as refusal:
            refused = refusal.reasons
    context = {
        "question": question, "siblings": siblings, "chosen": chosen, "refused": refused,
        "reason": request.POST.get("reason", ""),
    }  # fmt: skip
    return render(request, "question/answer.html", context, status=409 if refused else 200)
