"""Choosing what a run or a standardization rests on."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from decimal import Decimal

from django import forms

from labrecords.models import Instrument, ReferenceStandard, TitrantLot


class StartForm(forms.Form):
    """One choice per part; the fields are made from the parts a method needs.

    A bottle or an instrument may be scanned: every choice also takes the number as typed in its box.
    """

    def __init__(
        self,
        data: Mapping[str, str] | None = None,
        *,
        parts: Mapping[str, Decimal | None],
        instruments: Mapping[str, Sequence[Instrument]],
        lots: Mapping[str, Sequence[TitrantLot]],
        standards: Sequence[ReferenceStandard] = (),
        needs_standard: bool = False,
    ) -> None:
        super().__init__(data)
        for name, choices in lots.items():
            self.fields[name] = _choice(name, [(lot.number, f"{lot.number}, {lot.titrant.name}") for lot in choices])
        if needs_standard:
            self.fields["reference standard"] = _choice(
                "reference standard",
                [(item.number, f"{item.number}, {item.substance.name}") for item in standards],
            )
        for part in parts:
            self.fields[part] = _choice(
                part,
                [(item.identifier, f"{item.identifier}, {item.description}") for item in instruments[part]],
            )
        self._instruments = {item.identifier: item for items in instruments.values() for item in items}
        self._lots = {lot.number: lot for items in lots.values() for lot in items}
        self._standards = {item.number: item for item in standards}
        self._parts = list(parts)

    def chosen_instruments(self) -> dict[str, Instrument]:
        """The instrument of each part."""
        return {part: self._instruments[self.cleaned_data[part]] for part in self._parts if self.cleaned_data.get(part)}

    def chosen_lot(self, name: str) -> TitrantLot | None:
        """The lot chosen in a field, or None where the form has no such field."""
        return self._lots.get(self.cleaned_data.get(name, ""))

    def chosen_standard(self) -> ReferenceStandard | None:
        """The reference standard chosen, or None."""
        return self._standards.get(self.cleaned_data.get("reference standard", ""))


def _choice(name: str, choices: list[tuple[str, str]]) -> forms.ChoiceField:
    label = name.capitalize()
    return forms.ChoiceField(
        choices=choices,
        label=label,
        error_messages={
            "required": f"{label}: nothing is chosen; choose one of the list.",
            "invalid_choice": f"{label} %(value)s is not one that may be used here; choose one of the list.",
        },
    )
