"""What the sheets of runs and standardizations share: their context, their preview, their signings."""

from __future__ import annotations

import re
from collections.abc import Mapping
from typing import Any

from django.http import HttpRequest, HttpResponse, QueryDict
from django.shortcuts import render
from django.urls import reverse

from labrecords import writing
from labrecords.errors import Refused
from labrecords.figures.budget import share_bar
from labrecords.figures.curve import curve_figure
from labrecords.figures.limit_bar import limit_bar
from labrecords.figures.residuals import residual_figure
from labrecords.figures.titre_strip import titre_strip
from labrecords.forms.reading import clean_preview_cell
from labrecords.forms.signing import typed_components
from labrecords.models import ExclusionCause, Run, Standardization, User
from labrecords.queries.calculation import latest_check
from labrecords.queries.history import sentences_about
from labrecords.queries.preview import preview
from labrecords.queries.replicate import instruments_of, replicates_of
from labrecords.queries.sheet import Sheet, sheet_of
from labrecords.queries.signature import signatures_of
from labrecords.queries.standardization import attempts_on_lot
from labrecords.rules.cautions import cautions_for
from labrecords.rules.replicate import expected_amount, objections_to_working_on
from labrecords.rules.review import objections_to_reviewing
from labrecords.rules.run import (
    objections_to_approving_run,
    objections_to_submitting_run,
    objections_to_voiding_run,
)
from labrecords.rules.standardization import (
    objections_to_approving_standardization,
    objections_to_submitting_standardization,
    objections_to_voiding_standardization,
)  # fmt: skip
from labrecords.services.signature import Credentials

CELL = re.compile(r"(amount|start|first_end|end|temperature|drift|minutes)-(\d{1,12})")
Record = Run | Standardization


def sheet_context(record: Record, *, by: User) -> dict[str, Any]:
    """Everything a sheet shows to one person, with what stands in the way of each decision."""
    is_run = isinstance(record, Run)
    noun = "run" if is_run else "standardization"
    return {
        noun: record,
        "noun": noun,
        **shown(sheet_of(record)),
        "instruments": instruments_of(record),
        "may_work": not objections_to_working_on(record, by=by),
        "causes": ExclusionCause.choices,
        "signatures": signatures_of(noun, record.pk),
        "questions": record.questions.select_related("raised_by", "answered_by"),
        "history": sentences_about(record),
        "cautions": cautions_for(hazards_of(record)),
        "preview_url": reverse(f"{noun}-preview", args=[record.number]),
        **(_run_objections(record, by=by) if isinstance(record, Run) else _standardization_objections(record, by=by)),
    }


def shown(sheet: Sheet) -> dict[str, Any]:
    """A sheet with its figures: titre strip, limit bar, budget shares, curves."""
    outputs = sheet.outputs or {}
    record = sheet.record
    method = record.method_version if isinstance(record, Run) else record.lot.titrant
    limit = record.specification_limit if isinstance(record, Run) else None
    titres = [line for line in outputs.get("titrations", []) if line["titre"] is not None]
    strip = titre_strip(titres, limit=float(method.limit), limit_kind=method.limit_kind) if titres else ""
    bar = limit_bar(outputs, places=limit.places) if outputs.get("verdict") and limit else ""
    budget = [{**line, "bar": share_bar(line["share"])} for line in outputs.get("budget") or []]
    return {
        "sheet": sheet,
        "outputs": outputs,
        "strip": strip,
        "limit_bar": bar,
        "budget": budget,
        "curves": curves_of(sheet),
        "calculation": sheet.calculation,
        "check": latest_check(sheet.calculation),
        **words_of(record),
    }


def words_of(record: Record) -> dict[str, Any]:
    """The headings of a sheet, and how many places its columns show."""
    is_run = isinstance(record, Run)
    method = record.method_version if is_run else record.lot.titrant
    takes_curve = method.takes_curve
    limit = f"range up to {writing.short(method.limit)} mL"
    if method.limit_kind != "range_mL":
        limit = f"RSD up to {writing.short(method.limit)} %"
    return {
        "amount_label": "Sample" if is_run else "Standard",
        "amount_unit": expected_amount(record)[0],
        "takes_curve": takes_curve,
        "reads_two_ends": method.reads_two_ends,
        "reads_drift": method.takes_drift,
        "reads_temperature": method.temperature_correction,
        "reads": f"recorded {method.curve_quantity} curve" if takes_curve else method.indicator,
        "rule_words": f"{method.get_policy_display()}, {limit}, {method.replicates_needed} needed",
        "value_unit": method.unit if is_run else "mol/L",
        "value_places": method.places if is_run else 5,
        "titre_places": 3 if takes_curve else 2,
        "attempt": None if is_run else attempts_on_lot(record.lot),
    }


def curves_of(sheet: Sheet) -> list[dict[str, Any]]:
    """Each recorded curve with its derivative, model, endpoints and residuals."""
    found = []
    for row in sheet.rows:
        curve = row.replicate.curve
        if curve is None:
            continue
        endpoint = (row.titration or {}).get("endpoint")
        residuals = (endpoint or {}).get("residuals")
        found.append(
            {
                "row": row,
                "curve": curve,
                "endpoint": endpoint,
                "figure": curve_figure(endpoint, volume=curve.volumes, reading=curve.readings, quantity=curve.quantity),
                "residuals": residual_figure(residuals, volume=curve.volumes, quantity=curve.quantity)
                if residuals and len(residuals) == len(curve.volumes)
                else None,
            }
        )
    return found


def hazards_of(record: Record) -> list[str]:
    """The hazards of the reagents on a sheet."""
    lots = [record.standardization.lot] if isinstance(record, Run) else [record.lot]
    if isinstance(record, Run) and record.excess_standardization is not None:
        lots.append(record.excess_standardization.lot)
    if isinstance(record, Standardization) and record.against is not None:
        lots.append(record.against.lot)
    return sorted({hazard for lot in lots for hazard in lot.titrant.substance.hazards})


def means_context(record: Record, data: QueryDict, *, by: User) -> dict[str, Any]:
    """What the cells as typed mean, named like "end-417"; once all are kept and computed, the official result."""
    cells = {name: CELL.fullmatch(name) for name in data}
    typed = {(int(cell[2]), cell[1]): clean_preview_cell(str(data[name])) for name, cell in cells.items() if cell}
    if is_kept(record, typed) and not sheet_of(record).is_waiting:
        return sheet_context(record, by=by) | {"is_fragment": True}
    noun = "run" if isinstance(record, Run) else "standardization"
    context = shown(sheet_of(record, outputs=preview(record, typed=typed)))
    return context | {noun: record, "noun": noun, "is_preview": True}


def is_kept(record: Record, typed: Mapping[tuple[int, str], str | None]) -> bool:
    """Whether every typed cell is what the record has."""
    rows = {item.pk: item for item in replicates_of(record)}
    kept = ((getattr(rows[pk], field), text) for (pk, field), text in typed.items() if pk in rows)
    return all(text == (None if value is None else str(value)) for value, text in kept)


def typed_credentials(data: QueryDict) -> tuple[Credentials, str]:
    """The two components of a signature and the reason, as typed; Refused naming what is empty."""
    username, password, reason = typed_components(data)
    return Credentials(username=username, password=password), reason


def refused_sheet(request: HttpRequest, record: Record, refusal: Refused) -> HttpResponse:
    """The sheet again, with the sentences that say why not; nothing typed elsewhere is lost."""
    context = sheet_context(record, by=request.user) | {"refused": refusal.reasons}
    return render(request, f"{context['noun']}/sheet.html", context, status=409)


def _run_objections(run: Run, *, by: User) -> dict[str, list[str]]:
    return {
        "submit_objections": objections_to_submitting_run(run, by=by),
        "approve_objections": [
            *objections_to_reviewing(run, by=by),
            *objections_to_approving_run(run, by=by),
        ],
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
