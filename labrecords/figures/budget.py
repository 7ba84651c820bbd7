"""Where an uncertainty comes from: a bar for each input's share of the variance."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

import plotly.graph_objects as go
from django.utils.safestring import SafeString

from labrecords import writing
from labrecords.figures import plot, svg


def share_bar(share: float, *, width: int | None = None) -> SafeString:
    """One row's share of the variance as a bar; a negative share takes variance away and is left hollow."""
    size = f"{100 * min(1.0, abs(share)):.1f}%"
    bar = (
        svg.box("0%", 3, width=size, height=9, colour="teal")
        if share >= 0
        else f'<rect x="0%" y="3" width="{size}" height="9" class="line-teal" fill="none" '
        f'stroke="{svg.COLOURS["teal"]}"/>'
    )
    words = writing.percent(share, digits=1)
    return svg.document(
        [svg.box("0%", 7, width="100%", height=1, colour="soft"), bar],
        title="Share of the variance",
        description=words,
        height=15,
        width=width,
        css_class="share",
    )


def budget_figure(output: Mapping[str, Any]) -> go.Figure:
    """The budget of ``compute``'s output as bars, the largest share on top."""
    lines = sorted(output["budget"], key=lambda one: float(one["share"]))
    labels = [str(one["label"]) for one in lines]
    shares = [100 * float(one["share"]) for one in lines]
    bars = go.Bar(
        x=shares,
        y=labels,
        orientation="h",
        marker={"color": plot.TEAL},
        hovertemplate="%{y}: %{x:.1f} %<extra></extra>",
    )
    rows = [
        (str(one["label"]), writing.significant(one["u"]), writing.percent(one["share"], digits=1))
        for one in reversed(lines)
    ]
    return plot.figure(
        [bars],
        x=plot.axis("Share of the variance, %"),
        y=plot.axis("", showgrid=False),
        columns=("Input", "u", "Share"),
        rows=rows,
        showlegend=False,
        bargap=0.45,
    )
