"""Control chart: points in time order, the frozen limits, and the rule that fired, in words at the point."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from textwrap import wrap
from typing import Any

import plotly.graph_objects as go

from labrecords import writing
from labrecords.figures import plot

LIMITS = (
    ("centre", "centre", plot.TEAL, "solid"),
    ("lower", "lower limit", plot.MAGENTA, "dash"),
    ("upper", "upper limit", plot.MAGENTA, "dash"),
    ("warn_lower", "lower warning", plot.AMBER, "dot"),
    ("warn_upper", "upper warning", plot.AMBER, "dot"),
)


def control_chart_figure(
    points: Sequence[Mapping[str, Any]], *, limits: Mapping[str, Any], title: str, digits: int = 3
) -> go.Figure:
    """A chart of one series.

    ``points``: in order, each ``{"label", "value", "url" or None, "signals": [sentences], "out": bool}``.
    ``limits``: ``{"centre", "lower", "upper", "warn_lower" or None, "warn_upper" or None, "version"}``; a
    limit may also be a list, one number a point, as EWMA limits are.
    """
    places = [index + 1 for index in range(len(points))]
    traces = [
        *_limit_lines(limits, places=places, digits=digits),
        _series(points, places=places, digits=digits),
    ]
    return plot.figure(
        traces,
        x=plot.axis("", tickvals=places, ticktext=[str(point["label"]) for point in points], nticks=12, tickangle=0)
        if len(points) <= 12
        else plot.axis("Point, in time order"),
        y=plot.axis(title),
        columns=("Point", title, "Signals"),
        rows=[_row(point, digits=digits) for point in points],
        annotations=[*_limit_names(limits, digits=digits), *_signal_notes(points, places=places)],
        showlegend=False,
    )


def _series(points: Sequence[Mapping[str, Any]], *, places: list[int], digits: int) -> go.Scatter:
    """Out of limits a magenta cross, another signal an amber triangle, else a dot."""
    marks = [_look(point) for point in points]
    return go.Scatter(
        x=places,
        y=[float(point["value"]) for point in points],
        mode="lines+markers",
        name="value",
        line={"color": plot.QUIET, "width": 1},
        marker={
            "opacity": 1,
            "color": [colour for colour, _, _ in marks],
            "symbol": [symbol for _, symbol, _ in marks],
            "size": [size for _, _, size in marks],
        },
        customdata=[point.get("url") or "" for point in points],
        text=[_hover(point, digits=digits) for point in points],
        hovertemplate="%{text}<extra></extra>",
    )


def _look(point: Mapping[str, Any]) -> tuple[str, str, int]:
    if point["out"]:
        return plot.MAGENTA, "x", 10
    return (plot.AMBER, "triangle-up", 11) if point["signals"] else (plot.INK, "circle", 6)


def _hover(point: Mapping[str, Any], *, digits: int) -> str:
    told = [f"<b>{point['label']}</b>: {writing.places(point['value'], digits=digits)}", *point["signals"]]
    return "<br>".join(told)


def _limit_lines(limits: Mapping[str, Any], *, places: list[int], digits: int) -> list[go.Scatter]:
    return [
        _limit_line(limits[key], words=_named(limits[key], name=name, digits=digits), look=look, places=places)
        for key, name, *look in LIMITS
        if limits.get(key) is not None
    ]


def _limit_line(limit: Any, *, words: str, look: list[str], places: list[int]) -> go.Scatter:
    colour, dash = look
    stepped = isinstance(limit, list | tuple)
    return go.Scatter(
        x=places if stepped else [0.5, len(places) + 0.5],
        y=list(limit) if stepped else [float(limit)] * 2,
        mode="lines",
        name=words,
        line={"color": colour, "width": 1.3, "dash": dash, "shape": "hvh" if stepped else "linear"},
        hovertemplate=f"{words}<extra></extra>",
    )


def _named(limit: Any, *, name: str, digits: int) -> str:
    """A straight limit is named with its number, a stepped one without."""
    return name if isinstance(limit, list | tuple) else f"{name} {writing.places(limit, digits=digits)}"


def _limit_names(limits: Mapping[str, Any], *, digits: int) -> list[dict[str, Any]]:
    """The name of each limit above the right end of its line."""
    present = [(limits[key], name) for key, name, _, _ in LIMITS if limits.get(key) is not None]
    return [
        {
            "x": 1,
            "xref": "paper",
            "xanchor": "right",
            "y": float(limit[-1] if isinstance(limit, list | tuple) else limit),
            "yanchor": "bottom",
            "text": _named(limit, name=name, digits=digits),
            "showarrow": False,
            "font": {"size": 11.5, "color": plot.INK_2},
        }
        for limit, name in present
    ]


def _signal_notes(points: Sequence[Mapping[str, Any]], *, places: list[int]) -> list[dict[str, Any]]:
    """The first sentence of each signal at its point; all of them under the pointer and in the table."""
    signals = [(at, point) for at, point in zip(places, points, strict=True) if point["signals"]]
    return [
        {
            "x": at,
            "y": float(point["value"]),
            "text": "<br>".join(wrap(point["signals"][0], width=22)),
            "showarrow": True,
            "arrowcolor": plot.QUIET,
            "arrowwidth": 1,
            "arrowhead": 0,
            "ax": -30,
            "ay": -34 - 18 * (index % 2),
            "font": {"size": 12, "color": plot.INK},
            "bgcolor": "var(--sheet)",
            "borderpad": 2,
        }
        for index, (at, point) in enumerate(signals)
    ]


def _row(point: Mapping[str, Any], *, digits: int) -> tuple[str, str, str]:
    return str(point["label"]), writing.places(point["value"], digits=digits), " ".join(point["signals"])
