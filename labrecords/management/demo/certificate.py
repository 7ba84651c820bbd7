"""A certificate of a reference standard as a small PDF, invented like the rest of the demo."""

from __future__ import annotations

from datetime import date


def certificate_pdf(number: str, *, substance: str, purity: str, expanded: str, day: date) -> bytes:
    """One page of plain text as a PDF 1.4 file."""
    lines = [
        "CERTIFICATE OF A REFERENCE STANDARD (invented, for the demonstration only)",
        f"Standard {number}: {substance}",
        f"Mass fraction {purity} +/- {expanded} (k = 2)",
        f"Issued {day:%d %b %Y} by an invented producer",
    ]
    text = " ".join(f"({line}) Tj 0 -28 Td" for line in lines)
    stream = f"BT /F1 13 Tf 60 760 Td {text} ET".encode("latin-1", "replace")
    objects = [
        b"<< /Type /Catalog /Pages 2 0 R >>",
        b"<< /Type /Pages /Kids [3 0 R] /Count 1 >>",
        b"<< /Type /Page /Parent 2 0 R /MediaBox [0 0 595 842] /Contents 4 0 R"
        b" /Resources << /Font << /F1 5 0 R >> >> >>",
        b"<< /Length %d >>\nstream\n%s\nendstream" % (len(stream), stream),
        b"<< /Type /Font /Subtype /Type1 /BaseFont /Helvetica >>",
    ]
    body, places = b"%PDF-1.4\n", []
    for position, content in enumerate(objects, start=1):
        places.append(len(body))
        body += b"%d 0 obj\n%s\nendobj\n" % (position, content)
    table = b"".join(b"%010d 00000 n \n" % place for place in places)
    start = len(body)
    return body + (
        b"xref\n0 6\n0000000000 65535 f \n%strailer\n<< /Size 6 /Root 1 0 R >>\nstartxref\n%d\n%%%%EOF\n"
        % (table, start)
    )
