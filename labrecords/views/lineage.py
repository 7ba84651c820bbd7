"""Lineage: from a result up to certificates, and from a lot or a standard down to every batch."""

from __future__ import annotations

from collections import Counter
from typing import Any

from django.http import HttpRequest, HttpResponse, JsonResponse
from django.shortcuts import get_object_or_404, redirect, render
from django.urls import reverse
from django.views.decorators.http import require_GET

from labrecords import writing
from labrecords.documents.provenance import provenance_of_run
from labrecords.figures.chain import chain
from labrecords.models import ReferenceStandard, Run, Standardization, TitrantLot
from labrecords.queries.find import exact_match
from labrecords.queries.lineage import ChainLink, chain_up, fan_down
from labrecords.queries.replicate import instruments_of
from labrecords.queries.run import runs
from labrecords.queries.signature import signatures_of
from labrecords.queries.standard import standardizations_using
from labrecords.views.access import signed_in

PAGES = {
    "run": "lineage-run",
    "standardization": "lineage-standardization",
    "titrant lot": "lineage-lot",
    "reference standard": "lineage-standard",
}


@signed_in
@require_GET
def find(request: HttpRequest) -> HttpResponse:
    """Type or scan any number: a run goes up, a lot or a standard goes down."""
    q = request.GET.get("q", "").strip()[:80]
    found = exact_match(q) if q else None
    if found is not None:
        return redirect(PAGES.get(found.kind, found.page), found.number)
    newest = runs().filter(state="approved")[:8]
    return render(request, "lineage/find.html", {"q": q, "nothing": bool(q), "newest": newest})


@signed_in
@require_GET
def run(request: HttpRequest, number: str) -> HttpResponse:
    """The chain of one result up to the certificates it rests on."""
    record = get_object_or_404(runs(), number=number)
    links = chain_up(run_id=record.pk)
    context = {
        "run": record,
        "links": links,
        "chains": [chain(_marks(record, [link for link in links if link.via == via])[::-1]) for via in ("titrant", "excess solution") if any(link.via == via for link in links)],
        "instruments": instruments_of(record),
        "signatures": signatures_of("run", record.pk),
        "calculation": record.calculation,
    }
    return render(request, "lineage/run.html", context)


@signed_in
@require_GET
def provenance(request: HttpRequest, number: str) -> HttpResponse:
    """The chain of one result as W3C PROV-JSON."""
    record = get_object_or_404(runs(), number=number)
    answer = JsonResponse(provenance_of_run(record, chain_up(run_id=record.pk)), json_dumps_params={"indent": 1})
    answer["Content-Disposition"] = f'attachment; filename="{record.number}.prov.json"'
    return answer


@signed_in
@require_GET
def standardization(request: HttpRequest, number: str) -> HttpResponse:
    """What one standardization rests on, and what rests on it."""
    record = get_object_or_404(Standardization, number=number)
    title, back = f"Standardization {number}", reverse("standardization-sheet", args=[number])
    return _down(request, [record.pk], title=title, back=back, above=chain_up(standardization_id=record.pk))


@signed_in
@require_GET
def lot(request: HttpRequest, number: str) -> HttpResponse:
    """Everything that rests on one bottle of titrant."""
    record = get_object_or_404(TitrantLot, number=number)
    ids = [*record.standardizations.values_list("pk", flat=True)]
    return _down(request, ids, title=f"Titrant lot {number}", back=reverse("titrant_lot-detail", args=[number]))


@signed_in
@require_GET
def standard(request: HttpRequest, number: str) -> HttpResponse:
    """Everything that rests on one lot of a reference standard."""
    record = get_object_or_404(ReferenceStandard, number=number)
    ids = standardizations_using(record)
    return _down(request, ids, title=f"Reference standard {number}", back=reverse("standard-detail", args=[number]))


def _down(
    request: HttpRequest, ids: list[int], *, title: str, back: str, above: list[ChainLink] | None = None
) -> HttpResponse:
    resting = fan_down(ids)
    by_batch = {row.batch: row for row in resting if row.batch}
    context: dict[str, Any] = {
        "title": title,
        "back": back,
        "above": above or [],
        "resting": resting,
        "batches": sorted(by_batch.values(), key=lambda row: row.batch or "", reverse=True),
        "states": dict(Counter(row.batch_state for row in by_batch.values())),
        "in_question": sum(row.in_question for row in resting),
    }
    return render(request, "lineage/down.html", context)


def _marks(record: Run, links: list[ChainLink]) -> list[dict[str, Any]]:
    """The chain as the drawing takes it: the result first, then each standardization, then the certificate."""
    marks = [
        {"number": record.number, "title": record.method_version.method.title, "who": record.started_by.full_name,
         "when": writing.day(record.started_at), "state": record.state, "url": reverse("run-sheet", args=[record.number])}
    ]  # fmt: skip
    for link in links:
        marks.append(
            {"number": link.number, "title": f"lot {link.lot}", "who": link.started_by, "when": writing.day(link.started_at),
             "state": link.state, "url": reverse("standardization-sheet", args=[link.number])}
        )  # fmt: skip
        if link.standard:
            marks.append(
                {"number": link.standard, "title": link.substance, "who": link.certificate or "", "when": "",
                 "state": link.standard_state, "url": reverse("standard-detail", args=[link.standard])}
            )  # fmt: skip
    return marks
