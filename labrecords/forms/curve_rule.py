"""How a recorded curve is evaluated, as it is typed for methods and titrants."""

from __future__ import annotations

from typing import Any

from django import forms

from labrecords.rules.method import FAMILIES as KNOWN

FAMILIES = [("", "none"), *((name, name) for name in KNOWN)]
HINT = (
    'such as {"kind": "acid_base", "titrant": "base", '
    '"analytes": [{"name": "acetic acid", "pKa": [4.756], "charge": 0}]}'
)


class ChemistryField(forms.JSONField):
    """The analytes and constants of the model, as JSON."""

    def __init__(self, **options: Any) -> None:
        super().__init__(help_text=HINT, **options)
        self.error_messages["invalid"] = f"{self.label}: this is no JSON; an object such as the one below is expected."
