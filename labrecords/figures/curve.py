"""A recorded curve with its first derivative, the fitted model and every endpoint that was found."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import Any

import plotly.graph_objects as go

from labrecords import writing
from labrecords.figures import plot

READINGS = {
    "pH": "pH",
    "mV": "Potential, mV",
    "conductivity": "Conductivity, mS/cm",
    "temperature": "Temperature, °C",
    "absorbance": "Absorbance",
}
SYMBOLS = ("diamond", "square", "triangle-up", "cross", "star", "hexagon", "pentagon")


def curve_figure(
    endpoint: Mapping[str, Any] | None,
    *,
    volume: Sequence[float | str],
    reading: Sequence[float | str],
    quantity: str,
) -> go.Figure:
    """The curve [mL, quantity]; ``endpoint`` is that of one titration of ``compute``'s output."""
    x, y = [float(value) for value in volume], [float(value) for value in reading]
    traces = [_measured(x, y)]
    if endpoint is not None:
        traces += [*_derivative(endpoint), *_model(endpoint), *_endpoints(endpoint, x=x, y=y)]
    return plot.figure(
        traces,
        x=plot.axis("Volume of titrant, mL"),
        y=plot.axis(READINGS.get(quantity, quantity)),
        columns=("Volume, mL", READINGS.get(quantity, quantity)),
        rows=[(writing.reading(v), writing.reading(r)) for v, r in zip(volume, reading, strict=True)],
        yaxis2=plot.axis("Change per mL", overlaying="y", side="right", showgrid=False, tickmode="auto", nticks=6),
        shapes=_lines(endpoint),
    )


def _measured(x: list[float], y: list[float]) -> go.Scatter:
    return go.Scatter(
        x=x,
        y=y,
        name="measured",
        mode="markers",
        marker={"color": plot.INK, "size": 6, "symbol": "circle-open", "line": {"width": 1.5}},
        hovertemplate="%{x} mL: %{y}<extra></extra>",
    )


def _derivative(endpoint: Mapping[str, Any]) -> list[go.Scatter]:
    pair = endpoint.get("derivative")
    if not pair:
        return []
    return [
        go.Scatter(
            x=list(pair[0]),
            y=list(pair[1]),
            name="first derivative",
            mode="lines",
            yaxis="y2",
            line={"color": plot.AMBER, "width": 1.5, "dash": "dot"},
            hovertemplate="%{x:.3f} mL: %{y:.3g} per mL<extra>first derivative</extra>",
        )
    ]


def _model(endpoint: Mapping[str, Any]) -> list[go.Scatter]:
    pair = endpoint.get("model")
    if not pair:
        return []
    return [
        go.Scatter(
            x=list(pair[0]),
            y=list(pair[1]),
            name="fitted model",
            mode="lines",
            line={"color": plot.TEAL, "width": 2},
            hoverinfo="skip",
        )
    ]


def _endpoints(endpoint: Mapping[str, Any], *, x: list[float], y: list[float]) -> list[go.Scatter]:
    """One mark a family, at the height of the curve there, with its interval."""
    traces = []
    for symbol, (family, found) in zip(SYMBOLS, endpoint["all"].items(), strict=False):
        volumes = [float(one["volume"]) for one in found]
        if not volumes:
            continue
        decides = family == endpoint["family"]
        traces.append(
            go.Scatter(
                x=volumes,
                y=[_height(at, x=x, y=y) for at in volumes],
                mode="markers",
                name=f"{family}{', decides' if decides else ''}",
                error_x={
                    "array": [2 * float(one["u"]) for one in found],
                    "color": plot.QUIET,
                    "thickness": 1.2,
                },
                marker={"color": plot.MAGENTA if decides else plot.INK_2, "size": 10, "symbol": symbol},
                hovertemplate=f"%{{x:.4f}} mL ± %{{error_x.array:.2g}} (2 u)<extra>{family}</extra>",
            )
        )
    return traces


def _height(at: float, *, x: list[float], y: list[float]) -> float:
    """The reading at a volume, on the straight line between its two neighbours."""
    for left, right, low, high in zip(x, x[1:], y, y[1:], strict=False):
        if left <= at <= right:
            return low + (high - low) * (at - left) / (right - left)
    return y[0] if at < x[0] else y[-1]


def _lines(endpoint: Mapping[str, Any] | None) -> list[dict[str, Any]]:
    if endpoint is None:
        return []
    at = float(endpoint["volume"])
    return [
        {
            "type": "line",
            "x0": at,
            "x1": at,
            "y0": 0,
            "y1": 1,
            "yref": "paper",
            "line": {"color": plot.MAGENTA, "width": 1, "dash": "dash"},
        }
    ]
