"""What the fitted model leaves over, point by point."""

from __future__ import annotations

from collections.abc import Sequence

import plotly.graph_objects as go

from labrecords import writing
from labrecords.figures import plot


def residual_figure(residuals: Sequence[float], *, volume: Sequence[float | str], quantity: str) -> go.Figure:
    """Residuals of the fit over the volume [mL]: without a pattern when the model holds."""
    x = [float(value) for value in volume][: len(residuals)]
    points = go.Scatter(
        x=x,
        y=list(residuals),
        mode="markers+lines",
        name="residual",
        marker={"color": plot.INK, "size": 5},
        line={"color": plot.QUIET, "width": 1},
        hovertemplate="%{x} mL: %{y:.3g}<extra></extra>",
    )
    zero = {
        "type": "line",
        "x0": 0,
        "x1": 1,
        "xref": "paper",
        "y0": 0,
        "y1": 0,
        "line": {"color": plot.TEAL, "width": 1.5},
    }
    name = f"Residual, {quantity}"
    rows = [(writing.reading(v), writing.significant(r, figures=3)) for v, r in zip(x, residuals, strict=True)]
    return plot.figure(
        [points],
        x=plot.axis("Volume of titrant, mL"),
        y=plot.axis(name),
        columns=("Volume, mL", name),
        rows=rows,
        shapes=[zero],
        showlegend=False,
    )
