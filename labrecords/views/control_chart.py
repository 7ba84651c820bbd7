"""Control charts: each point links to its run, each signal is named in words."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from django.http import HttpRequest, HttpResponse
from django.shortcuts import get_object_or_404, redirect, render
from django.views.decorators.http import require_GET, require_http_methods

from labrecords.errors import Refused
from labrecords.forms.control_chart import MEMORY, ChartForm, typed_limits, typed_memory
from labrecords.models import ControlChart, ControlLimits
from labrecords.queries.capability import FEWEST, fit_of_titrant, fits_of_products
from labrecords.queries.chart_kinds import KINDS, RunLengths, lengths_of_rules, run_lengths
from labrecords.queries.control_chart import (
    ChartPoint,
    charts,
    effective_limits,
    known_rules,
    points_of,
    signals_on,
    unit_of,
    versions_of,
)
from labrecords.queries.history import sentences_about
from labrecords.services import control_chart as service
from labrecords.views.access import for_roles, signed_in
from labrecords.views.chart_drawing import SPREADS, drawings
from labrecords.views.recording import recorded, typed
from labrecords.views.sheet import typed_credentials

USUAL_RULES = 4


@signed_in
@require_GET
def list(request: HttpRequest) -> HttpResponse:
    """All charts with their newest signal."""
    return render(request, "control_chart/list.html", {"charts": [_read(chart) for chart in charts()]})


@signed_in
@require_GET
def detail(request: HttpRequest, code: str) -> HttpResponse:
    """One chart with its limits, its signals, and every point."""
    chart = get_object_or_404(charts(), code=code)
    shown = _read(chart)
    kind, spread = request.GET.get("as", "individuals"), request.GET.get("spread", "range")
    kind, spread = kind if kind in KINDS else "individuals", spread if spread in SPREADS else "range"
    limits = shown["limits"]
    context = {
        "kind": kind,
        "kinds": {name: words for name, words in KINDS.items() if name != "means" or chart.control_sample_id},
        "spread": spread,
        "spreads": SPREADS,
        "drawings": drawings(chart, shown, kind=kind, spread=spread),
        "run_lengths": _lengths(run_lengths(limits, kind)) if limits and kind != "means" else None,
        "signals": shown["signals"][::-1],
        "fit": fit_of_titrant(chart, shown["points"]),
        "fewest": FEWEST,
        "history": sentences_about(chart, parts=shown["versions"]),
    }
    return render(request, "control_chart/detail.html", shown | context)


@signed_in
@require_GET
def capability(request: HttpRequest) -> HttpResponse:
    """How well the results of every product fit between their limits."""
    context = {"fits": fits_of_products(), "fewest": FEWEST}
    return render(request, "control_chart/capability.html", context)


@for_roles("supervisor")
@require_http_methods(["GET", "POST"])
def record(request: HttpRequest) -> HttpResponse:
    """Record a chart."""
    return recorded(
        request,
        ChartForm(typed(request)),
        template="register/record.html",
        change=service.record_chart,
        to=lambda chart: ("control_chart-detail", chart.code),
        context={"title": "Record a chart", "back": "control_chart-list"},
    )


@for_roles("supervisor")
@require_http_methods(["GET", "POST"])
def set_limits(request: HttpRequest, code: str) -> HttpResponse:
    """Choose a baseline and the rules, and sign the limits into force."""
    chart, refused = get_object_or_404(charts(), code=code), ()
    chosen = typed_limits(request.POST)
    if request.method == "POST":
        try:
            credentials, _ = typed_credentials(request.POST)
            memory = typed_memory(request.POST)
            service.set_limits(chart, by=request.user, credentials=credentials, memory=memory, **chosen)
            return redirect("control_chart-detail", code)
        except Refused as refusal:
            refused = refusal.reasons
    shown = _read(chart)
    if request.method == "GET":
        every = [point.calculation_id for point in shown["points"]]
        last = shown["limits"]
        rules, also = (last.rules, last.also) if last else (known_rules()[:USUAL_RULES], [])
        chosen |= {"baseline": every, "rules": rules, "also": also}
    context = shown | {"rows": _choices(shown["points"], chosen), "known_rules": known_rules()}
    context |= {"chosen": chosen, "refused": refused, "memory": _memory(request.POST, shown["limits"])}
    ticked = tuple(rule for rule in chosen["rules"] if rule in known_rules())
    context["run_lengths"] = _lengths(lengths_of_rules(ticked))
    return render(request, "control_chart/set_limits.html", context, status=409 if refused else 200)


def _choices(points: Sequence[ChartPoint], chosen: dict[str, Any]) -> Sequence[dict[str, Any]]:
    """Every point with its tick and its sentence as they were typed."""
    ticked, why = set(chosen["baseline"]), chosen["excluded"]
    return [
        {
            "point": point,
            "is_ticked": point.calculation_id in ticked,
            "why": why.get(point.calculation_id, ""),
        }
        for point in points
    ]


def _read(chart: ControlChart) -> dict[str, Any]:
    points, versions, limits = points_of(chart), versions_of(chart), effective_limits(chart)
    return {
        "chart": chart,
        "points": points,
        "versions": versions,
        "limits": limits,
        "lower": limits.centre - 3 * limits.sigma if limits else None,
        "upper": limits.centre + 3 * limits.sigma if limits else None,
        "signals": signals_on(points, versions),
        "unit": unit_of(chart),
    }


def _lengths(found: RunLengths) -> dict[str, Any]:
    """Shift and average run length side by side."""
    return {"rows": [*zip(found.shifts, found.lengths, strict=True)], "left_out": found.left_out}


def _memory(data: Any, limits: ControlLimits | None) -> list[dict[str, Any]]:
    """The settings of the charts with memory: as typed, as in force, or as usual."""
    usual = {name: ControlLimits._meta.get_field(name).default for name in MEMORY}
    return [
        {
            "name": name,
            "label": label,
            "value": data.get(name, f"{getattr(limits, name) if limits else usual[name]:g}"),
        }
        for name, label in MEMORY.items()
    ]
