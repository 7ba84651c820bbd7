"""Small SVG pieces for the marks: text keeps its size while the mark fills its box.

Every colour is an attribute (a mark stands alone on paper) and a class (a page may turn dark).
Positions across are per cent of the width, positions down are pixels.
"""

from __future__ import annotations

from collections.abc import Iterable
from html import escape

from django.utils.safestring import SafeString, mark_safe

FACE = "Inter, Segoe UI, Helvetica Neue, Liberation Sans, Arial, sans-serif"
COLOURS = {
    "ink": "#1b2422",
    "ink-2": "#47514d",
    "quiet": "#5c6662",
    "rule": "#838882",
    "soft": "#eae8df",
    "sheet": "#ffffff",
    "teal": "#0b6365",
    "teal-wash": "#e2f0ee",
    "hatch": "#9dbcb9",
    "amber": "#855000",
    "magenta": "#9c1257",
}
TRIANGLE = "M0 -6L6 5H-6Z"
CROSS = "M-5 -5L5 5M-5 5L5 -5"


def document(
    pieces: Iterable[str],
    *,
    title: str,
    description: str,
    height: int,
    width: int | None = None,
    css_class: str = "",
    role: str = "img",
) -> SafeString:
    """One drawing, told in words to who cannot see it; ``role`` is "group" where it holds links."""
    head = (
        f'<svg xmlns="http://www.w3.org/2000/svg" class="{f"mark {css_class}".strip()}" role="{role}" '
        f'width="{width or "100%"}" height="{height}" aria-label="{escape(f"{title}. {description}")}" '
        f'font-family="{FACE}" font-size="12">'
        f"<title>{escape(title)}</title><desc>{escape(description)}</desc>"
    )
    return mark_safe(f"{head}{''.join(pieces)}</svg>")  # every text piece is escaped where it is made


def line(start: tuple[str, float], end: tuple[str, float], *, colour: str = "rule", weight: float = 1) -> str:
    (x1, y1), (x2, y2) = start, end
    return f'<line x1="{x1}" y1="{y1:g}" x2="{x2}" y2="{y2:g}" {_drawn(colour, weight=weight)}/>'


def box(left: str, top: float, *, width: str, height: float, colour: str, rounded: float = 0) -> str:
    corner = f'rx="{rounded:g}" ' if rounded else ""
    return f'<rect x="{left}" y="{top:g}" width="{width}" height="{height:g}" {corner}{_filled(colour)}/>'


def text(words: str, *, at: tuple[str, float], anchor: str = "middle", strong: bool = False) -> str:
    """Words at a place, heavier where they are a number to read first."""
    fill = COLOURS["ink" if strong else "ink-2"]
    look = f'class="strong" font-weight="650" fill="{fill}"' if strong else f'fill="{fill}"'
    return f'<text x="{at[0]}" y="{at[1]:g}" text-anchor="{anchor}" {look}>{escape(words)}</text>'


def place(pieces: Iterable[str], *, at: tuple[str, float]) -> str:
    """Pieces drawn in pixels around one place of the scale."""
    return f'<svg x="{at[0]}" y="{at[1]:g}" width="1" height="1" overflow="visible">{"".join(pieces)}</svg>'


def dot(*, radius: float = 5.5, colour: str = "teal") -> str:
    return f'<circle r="{radius:g}" {_filled(colour)}/>'


def ring(*, radius: float = 5, colour: str = "quiet") -> str:
    return f'<circle r="{radius:g}" {_drawn(colour, weight=1.6)}/>'


def shape(path: str, *, colour: str) -> str:
    return f'<path d="{path}" {_filled(colour)}/>'


def stroke(path: str, *, colour: str, weight: float = 1.5) -> str:
    return f'<path d="{path}" {_drawn(colour, weight=weight)}/>'


def across(value: float, *, low: float, high: float, pad: float = 6.0) -> str:
    """Where ``value`` is on a scale from ``low`` to ``high``, as per cent of the width."""
    span = high - low
    share = 0.5 if span <= 0 else (value - low) / span
    return f"{pad + share * (100 - 2 * pad):.2f}%"


def share_of(place_across: str) -> float:
    """The number of a place across."""
    return float(place_across.removesuffix("%"))


def _filled(colour: str) -> str:
    return f'class="fill-{colour}" fill="{COLOURS[colour]}"'


def _drawn(colour: str, *, weight: float) -> str:
    return f'class="line-{colour}" fill="none" stroke="{COLOURS[colour]}" stroke-width="{weight:g}"'
