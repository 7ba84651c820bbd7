"""Fitness line: how much of a lot's or a calibration's life is gone."""

from __future__ import annotations

from django.utils.safestring import SafeString

from labrecords.figures import svg

NEAR = 0.85


def fitness_line(gone: float, *, label: str, width: int | None = None) -> SafeString:
    """A line filled to ``gone`` (0 fresh, 1 at its end, over 1 past it); ``label`` says the same in words."""
    share = min(1.0, max(0.0, gone))
    colour = "magenta" if gone >= 1 else "amber" if gone >= NEAR else "teal"
    pieces = [
        svg.box("0%", 4, width="100%", height=4, colour="soft", rounded=2),
        svg.box("0%", 4, width=f"{100 * share:.1f}%", height=4, colour=colour, rounded=2),
        svg.line(("100%", 1), ("100%", 11), colour="rule", weight=2),
        *_mark(share, colour=colour),
    ]
    state = "past its end" if gone >= 1 else f"{100 * share:.0f} % of its life is gone"
    return svg.document(pieces, title=label, description=f"{state}.", height=12, width=width, css_class="fit")


def _mark(share: float, *, colour: str) -> list[str]:
    """A triangle near the end, a cross past it: never colour alone."""
    if colour == "teal":
        return []
    sign = (
        svg.stroke(svg.CROSS, colour=colour, weight=2)
        if colour == "magenta"
        else svg.shape(svg.TRIANGLE, colour=colour)
    )
    return [svg.place([sign], at=(f"{min(100 * share, 96):.1f}%", 6))]
