"""What every Plotly figure shares: quiet axes, and colours named as the style sheet names them."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

import plotly.graph_objects as go

INK, INK_2, QUIET, RULE = "var(--ink)", "var(--ink-2)", "var(--ink-3)", "var(--rule-soft)"
TEAL, AMBER, MAGENTA = "var(--teal)", "var(--amber)", "var(--magenta)"
CLEAR = "rgba(0,0,0,0)"


def axis(title: str, **more: Any) -> dict[str, Any]:
    """An axis with a hairline, ticks outside and no zero line."""
    return {
        "title": {"text": title, "font": {"size": 12.5, "color": INK_2}, "standoff": 8},
        "gridcolor": RULE,
        "linecolor": QUIET,
        "tickcolor": QUIET,
        "ticks": "outside",
        "ticklen": 4,
        "tickfont": {"size": 12, "color": INK_2},
        "zeroline": False,
        "showline": True,
        "automargin": True,
        **more,
    }


def figure(
    traces: Sequence[Any],
    *,
    x: dict[str, Any],
    y: dict[str, Any],
    columns: Sequence[str],
    rows: Sequence[Sequence[str]],
    **layout: Any,
) -> go.Figure:
    """A figure with the same numbers as a table (``columns``, ``rows``) for who does not see it."""
    return go.Figure(
        data=list(traces),
        layout={
            "template": "none",
            "xaxis": x,
            "yaxis": y,
            "meta": {"columns": list(columns), "rows": [*rows]},
            "paper_bgcolor": CLEAR,
            "plot_bgcolor": CLEAR,
            "font": {"size": 12, "color": INK_2},
            "margin": {"l": 60, "r": 20, "t": 16, "b": 48},
            "hovermode": "closest",
            "hoverlabel": {
                "bgcolor": "var(--sheet)",
                "bordercolor": QUIET,
                "font": {"color": INK, "size": 12.5},
            },
            "legend": {"orientation": "h", "y": 1.02, "yanchor": "bottom", "x": 0, "bgcolor": CLEAR},
            "modebar": {"bgcolor": CLEAR, "color": QUIET, "activecolor": INK},
            **layout,
        },
    )
