"""Control charts: each point links to its run, each signal is named in words."""

from __future__ import annotations

from typing import Any

from django.http import HttpRequest, HttpResponse
from django.shortcuts import get_object_or_404, redirect, render
from django.urls import reverse
from django.views.decorators.http import require_GET, require_http_methods

from labrecords.errors import Refused
from labrecords.figures.control_chart import control_chart_figure
from labrecords.forms.control_chart import ChartForm, typed_limits
from labrecords.models import ControlChart, ControlLimits
from labrecords.queries.control_chart import (
    ChartPoint, ChartSignal, charts, effective_limits, known_rules, points_of, signals_on,
)  # fmt: skip
from labrecords.queries.history import sentences_about
from labrecords.services import control_chart as service
from labrecords.views.access import for_roles, signed_in
from labrecords.views.recording import recorded
from labrecords.views.sheet import typed_credentials


@signed_in
@require_GET
def list(request: HttpRequest) -> HttpResponse:
    """All charts with their newest signal."""
    return render(request, "control_chart/list.html", {"charts": [_shown(chart) for chart in charts()]})


@signed_in
@require_GET
def detail(request: HttpRequest, code: str) -> HttpResponse:
    """One chart with its limits, its signals, and every point."""
    chart = get_object_or_404(charts(), code=code)
    return render(request, "control_chart/detail.html", _shown(chart) | {"history": sentences_about(chart)})


@for_roles("supervisor")
@require_http_methods(["GET", "POST"])
def record(request: HttpRequest) -> HttpResponse:
    """Record a chart."""
    return recorded(
        request, ChartForm(request.POST or None), template="register/record.html", change=service.record_chart,
        to=lambda chart: ("control_chart-detail", chart.code), context={"title": "Record a chart", "back": "control_chart-list"},
    )  # fmt: skip


@for_roles("supervisor")
@require_http_methods(["GET", "POST"])
def set_limits(request: HttpRequest, code: str) -> HttpResponse:
    """Choose a baseline and the rules, and sign the limits into force."""
    chart, refused = get_object_or_404(charts(), code=code), ()
    typed = typed_limits(request.POST)
    if request.method == "POST":
        try:
            credentials, _ = typed_credentials(request.POST)
            service.set_limits(chart, by=request.user, credentials=credentials, **typed)
            return redirect("control_chart-detail", code)
        except Refused as refusal:
            refused = refusal.reasons
    context = _shown(chart) | {"known_rules": known_rules(), "typed": typed, "refused": refused}
    return render(request, "control_chart/set_limits.html", context, status=409 if refused else 200)


def _shown(chart: ControlChart) -> dict[str, Any]:
    points, limits = points_of(chart), effective_limits(chart)
    signals = signals_on(points, limits) if limits else []
    return {
        "chart": chart,
        "points": points,
        "limits": limits,
        "lower": limits.centre - 3 * limits.sigma if limits else None,
        "upper": limits.centre + 3 * limits.sigma if limits else None,
        "signals": signals[::-1],
        "unit": chart.control_sample.unit if chart.control_sample else "mol/L",
        "figure": _figure(chart, points, limits, signals) if points else None,
    }


def _figure(chart: ControlChart, points: Any, limits: ControlLimits | None, signals: Any) -> Any:
    rules: dict[int, Any] = {}
    for signal in signals:
        rules.setdefault(signal.point.calculation_id, []).append(signal.rule)
    values = [point.value for point in points]
    centre = limits.centre if limits else sum(values) / len(values)
    spread = 3 * limits.sigma if limits else max(abs(value - centre) for value in values) or 1.0
    lines = {"centre": centre, "lower": centre - spread, "upper": centre + spread,
             "warn_lower": centre - 2 * spread / 3 if limits else None, "warn_upper": centre + 2 * spread / 3 if limits else None,
             "version": limits.number if limits else "none"}  # fmt: skip
    return control_chart_figure(
        [_point(point, rules.get(point.calculation_id, []), lines) for point in points], limits=lines,
        title=chart.control_sample.unit if chart.control_sample else "mol/L", digits=5 if chart.titrant_id else 3,
    )  # fmt: skip


def _point(point: ChartPoint, rules: Any, lines: dict[str, Any]) -> dict[str, Any]:
    return {
        "label": point.number, "value": point.value, "signals": rules,
        "out": not lines["lower"] <= point.value <= lines["upper"],
        "url": reverse(f"{point.noun}-sheet", args=[point.number]),
    }  # fmt: skip


__all__ = ["ChartSignal", "detail", "list", "record", "set_limits"]
