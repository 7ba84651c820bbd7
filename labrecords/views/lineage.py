"""Lineage: from a result up to certificates, and from anything it rests on down to every batch."""

from __future__ import annotations

import json
from collections import Counter
from collections.abc import Sequence
from typing import Any

from django.http import HttpRequest, HttpResponse, JsonResponse
from django.shortcuts import get_object_or_404, redirect, render
from django.urls import reverse
from django.utils import timezone
from django.views.decorators.http import require_GET

from labrecords.canonical import sha256_of
from labrecords.documents.dossier import dossier_of_run
from labrecords.documents.provenance import provenance_of_run
from labrecords.documents.signed import laid_out
from labrecords.figures.chain_of_run import chains_of_run
from labrecords.models import (
    Batch,
    Instrument,
    Investigation,
    ReferenceStandard,
    Sample,
    Signature,
    Standardization,
    TitrantLot,
)
from labrecords.queries.find import Match, as_typed, exact_match
from labrecords.queries.history import sentences_about
from labrecords.queries.lineage import (
    ChainLink,
    RestingRun,
    certified_by,
    chain_up,
    fan_down,
    instruments_on_chain,
    runs_of_source,
    runs_on_instrument,
    signatures_on_chain,
)
from labrecords.queries.run import runs
from labrecords.queries.signature import record_signed
from labrecords.queries.standard import standardizations_using
from labrecords.views.access import signed_in
from labrecords.views.recording import page_of

PAGES = {
    "run": "lineage-run",
    "standardization": "lineage-standardization",
    "titrant lot": "lineage-lot",
    "reference standard": "lineage-standard",
    "instrument": "lineage-instrument",
    "batch": "lineage-batch",
    "sample": "lineage-sample",
}


@signed_in
@require_GET
def find(request: HttpRequest) -> HttpResponse:
    """Type or scan any number, or the name of a certificate: each has its lineage."""
    q = as_typed(request.GET.get("q", ""))
    found = _found(q) if q else None
    if found is not None:
        return redirect(found.page, found.number)
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
        "chains": chains_of_run(record, links),
        "instruments": instruments_on_chain(record, links),
        "signatures": signatures_on_chain(record, links),
        "calculation": record.calculation,
    }
    return render(request, "lineage/run.html", context)


@signed_in
@require_GET
def provenance(request: HttpRequest, number: str) -> HttpResponse:
    """The chain of one result as W3C PROV-JSON."""
    record = get_object_or_404(runs(), number=number)
    links = chain_up(run_id=record.pk)
    document = provenance_of_run(
        record,
        links,
        instruments=instruments_on_chain(record, links),
        signatures=signatures_on_chain(record, links),
    )
    answer = JsonResponse(document, json_dumps_params={"indent": 1})
    answer["Content-Disposition"] = f'attachment; filename="{record.number}.prov.json"'
    return answer


@signed_in
@require_GET
def dossier(request: HttpRequest, number: str) -> HttpResponse:
    """Everything a result rests on in one file that can be checked without the site."""
    record = get_object_or_404(runs(), number=number)
    answer = HttpResponse(dossier_of_run(record), content_type="application/zip")
    answer["Content-Disposition"] = f'attachment; filename="{record.number}-dossier.zip"'
    return answer


@signed_in
@require_GET
def signed(request: HttpRequest, pk: int) -> HttpResponse:
    """A record as it stood when it was signed, and what became of it since."""
    signature = get_object_or_404(Signature.objects.select_related("signer"), pk=pk)
    record = record_signed(signature)
    context = {
        "signature": signature,
        "parts": laid_out(json.loads(signature.content), zone=timezone.get_current_timezone()),
        "is_whole": sha256_of(signature.content) == signature.content_sha256,
        "record": record,
        "history": sentences_about(record) if record else [],
    }
    return render(request, "lineage/signed.html", context)


@signed_in
@require_GET
def standardization(request: HttpRequest, number: str) -> HttpResponse:
    """What one standardization rests on, and what rests on it."""
    record = get_object_or_404(Standardization, number=number)
    title, back = f"standardization {number}", reverse("standardization-sheet", args=[number])
    above = chain_up(standardization_id=record.pk)
    return _down(request, fan_down([record.pk]), title=title, back=back, above=above)


@signed_in
@require_GET
def lot(request: HttpRequest, number: str) -> HttpResponse:
    """Everything that rests on one bottle of titrant."""
    record = get_object_or_404(TitrantLot, number=number)
    ids = [*record.standardizations.values_list("pk", flat=True)]
    back = reverse("titrant_lot-detail", args=[number])
    return _down(request, fan_down(ids), title=f"titrant lot {number}", back=back)


@signed_in
@require_GET
def standard(request: HttpRequest, number: str) -> HttpResponse:
    """Everything that rests on one lot of a reference standard."""
    record = get_object_or_404(ReferenceStandard, number=number)
    back = reverse("standard-detail", args=[number])
    resting = fan_down(standardizations_using(record))
    return _down(request, resting, title=f"reference standard {number}", back=back)


@signed_in
@require_GET
def instrument(request: HttpRequest, identifier: str) -> HttpResponse:
    """Every run that an instrument took part in, itself or through a standardization."""
    record = get_object_or_404(Instrument, identifier=identifier)
    back = reverse("instrument-detail", args=[identifier])
    return _down(request, runs_on_instrument(record), title=f"instrument {identifier}", back=back)


@signed_in
@require_GET
def batch(request: HttpRequest, number: str) -> HttpResponse:
    """The runs of a batch, each with its own chain."""
    record = get_object_or_404(Batch, number=number)
    back = reverse("batch-detail", args=[number])
    return _down(request, runs_of_source(record), title=f"batch {number}", back=back)


@signed_in
@require_GET
def sample(request: HttpRequest, number: str) -> HttpResponse:
    """The runs of a sample, each with its own chain."""
    record = get_object_or_404(Sample, number=number)
    back = reverse("sample-detail", args=[number])
    return _down(request, runs_of_source(record), title=f"sample {number}", back=back)


def _found(q: str) -> Match | None:
    """The lineage of a number, of the run that an investigation is about, or of what a certificate is of."""
    found = exact_match(q)
    if found is None:
        certified = certified_by(q)
        if certified is None:
            return None
        kind = "reference standard" if isinstance(certified, ReferenceStandard) else "instrument"
        return Match(kind=kind, number=str(certified), page=PAGES[kind])
    if found.kind == "investigation":
        about = Investigation.objects.values_list("run__number", flat=True).get(number=found.number)
        return Match(kind="run", number=about, page=PAGES["run"])
    return Match(kind=found.kind, number=found.number, page=PAGES.get(found.kind, found.page))


def _down(
    request: HttpRequest,
    resting: Sequence[RestingRun],
    *,
    title: str,
    back: str,
    above: Sequence[ChainLink] = (),
) -> HttpResponse:
    by_batch = {row.batch: row for row in resting if row.batch}
    context: dict[str, Any] = {
        "title": title,
        "back": back,
        "above": above,
        "page_obj": page_of(request, resting),
        "count": len(resting),
        "states": dict(Counter(row.state for row in resting)),
        "batches": sorted(by_batch.values(), key=lambda row: row.batch or "", reverse=True),
        "batch_states": dict(Counter(row.batch_state for row in by_batch.values())),
        "in_question": sum(row.in_question for row in resting),
    }
    return render(request, "lineage/down.html", context)
