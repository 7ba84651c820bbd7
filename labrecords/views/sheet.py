"""What the sheets of runs and standardizations share: their context, their preview, their signings."""

from __future__ import annotations

import re
from typing import Any

from django.http import HttpRequest, HttpResponse, QueryDict
from django.shortcuts import render

from labrecords.errors import Refused
from labrecords.forms.reading import clean_preview_cell
from labrecords.forms.signing import typed_components
from labrecords.models import ExclusionCause, Run, Standardization, User
from labrecords.queries.history import sentences_about
from labrecords.queries.preview import preview
from labrecords.queries.replicate import instruments_of
from labrecords.queries.sheet import sheet_of
from labrecords.queries.signature import signatures_of
from labrecords.rules.cautions import cautions_for
from labrecords.rules.replicate import expected_amount, objections_to_working_on
from labrecords.rules.review import objections_to_reviewing
from labrecords.rules.run import objections_to_approving_run, objections_to_submitting_run, objections_to_voiding_run
from labrecords.rules.standardization import (
    objections_to_approving_standardization, objections_to_submitting_standardization,
    objections_to_voiding_standardization,
)  # fmt: skip
from labrecords.services.signature import Credentials

CELL = re.compile(r"(amount|start|end|temperature)-(\d{1,12})")
Record = Run | Standardization


def sheet_context(record: Record, *, by: User) -> dict[str, Any]:
    """Everything a sheet shows to one person, with what stands in the way of each decision."""
    is_run = isinstance(record, Run)
    noun = "run" if is_run else "standardization"
    unit, expected = expected_amount(record)
    return {
        noun: record,
        "noun": noun,
        "sheet": sheet_of(record),
        "instruments": instruments_of(record),
        "may_work": not objections_to_working_on(record, by=by),
        "amount_unit": unit,
        "amount_expected": expected,
        "causes": ExclusionCause.choices,
        "signatures": signatures_of(noun, record.pk),
        "questions": record.questions.select_related("raised_by", "answered_by"),
        "history": sentences_about(record),
        "cautions": cautions_for(hazards_of(record)),
        **(_run_objections(record, by=by) if isinstance(record, Run) else _standardization_objections(record, by=by)),
    }


def hazards_of(record: Record) -> list[str]:
    """The hazards of the reagents on a sheet."""
    lots = [record.standardization.lot] if isinstance(record, Run) else [record.lot]
    if isinstance(record, Run) and record.excess_standardization is not None:
        lots.append(record.excess_standardization.lot)
    if isinstance(record, Standardization) and record.against is not None:
        lots.append(record.against.lot)
    return sorted({hazard for lot in lots for hazard in lot.titrant.substance.hazards})


def preview_outputs(record: Record, data: QueryDict) -> dict[str, Any]:
    """Outputs for the cells as they are typed, named like "end-417"."""
    typed = {}
    for name, text in data.items():
        cell = CELL.fullmatch(name)
        if cell:
            typed[(int(cell[2]), cell[1])] = clean_preview_cell(str(text))
    return preview(record, typed=typed)


def typed_credentials(data: QueryDict) -> tuple[Credentials, str]:
    """The two components of a signature and the reason, as typed; Refused naming what is empty."""
    username, password, reason = typed_components(data)
    return Credentials(username=username, password=password), reason


def refused_sheet(request: HttpRequest, record: Record, refusal: Refused) -> HttpResponse:
    """The sheet again, with the sentences that say why not; nothing typed elsewhere is lost."""
    context = sheet_context(record, by=request.user) | {"reasons": refusal.reasons}
    return render(request, f"{context['noun']}/sheet.html", context, status=409)


def _run_objections(run: Run, *, by: User) -> dict[str, list[str]]:
    return {
        "submit_objections": objections_to_submitting_run(run, by=by),
        "approve_objections": [*objections_to_reviewing(run, by=by), *objections_to_approving_run(run, by=by)],
        "return_objections": objections_to_reviewing(run, by=by),
        "void_objections": objections_to_voiding_run(run, by=by),
        "investigations": list(run.investigations.all()),
    }


def _standardization_objections(record: Standardization, *, by: User) -> dict[str, list[str]]:
    return {
        "submit_objections": objections_to_submitting_standardization(record, by=by),
        "approve_objections": [
            *objections_to_reviewing(record, by=by), *objections_to_approving_standardization(record, by=by),
        ],
        "return_objections": objections_to_reviewing(record, by=by),
        "void_objections": objections_to_voiding_standardization(record, by=by),
    }  # fmt: skip
