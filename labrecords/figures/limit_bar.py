"""Limit bar: a value with its interval against the limits, the guard band hatched."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from django.utils.safestring import SafeString

from labrecords import writing
from labrecords.figures import svg

TOP, FOOT = 26, 48
RAISED = 18
MIDDLE = (TOP + FOOT) / 2
COLOUR = {"conforms": "ink", "inconclusive": "amber", "does_not_conform": "magenta"}


def limit_bar(output: Mapping[str, Any], *, places: int, width: int | None = None, compact: bool = False) -> SafeString:
    """The result of ``compute``'s output against its specification; empty where there is none."""
    verdict = output["verdict"]
    if verdict is None or output["value"] is None:
        return SafeString("")
    value, spread = float(output["value"]), float(output["U"] or 0)
    lower, upper = _number(verdict["lower"]), _number(verdict["upper"])
    low, high = scale(value, spread=spread, lower=lower, upper=upper)
    guard = float(verdict["guard"] or 0)
    pieces = [
        *_allowed(lower, upper, guard=guard, low=low, high=high),
        *_limits(lower, upper, places=places, low=low, high=high, compact=compact),
        *_value(value, spread=spread, outcome=verdict["outcome"], low=low, high=high),
    ]
    pieces = [_raised(pieces)] if compact else pieces + _words(verdict, value=value, low=low, high=high)
    return svg.document(
        pieces,
        title="Result against its limits",
        description=_description(output, places=places),
        height=FOOT + 20 - RAISED if compact else 100,
        width=width,
    )


def scale(value: float, *, spread: float, lower: float | None, upper: float | None) -> tuple[float, float]:
    """Both ends of the bar: the limits, the value with its interval, and air around them."""
    present = [bound for bound in (lower, upper) if bound is not None]
    ends = [value - spread, value + spread, *present]
    low, high = min(ends), max(ends)
    air = (high - low) * (0.18 if len(present) == 2 else 0.35) or abs(value) * 0.1 or 1.0
    return low - air, high + air


def _raised(pieces: list[str]) -> str:
    """Without words above it the bar starts higher."""
    return f'<svg x="0" y="-{RAISED}" width="100%" height="100" overflow="visible">{"".join(pieces)}</svg>'


def _number(bound: Any) -> float | None:
    return None if bound is None or bound == "" else float(bound)


def _allowed(lower: float | None, upper: float | None, *, guard: float, low: float, high: float) -> list[str]:
    start = low if lower is None else lower
    end = high if upper is None else upper
    pieces = [_band(start, end, low=low, high=high)]
    if guard > 0 and lower is not None:
        pieces.append(_hatched(start, min(start + guard, end), low=low, high=high))
    if guard > 0 and upper is not None:
        pieces.append(_hatched(max(end - guard, start), end, low=low, high=high))
    return pieces


def _band(start: float, end: float, *, low: float, high: float) -> str:
    left, right = svg.across(start, low=low, high=high, pad=0), svg.across(end, low=low, high=high, pad=0)
    return svg.box(left, TOP, width=_span(left, right), height=FOOT - TOP, colour="teal-wash")


def _hatched(start: float, end: float, *, low: float, high: float) -> str:
    """Slanted lines inside a band, cut off at its edges; wide enough for any page."""
    left, right = svg.across(start, low=low, high=high, pad=0), svg.across(end, low=low, high=high, pad=0)
    height = FOOT - TOP
    lines = "".join(f"M{x} {height}l{height} -{height}" for x in range(-height, 1600, 7))
    return (
        f'<svg x="{left}" y="{TOP}" width="{_span(left, right)}" height="{height}" overflow="hidden">'
        f"{svg.stroke(lines, colour='hatch', weight=1.5)}</svg>"
    )


def _span(left: str, right: str) -> str:
    return f"{max(0.0, svg.share_of(right) - svg.share_of(left)):.2f}%"


def _limits(
    lower: float | None, upper: float | None, *, places: int, low: float, high: float, compact: bool
) -> list[str]:
    pieces = [svg.line(("0%", FOOT), ("100%", FOOT))]
    for bound, name in ((lower, "lower limit"), (upper, "upper limit")):
        if bound is None:
            continue
        x = svg.across(bound, low=low, high=high, pad=0)
        pieces.append(svg.line((x, TOP - 6), (x, FOOT + 5), colour="ink", weight=1.5))
        pieces.append(svg.text(writing.places(bound, digits=places), at=(x, FOOT + 17), strong=True))
        if not compact:
            pieces.append(svg.text(name, at=(x, FOOT + 33)))
    return pieces


def _value(value: float, *, spread: float, outcome: str, low: float, high: float) -> list[str]:
    colour = COLOUR[outcome]
    left, right = (svg.across(end, low=low, high=high, pad=0) for end in (value - spread, value + spread))
    pieces = [svg.line((left, MIDDLE), (right, MIDDLE), colour=colour, weight=2.5)]
    for end in (left, right):
        pieces.append(svg.line((end, MIDDLE - 6), (end, MIDDLE + 6), colour=colour, weight=2))
    at = (svg.across(value, low=low, high=high, pad=0), MIDDLE)
    sign = {
        "conforms": svg.dot(colour="ink"),
        "inconclusive": svg.shape(svg.TRIANGLE, colour="amber"),
        "does_not_conform": svg.stroke(svg.CROSS, colour="magenta", weight=3),
    }[outcome]
    return [*pieces, svg.place([sign], at=at)]


def _words(verdict: Mapping[str, Any], *, value: float, low: float, high: float) -> list[str]:
    x = svg.across(value, low=low, high=high, pad=0)
    anchor = "start" if svg.share_of(x) < 22 else "end" if svg.share_of(x) > 78 else "middle"
    pieces = [svg.text(f"{verdict['rounded']} after rounding", at=(x, 14), anchor=anchor, strong=True)]
    if verdict.get("probability") is not None:
        words = f"probability of conformity {writing.probability(verdict['probability'])}"
        pieces.append(svg.text(words, at=("50%", FOOT + 49)))
    return pieces


def _description(output: Mapping[str, Any], *, places: int) -> str:
    verdict = output["verdict"]
    bounds = (("lower", verdict["lower"]), ("upper", verdict["upper"]))
    limits = [
        f"{name} limit {writing.places(bound, digits=places)}" for name, bound in bounds if bound not in (None, "")
    ]
    words = writing.result(output["value"], expanded=output["U"], unit=output["unit"])
    return f"{words}; {', '.join(limits)}. {verdict['sentence']}"
