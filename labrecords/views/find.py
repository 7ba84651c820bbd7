"""The find field of every page."""

from __future__ import annotations

from django.http import HttpRequest, HttpResponse
from django.shortcuts import redirect, render
from django.views.decorators.http import require_GET

from labrecords.queries.find import as_typed, exact_match, partial_matches
from labrecords.views.access import signed_in


@signed_in
@require_GET
def number(request: HttpRequest) -> HttpResponse:
    """An exact number opens its record; a part of one lists what has it."""
    q = as_typed(request.GET.get("q", ""))
    found = exact_match(q) if q else None
    if found is not None:
        return redirect(found.page, found.number)
    return render(request, "find/number.html", {"q": q, "matches": partial_matches(q) if len(q) >= 2 else []})
