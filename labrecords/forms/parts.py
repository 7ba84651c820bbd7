"""Further results of a method, as lines of text."""

from __future__ import annotations

from typing import Any

from django import forms

from labrecords.models import Substance
from labrecords.rules.number import shown

HINT = (
    "one line each: name; what it takes; substance it is expressed as; ratio. Such as: carbonate; carbonate; calcium "
    "carbonate; 1/2. It takes first, second, second less first, second less twice first, or of an alkalinity "
    "hydroxide, carbonate, hydrogen carbonate."
)


class PartsField(forms.CharField):
    """Lines of name, what is taken, substance and ratio; the molar mass is that of the register today."""

    def __init__(self, **options: Any) -> None:
        options.setdefault("widget", forms.Textarea(attrs={"rows": 3}))
        super().__init__(required=False, help_text=HINT, **options)

    def prepare_value(self, value: Any) -> Any:
        """The lines again, from what is stored."""
        if not isinstance(value, list):
            return value
        return "\n".join("; ".join(part[key] for key in ("name", "takes", "substance", "ratio")) for part in value)

    def clean(self, value: Any) -> list[dict[str, str]]:
        """The parts, or ValidationError with the sentence."""
        lines = [line.strip() for line in (super().clean(value) or "").splitlines()]
        return [self._part(line, place) for place, line in enumerate((line for line in lines if line), start=1)]

    def _part(self, line: str, place: int) -> dict[str, str]:
        words = [word.strip() for word in line.split(";")]
        if len(words) != 4 or not all(words):
            raise forms.ValidationError(
                f"{self.label}, line {place} is {shown(line)}; name; what it takes; substance; ratio are expected."
            )
        name, takes, known, ratio = words
        substance = Substance.objects.filter(name__iexact=known, superseded_by=None).first()
        if substance is None:
            raise forms.ValidationError(
                f"{self.label}, line {place}: {shown(known)} is no substance of the register. Record it first."
            )
        return {
            "name": name, "takes": takes.lower(), "ratio": ratio, "substance": substance.name,
            "formula": substance.formula, "molar_mass": repr(substance.molar_mass), "u": repr(substance.molar_mass_u),
        }  # fmt: skip
