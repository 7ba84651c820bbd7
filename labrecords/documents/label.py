"""Labels of bottles: the number as a QR code that the find field understands."""

from __future__ import annotations

import io

import segno
from django.utils.safestring import SafeString, mark_safe


def label_code(number: str) -> SafeString:
    """A QR code of a number as SVG, without colours or styles of its own."""
    out = io.BytesIO()
    segno.make_qr(number, error="m").save(  # never the micro form, which few scanners read
        out, kind="svg", xmldecl=False, svgns=True, omitsize=True, border=4, svgclass="code", lineclass=None
    )
    return mark_safe(out.getvalue().decode())  # segno writes the path from the number alone
