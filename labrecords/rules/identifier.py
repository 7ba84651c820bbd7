"""Numbers and codes that people give: they stand on labels, in addresses and in sentences."""

from __future__ import annotations

import re
from collections.abc import Iterable

from labrecords.rules.number import shown

IDENTIFIER = re.compile(r"[^\W_](?:[\w .+-]*[\w+])?")
# Words that addresses use themselves: a record of that name could not be opened.
TAKEN_BY_ADDRESSES = {
    "record",
    "start",
    "password",
    "certificates",
    "versions",
    "specifications",
    "export",
    "integrity",
}


def objections_to_identifier(text: str, *, field: str, known: Iterable[str]) -> list[str]:
    """Letters, digits, dots, hyphens, and not one that is known already, however it is capitalised."""
    if not text.strip():
        return [f"{field} is empty: write what stands on the label."]
    if not IDENTIFIER.fullmatch(text):
        return [
            f"{field} is {shown(text)}: letters, digits, spaces, dots, hyphens and plus signs are expected, "
            "a letter or digit first."
        ]
    if text.casefold() in TAKEN_BY_ADDRESSES:
        return [f"{field} is {shown(text)}, a word that the site uses itself. Choose another."]
    same = next((other for other in known if other.casefold() == text.casefold()), None)
    if same is not None:
        return [f"{field}: {same} is recorded already. Open it, or choose another."]
    return []
