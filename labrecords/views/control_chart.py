"""Control charts: each point links to its run, each signal is named in words."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from django.http import HttpRequest, HttpResponse
from django.shortcuts import get_object_or_404, redirect, render
from django.urls import reverse
from django.views.decorators.http import require_GET, require_http_methods

from labrecords.errors import Refused
from labrecords.figures.control_chart import control_chart_figure
from labrecords.forms.control_chart import ChartForm, typed_limits
from labrecords.models import ControlChart, ControlLimits
from labrecords.queries.capability import FEWEST, fit_of_titrant, fits_of_products
from labrecords.queries.control_chart import (
    ChartPoint,
    ChartSignal,
    charts,
    effective_limits,
    known_rules,
    limits_at_points,
    points_of,
    signals_on,
    versions_of,
)
from labrecords.queries.history import sentences_about
from labrecords.services import control_chart as service
from labrecords.views.access import for_roles, signed_in
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
    figure = _figure(chart, shown["points"], shown["signals"]) if shown["points"] else None
    context = {
        "figure": figure,
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
            service.set_limits(chart, by=request.user, credentials=credentials, **chosen)
            return redirect("control_chart-detail", code)
        except Refused as refusal:
            refused = refusal.reasons
    shown = _read(chart)
    if request.method == "GET":
        every = [point.calculation_id for point in shown["points"]]
        chosen |= {"baseline": every, "rules": known_rules()[:USUAL_RULES]}
    context = shown | {"rows": _choices(shown["points"], chosen), "known_rules": known_rules()}
    context |= {"chosen": chosen, "refused": refused}
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
        "unit": chart.control_sample.unit if chart.control_sample else "mol/L",
    }


def _figure(chart: ControlChart, points: Sequence[ChartPoint], signals: Sequence[ChartSignal]) -> Any:
    rules: dict[int, Any] = {}
    for signal in signals:
        rules.setdefault(signal.point.calculation_id, []).append(signal.rule)
    held = limits_at_points(points, versions_of(chart))
    return control_chart_figure(
        [
            _point(point, rules.get(point.calculation_id, []), limits)
            for point, limits in zip(points, held, strict=True)
        ],
        limits=_lines(held) or {"centre": sum(point.value for point in points) / len(points)},
        title=f"Result, {chart.control_sample.unit}" if chart.control_sample else "Concentration, mol/L",
        digits=5 if chart.titrant_id else 3,
    )


def _lines(held: Sequence[ControlLimits | None]) -> dict[str, Any]:
    """The limits at each point; one number where they never changed."""
    known = [limits for limits in held if limits is not None]
    if not known:
        return {}
    of = {"centre": 0, "lower": -3, "upper": 3, "warn_lower": -2, "warn_upper": 2}
    stepped = {name: [item.centre + times * item.sigma for item in known] for name, times in of.items()}
    if len(set(known)) == 1:
        return {name: values[0] for name, values in stepped.items()}
    return stepped


def _point(point: ChartPoint, rules: Sequence[str], limits: ControlLimits | None) -> dict[str, Any]:
    far = abs(point.value - limits.centre) > 3 * limits.sigma if limits else False
    url = reverse(f"{point.noun}-sheet", args=[point.number])
    return {"label": point.number, "value": point.value, "signals": rules, "out": far, "url": url}
