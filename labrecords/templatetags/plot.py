"""``{% load plot %}{% plot figure "label" %}``: a figure to explore, with the same numbers as a table."""

from __future__ import annotations

import json
from typing import Any

from django import template
from django.utils.safestring import SafeString, mark_safe

register = template.Library()

ESCAPES = {ord("<"): "\\u003C", ord(">"): "\\u003E", ord("&"): "\\u0026"}


@register.inclusion_tag("components/_plot.html")
def plot(figure: Any, label: str, short: bool = False) -> dict[str, Any]:
    """The place, the data and the table of one Plotly figure."""
    table = (figure.layout.meta or {}) if figure.layout.meta else {}
    return {
        "label": label,
        "short": short,
        "json": as_json(figure),
        "columns": table.get("columns", ()),
        "rows": table.get("rows", ()),
    }


def as_json(figure: Any) -> SafeString:
    """The figure as JSON that cannot close the element it stands in."""
    stored = json.loads(figure.to_json())
    stored["layout"].pop("template", None)
    text = json.dumps(stored, separators=(",", ":"))
    return mark_safe(text.translate(ESCAPES))  # every character that HTML reads is escaped above
