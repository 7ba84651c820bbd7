"""The figures of a control chart, by the kind that is looked at."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import Any

from django.urls import reverse

from labrecords.figures.control_chart import control_chart_figure
from labrecords.figures.cusum_chart import cusum_chart_figure
from labrecords.models import ControlChart, ControlLimits
from labrecords.queries.chart_kinds import Drawn, averages, means_and_spread, moving_ranges, sums
from labrecords.queries.control_chart import CUSUM, EWMA, ChartPoint, ChartSignal, limits_at_points, unit_of

SPREADS = {"range": "range R", "sd": "standard deviation s"}


def drawings(chart: ControlChart, shown: Mapping[str, Any], *, kind: str, spread: str) -> list[dict[str, Any]]:
    """Title, note and figure of each chart of a kind; none where there is nothing to draw."""
    points, versions = shown["points"], shown["versions"]
    if not points:
        return []
    if kind == "ewma":
        return _averages(chart, points, versions)
    if kind == "cusum":
        return _sums(points, versions)
    if kind == "means":
        return _means(chart, points, shown["limits"], spread=spread)
    return _single(chart, points, versions, shown["signals"])


def _single(
    chart: ControlChart, points: Sequence[ChartPoint], versions: Sequence[ControlLimits], signals: Sequence[ChartSignal]
) -> list[dict[str, Any]]:
    rules: dict[int, list[str]] = {}
    for signal in signals:
        if signal.rule not in (EWMA, CUSUM):
            rules.setdefault(signal.point.calculation_id, []).append(signal.rule)
    held = limits_at_points(points, versions)
    figure = control_chart_figure(
        [
            _point(point, point.value, rules.get(point.calculation_id, ()), is_out=_is_far(point, limits))
            for point, limits in zip(points, held, strict=True)
        ],
        limits=_lines(held) or {"centre": sum(point.value for point in points) / len(points)},
        title=_axis(chart, "Result"), digits=_digits(chart),
    )  # fmt: skip
    found = [{"title": "Single values", "note": "press a point to open its record", "figure": figure}]
    if len(points) > 1:
        ranges = moving_ranges(points, versions)
        figure = _figure(chart, points[1:], ranges, title=_axis(chart, "Moving range"))
        found.append({"title": "Moving range", "note": "from one point to the next", "figure": figure})
    return found


def _averages(
    chart: ControlChart, points: Sequence[ChartPoint], versions: Sequence[ControlLimits]
) -> list[dict[str, Any]]:
    drawn = averages(points, versions)
    if not drawn.values:
        return []
    figure = _figure(chart, points[-len(drawn.values) :], drawn, title=_axis(chart, "Weighted average"), rule=EWMA)
    return [{"title": "Weighted average", "note": "small lasting shifts show early", "figure": figure}]


def _sums(points: Sequence[ChartPoint], versions: Sequence[ControlLimits]) -> list[dict[str, Any]]:
    found = sums(points, versions)
    if not found.upper:
        return []
    used = points[-len(found.upper) :]
    figure = cusum_chart_figure(
        found.upper, found.lower, interval=found.interval, labels=[point.number for point in used],
        urls=[_url(point) for point in used],
    )  # fmt: skip
    return [{"title": "Cumulative sums", "note": "above and below the centre, in sigma", "figure": figure}]


def _means(
    chart: ControlChart, points: Sequence[ChartPoint], limits: ControlLimits | None, *, spread: str
) -> list[dict[str, Any]]:
    found = means_and_spread(chart, points, limits, spread=spread)
    if found is None:
        return []
    used, means, spreads = found
    name = SPREADS[spread]
    return [
        {
            "title": "Means of the titrations that count",
            "note": "limits from the spread inside the runs: what differs from run to run shows beyond them",
            "figure": _figure(chart, used, means, title=_axis(chart, "Mean")),
        },
        {
            "title": f"Spread inside each run: {name}",
            "note": "runs may differ in size",
            "figure": _figure(chart, used, spreads, title=_axis(chart, name[0].upper() + name[1:])),
        },
    ]


def _figure(chart: ControlChart, points: Sequence[ChartPoint], drawn: Drawn, *, title: str, rule: str = "") -> Any:
    rows = [
        _point(point, value, [rule] if is_out and rule else (), is_out=is_out)
        for point, value, is_out in zip(points, drawn.values, drawn.out, strict=True)
    ]
    limits = {"centre": _line(drawn.centre), "lower": _line(drawn.lower), "upper": _line(drawn.upper)}
    return control_chart_figure(rows, limits=limits, title=title, digits=_digits(chart))


def _line(values: Sequence[float | None]) -> float | list[float] | None:
    """One number where a limit never changed, a number a point where it did, None where a point has none."""
    known = [value for value in values if value is not None]
    if len(known) < len(values) or not known:
        return None
    return known[0] if len(set(known)) == 1 else known


def _lines(held: Sequence[ControlLimits | None]) -> dict[str, Any]:
    """The limits at each point; one number where they never changed."""
    known = [limits for limits in held if limits is not None]
    if not known:
        return {}
    of = {"centre": 0, "lower": -3, "upper": 3, "warn_lower": -2, "warn_upper": 2}
    return {name: _line([item.centre + times * item.sigma for item in known]) for name, times in of.items()}


def _is_far(point: ChartPoint, limits: ControlLimits | None) -> bool:
    return limits is not None and abs(point.value - limits.centre) > 3 * limits.sigma


def _point(point: ChartPoint, value: float, rules: Sequence[str], *, is_out: bool) -> dict[str, Any]:
    label = point.label if point.noun == "instrument" else point.number
    return {"label": label, "value": value, "signals": rules, "out": is_out, "url": _url(point)}


def _url(point: ChartPoint) -> str:
    return reverse(point.page, args=[point.number])


def _axis(chart: ControlChart, name: str) -> str:
    first = {"titrant": "Concentration", "method": "Blank", "instrument": "Slope"}
    of = next((word for field, word in first.items() if getattr(chart, f"{field}_id")), "Result")
    return f"{of if name == 'Result' else name}, {unit_of(chart)}"


def _digits(chart: ControlChart) -> int:
    return 5 if chart.titrant_id else 1 if chart.instrument_id else 3
