"""Titre strip: the replicates of one record on a line of volume."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import Any

from django.utils.safestring import SafeString

from labrecords import writing
from labrecords.figures import svg

AXIS = 56
MIDDLE = 41


def titre_strip(
    titrations: Sequence[Mapping[str, Any]],
    *,
    limit: float | None,
    limit_kind: str = "range_mL",
    width: int | None = None,
) -> SafeString:
    """The titres [mL] of ``compute``'s output: the set that counts filled, the others hollow and struck."""
    shown = [one for one in titrations if not one["blank"] and one["titre"] is not None]
    if not shown:
        return svg.document(
            [svg.line(("0%", AXIS), ("100%", AXIS)), svg.text("No titre yet", at=("50%", MIDDLE))],
            title="Titres",
            description="No titre has been read yet.",
            height=80,
            width=width,
        )
    low, high = _scale(shown, limit=limit if limit_kind == "range_mL" else None)
    counted = [float(one["titre"]) for one in shown if _counts(one)]
    pieces = [
        *_bracket(counted, limit=limit, limit_kind=limit_kind, low=low, high=high),
        *_axis(low, high),
        *_points(shown, low=low, high=high),
    ]
    return svg.document(
        pieces,
        title="Titres",
        description=_description(shown),
        height=82,
        width=width,
    )


def _counts(one: Mapping[str, Any]) -> bool:
    return bool(one["in_set"]) and not one["excluded"]


def _scale(shown: Sequence[Mapping[str, Any]], *, limit: float | None) -> tuple[float, float]:
    """Both ends [mL], never so near that one drop looks like a gulf."""
    values = [float(one["titre"]) for one in shown]
    least = max(0.2, 2 * (limit or 0.0))
    low, high = min(values), max(values)
    if high - low < least:
        middle = (low + high) / 2
        return middle - least / 2, middle + least / 2
    return low, high


def _bracket(counted: Sequence[float], *, limit: float | None, limit_kind: str, low: float, high: float) -> list[str]:
    """The window the titres must lie in, around those that count, and how far apart they are."""
    if not counted:
        return []
    first, last = min(counted), max(counted)
    left, right = first, last
    if limit_kind == "range_mL" and limit is not None and last - first <= limit:
        spare = (limit - (last - first)) / 2
        left, right = first - spare, last + spare
    start, end = svg.across(left, low=low, high=high), svg.across(right, low=low, high=high)
    span = f"{svg.share_of(end) - svg.share_of(start):.2f}%"
    words = f"range {writing.places(last - first, digits=2)}"
    middle = min(88.0, max(12.0, (svg.share_of(start) + svg.share_of(end)) / 2))
    return [
        svg.box(start, 26, width=span, height=AXIS - 26, colour="teal-wash"),
        svg.line((start, 22), (start, AXIS + 3), colour="teal", weight=1.5),
        svg.line((end, 22), (end, AXIS + 3), colour="teal", weight=1.5),
        svg.text(words, at=(f"{middle:.2f}%", 14), strong=True),
    ]


def _axis(low: float, high: float) -> list[str]:
    pieces = [svg.line(("0%", AXIS), ("100%", AXIS))]
    ticks = writing.steps(low, high, about=4)
    digits = max(2, *(len(f"{tick:g}".partition(".")[2]) for tick in ticks))
    for tick in ticks:
        x = svg.across(tick, low=low, high=high)
        pieces.append(svg.line((x, AXIS), (x, AXIS + 6)))
        pieces.append(svg.text(writing.places(tick, digits=digits), at=(x, AXIS + 21)))
    return pieces


def _points(shown: Sequence[Mapping[str, Any]], *, low: float, high: float) -> list[str]:
    """Equal titres are stacked, so that three of them look like three."""
    height: dict[str, int] = {}
    pieces = []
    for one in shown:
        x = svg.across(float(one["titre"]), low=low, high=high)
        level = height.get(x, 0)
        height[x] = level + 1
        sign = [svg.dot()] if _counts(one) else _struck()
        pieces.append(svg.place(sign, at=(x, MIDDLE + 8 - min(level, 2) * 11)))
    return pieces


def _struck() -> list[str]:
    return [svg.ring(), svg.stroke("M-8 8L8 -8", colour="quiet", weight=1.4)]


def _description(shown: Sequence[Mapping[str, Any]]) -> str:
    sentences = [f"{len(shown)} titres in mL."]
    for one in shown:
        state = "counts" if _counts(one) else "excluded" if one["excluded"] else "outside the set"
        sentences.append(f"Titration {one['number']}: {writing.places(one['titre'], digits=3)}, {state}.")
    return " ".join(sentences)
