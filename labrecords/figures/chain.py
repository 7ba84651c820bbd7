"""Chain: linked records left to right, with who and when under each."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from html import escape
from typing import Any

from django.utils.safestring import SafeString

from labrecords.figures import svg

STEP, BOX, HIGH = 204, 172, 48
LONGEST = 25
MARKS = {
    "teal": "M-4 0L-1 3.5L5 -4",
    "amber": svg.TRIANGLE,
    "magenta": svg.CROSS,
}
GOOD = ("approved", "in use", "effective", "released", "in force", "conforms")
OUT = ("void", "withdrawn", "rejected", "expired")
PERSON = ("in question", "on hold", "submitted", "quarantined")


def chain(links: Sequence[Mapping[str, Any]]) -> SafeString:
    """Records from the certificate to the result: each link a number, a title, a state, who and when."""
    pieces = []
    for index, link in enumerate(links):
        left = 2 + index * STEP
        if index:
            pieces.append(_join(left))
        pieces.append(_link(link, left=left))
    return svg.document(
        pieces,
        title="Chain of records",
        description=_description(links),
        height=106,
        width=max(1, len(links)) * STEP - (STEP - BOX) + 4,
        css_class="chain",
        role="group",
    )


def _join(left: int) -> str:
    start, end, y = left - (STEP - BOX), left, 8 + HIGH / 2
    arrow = f"M{start} {y:g}H{end - 2}M{end - 8} {y - 4:g}L{end - 2} {y:g}L{end - 8} {y + 4:g}"
    return svg.stroke(arrow, colour="rule", weight=1.5)


def _link(link: Mapping[str, Any], *, left: int) -> str:
    frame = (
        f'<rect x="{left}" y="8" width="{BOX}" height="{HIGH}" rx="4" class="box fill-sheet line-rule" '
        f'fill="{svg.COLOURS["sheet"]}" stroke="{svg.COLOURS["rule"]}"/>'
    )
    words = [
        svg.text(_short(link["number"]), at=(str(left + 12), 28), anchor="start", strong=True),
        svg.text(_short(link["title"]), at=(str(left + 12), 46), anchor="start"),
        svg.text(_short(link.get("who", "")), at=(str(left + 2), 74), anchor="start"),
        svg.text(_short(link.get("when", "")), at=(str(left + 2), 91), anchor="start"),
    ]
    drawn = frame + "".join(words) + _mark(str(link.get("state", "")), left=left)
    if not link.get("url"):
        return drawn
    return f'<a href="{escape(link["url"])}">{drawn}</a>'


def _mark(state: str, *, left: int) -> str:
    """The sign of a state in the corner of its box; the words are in the title for pointer and reader."""
    colour = "teal" if state in GOOD else "magenta" if state in OUT else "amber" if state in PERSON else ""
    if not colour:
        return ""
    shape = svg.stroke(MARKS[colour], colour=colour, weight=2)
    return svg.place([f"<g><title>{escape(state)}</title>{shape}</g>"], at=(str(left + BOX - 14), 24))


def _short(words: Any) -> str:
    told = str(words)
    return told if len(told) <= LONGEST else f"{told[: LONGEST - 1].rstrip()}…"


def _description(links: Sequence[Mapping[str, Any]]) -> str:
    told = []
    for link in links:
        parts = [link.get(name, "") for name in ("number", "title", "state", "who", "when")]
        told.append(", ".join(str(part) for part in parts if part))
    return ("; then ".join(told) or "No record is linked yet") + "."
