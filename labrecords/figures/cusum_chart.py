"""Both cumulative sums against their decision interval, the lower one drawn downwards."""

from __future__ import annotations

from collections.abc import Sequence

import plotly.graph_objects as go

from labrecords import writing
from labrecords.figures import plot


def cusum_chart_figure(
    upper: Sequence[float],
    lower: Sequence[float],
    *,
    interval: Sequence[float | None],
    labels: Sequence[str],
    urls: Sequence[str],
) -> go.Figure:
    """Sums in sigma, in time order; a sum beyond its interval is a magenta cross."""
    places = [at + 1 for at in range(len(upper))]
    down = [-value for value in lower]
    return plot.figure(
        [
            *_intervals(interval, places=places),
            _sum(upper, name="above", places=places, interval=interval, labels=labels, urls=urls),
            _sum(down, name="below", places=places, interval=interval, labels=labels, urls=urls),
        ],
        x=plot.axis("Point, in time order"),
        y=plot.axis("Cumulative sum, sigma"),
        columns=("Point", "Above", "Below"),
        rows=[
            (label, writing.places(up, digits=2), writing.places(low, digits=2))
            for label, up, low in zip(labels, upper, lower, strict=True)
        ],
        showlegend=False,
    )


def _sum(
    values: Sequence[float], *, name: str, places: list[int], interval: Sequence[float | None], labels: Sequence[str],
    urls: Sequence[str],
) -> go.Scatter:  # fmt: skip
    beyond = [edge is not None and abs(value) > edge for value, edge in zip(values, interval, strict=True)]
    return go.Scatter(
        x=places,
        y=list(values),
        mode="lines+markers",
        name=f"sum {name}",
        line={"color": plot.TEAL if name == "above" else plot.AMBER, "width": 1.6},
        marker={
            "color": [plot.MAGENTA if far else plot.INK for far in beyond],
            "symbol": ["x" if far else "circle" for far in beyond],
            "size": [10 if far else 5 for far in beyond],
        },
        customdata=list(urls),
        text=[f"<b>{label}</b>: {abs(value):.2f} sigma {name}" for label, value in zip(labels, values, strict=True)],
        hovertemplate="%{text}<extra></extra>",
    )


def _intervals(interval: Sequence[float | None], *, places: list[int]) -> list[go.Scatter]:
    return [
        go.Scatter(
            x=places,
            y=[None if edge is None else sign * edge for edge in interval],
            mode="lines",
            name="decision interval",
            line={"color": plot.MAGENTA, "width": 1.3, "dash": "dash", "shape": "hvh"},
            hoverinfo="skip",
        )
        for sign in (1, -1)
    ]
