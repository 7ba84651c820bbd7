"""From the bytes of a file to its text, and the name of the encoding that was found."""

from __future__ import annotations

import re

from labrecords.errors import Refused

MOST_BYTES = 5 * 1024 * 1024
ALTERNATIVES = "Export the table as CSV text and choose that file."
# The first bytes of files that are often chosen by mistake.
SIGNATURES = (
    (b"PK\x03\x04", "a spreadsheet workbook or another packed file"),
    (b"\xd0\xcf\x11\xe0", "an old spreadsheet workbook"),
    (b"%PDF", "a PDF document"),
    (b"\x89PNG", "a picture"),
    (b"\xff\xd8\xff", "a picture"),
    (b"GIF8", "a picture"),
    (b"\x1f\x8b", "a packed file"),
    (b"{\\rtf", "a word processor document"),
)
CONTROL = re.compile(r"[\x00-\x08\x0b\x0e-\x1f\x7f-\x9f]")


def refuse_size(size: int, *, name: str) -> None:
    """Refuse an empty or too large file by its size alone, before a byte of it is read."""
    if size == 0:
        raise Refused([f"File {name} is empty. Choose the file with the recorded table."])
    if size > MOST_BYTES:
        most = f"at most {_megabytes(MOST_BYTES)} MB are expected"
        raise Refused([f"File {name} has {_megabytes(size)} MB; {most}. Export fewer points of the curve."])


def decode(content: bytes, *, name: str) -> tuple[str, str]:
    """The text of a file and its encoding: by its byte order mark, else by trial."""
    for signature, what in SIGNATURES:
        if content.startswith(signature):
            raise Refused([f"File {name} is {what}; a text file is expected. {ALTERNATIVES}"])
    text, encoding = _decoded(content, name=name)
    text = text.removesuffix("\x1a")
    found = CONTROL.search(text)
    if found is not None:
        row = len(re.findall(r"\r\n?|\n", text[: found.start()])) + 1
        what = f"is no text: it has the control mark {ord(found[0]):#04x} in row {row}"
        raise Refused([f"File {name} {what}. A text file is expected. {ALTERNATIVES}"])
    return text, encoding


def _decoded(content: bytes, *, name: str) -> tuple[str, str]:
    codec, label, mark = _by_its_bytes(content)
    try:
        return content[mark:].decode(codec), label
    except UnicodeDecodeError as error:
        if codec != "utf-8" or mark:
            damaged = f"is {label} by its first bytes, but damaged at byte {error.start + mark + 1}"
            raise Refused([f"File {name} {damaged}. Export it again."]) from error
    if re.search(rb"[\x00-\x08\x0e-\x19\x1b-\x1f]", content):
        raise Refused([f"File {name} is no text but binary. A text file is expected. {ALTERNATIVES}"])
    try:
        return content.decode("cp1252"), "Windows-1252"
    except UnicodeDecodeError as error:
        raise Refused(
            [f"File {name} is text in no known encoding (byte {error.start + 1}). Save it as UTF-8."]
        ) from error


def _by_its_bytes(content: bytes) -> tuple[str, str, int]:
    if content.startswith(b"\xef\xbb\xbf"):
        return "utf-8", "UTF-8 with byte order mark", 3
    if content.startswith(b"\xff\xfe"):
        return "utf-16-le", "UTF-16 LE with byte order mark", 2
    if content.startswith(b"\xfe\xff"):
        return "utf-16-be", "UTF-16 BE with byte order mark", 2
    start = content[:4096]
    even, odd = start[0::2].count(0), start[1::2].count(0)
    # Plain digits and marks in UTF-16 have a zero in every second byte.
    if odd > len(start) / 5 and even * 10 < odd:
        return "utf-16-le", "UTF-16 LE", 0
    if even > len(start) / 5 and odd * 10 < even:
        return "utf-16-be", "UTF-16 BE", 0
    return "utf-8", "UTF-8", 0


def _megabytes(size: int) -> str:
    return f"{size / 1024 / 1024:.1f}".removesuffix(".0")
