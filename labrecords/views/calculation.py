"""Calculations: checked by drawing their inputs, in the worker, with progress."""

from __future__ import annotations

from django.contrib import messages
from django.http import HttpRequest, HttpResponse
from django.shortcuts import get_object_or_404, redirect, render
from django.views.decorators.http import require_GET, require_POST

from labrecords.errors import Refused
from labrecords.models import Calculation
from labrecords.queries.calculation import latest_check
from labrecords.services.monte_carlo import ask_for_check
from labrecords.views.access import for_roles, signed_in


@for_roles("analyst", "supervisor", "auditor")
@require_POST
def check(request: HttpRequest, pk: int) -> HttpResponse:
    """Ask the worker to check a result."""
    calculation = _calculation(pk)
    try:
        ask_for_check(calculation, by=request.user)
    except Refused as refusal:
        messages.info(request, " ".join(refusal.reasons))
    record = calculation.run or calculation.standardization
    return redirect("run-sheet" if calculation.run_id else "standardization-sheet", record.number)


@signed_in
@require_GET
def checked(request: HttpRequest, pk: int) -> HttpResponse:
    """How far the check is, or what it found."""
    calculation = _calculation(pk)
    context = {"calculation": calculation, "check": latest_check(calculation)}
    return render(request, "calculation/_checked.html", context)


def _calculation(pk: int) -> Calculation:
    return get_object_or_404(Calculation.objects.select_related("run", "standardization"), pk=pk)
