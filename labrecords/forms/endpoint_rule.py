"""How titrations are read, as it is typed for methods and titrants alike."""

from __future__ import annotations

from typing import Any

from django import forms

from labrecords.forms.fields import NumberField
from labrecords.forms.register import GroupedForm
from labrecords.queries.chemistry import FAMILIES as KNOWN
from labrecords.rules.number import parse_number, shown

FAMILIES = [("", "none"), *((name, name) for name in KNOWN)]
ENDPOINT = (
    "endpoint", "indicator", "indicator_bias", "indicator_u", "curve_quantity", "deciding_family", "checking_family",
    "agreement_limit", "fixed_reading", "first_fixed_reading", "endpoints_expected", "endpoint_chosen",
    "initial_volume", "system",
)  # fmt: skip
COUNTING = ("blanks_needed", "replicates_needed", "policy", "limit", "limit_kind")
CORRECTIONS = (
    "temperature_correction", "expands_like", "temperature_within", "drift_u", "buoyancy", "sample_density", "coverage",
)  # fmt: skip
HINT = (
    "first line the kind and the titrant: acid_base by base, acid_base by acid, precipitation by silver, redox by "
    "oxidant, complex by ligand ...; then one line for each substance, such as acetic acid: pKa 4.756, or hydrogen "
    "phthalate: pKa 2.950 5.408, lost 1, or chloride: charge -1, pKs 9.752; then settings, such as carbonate 0.001, "
    "activity no, titrant_potential 1440"
)
OF_SUBSTANCE = ("pKa", "charge", "lost", "pKs", "log_K", "potential", "electrons")
SETTINGS = ("carbonate", "activity", "temperature", "background", "titrant_potential", "titrant_electrons")
WHOLE = ("charge", "lost", "electrons", "titrant_electrons")


class ChemistryField(forms.CharField):
    """The substances and constants that the model fits, line by line; None where nothing is typed."""

    def __init__(self, **options: Any) -> None:
        options.setdefault("widget", forms.Textarea(attrs={"rows": 4}))
        super().__init__(required=False, help_text=HINT, **options)

    def prepare_value(self, value: Any) -> Any:
        """The lines again, from what is stored."""
        if not isinstance(value, dict):
            return value or ""
        settings = [f"{key} {_written(value[key])}" for key in SETTINGS if value.get(key) not in (None, "")]
        substances = [f"{item['name']}: {_constants(item)}" for item in value["analytes"]]
        return "\n".join([f"{value['kind']} by {value['titrant']}", *substances, *settings])

    def clean(self, value: Any) -> dict[str, Any] | None:
        """The chemistry as plain data, or ValidationError with the sentence."""
        lines = [line.strip() for line in (super().clean(value) or "").splitlines() if line.strip()]
        if not lines:
            return None
        kind, by, titrant = lines[0].partition(" by ")
        if not by:
            raise self._odd(1, lines[0], "the kind and the titrant, such as acid_base by base,")
        found: dict[str, Any] = {"kind": kind.strip(), "titrant": titrant.strip(), "analytes": []}
        for place, line in enumerate(lines[1:], start=2):
            name, colon, constants = line.partition(":")
            if colon:
                found["analytes"].append({"name": name.strip(), **self._constants(constants, place)})
            else:
                found |= self._named(line, place, SETTINGS)
        return found

    def _constants(self, text: str, place: int) -> dict[str, Any]:
        found: dict[str, Any] = {"pKa": []}
        for part in (part.strip() for part in text.split(",")):
            if part:
                found |= self._named(part, place, OF_SUBSTANCE)
        return found

    def _named(self, text: str, place: int, known: tuple[str, ...]) -> dict[str, Any]:
        name, _, rest = text.partition(" ")
        if name not in known or not rest.strip():
            raise self._odd(place, text, f"one of {', '.join(known)}, and its value,")
        if name == "activity":
            return {name: rest.strip().lower() in ("yes", "true", "1", "on")}
        try:
            numbers = [parse_number(word, field=f"{self.label}, line {place}, {name}") for word in rest.split()]
        except ValueError as problem:
            raise forms.ValidationError(str(problem)) from problem
        if name == "pKa":
            return {name: [float(number) for number in numbers]}
        if len(numbers) != 1 or (name in WHOLE and numbers[0] != int(numbers[0])):
            raise self._odd(place, text, f"{name} and one {'whole ' if name in WHOLE else ''}number")
        return {name: int(numbers[0]) if name in WHOLE else float(numbers[0])}

    def _odd(self, place: int, text: str, expected: str) -> forms.ValidationError:
        return forms.ValidationError(f"{self.label}, line {place} is {shown(text)}; {expected} is expected.")


class EndpointRuleForm(GroupedForm):
    """What methods and titrants ask with the same words about curves and volumes."""

    fixed_reading = NumberField(label="Fixed pH or mV", required=False)
    agreement_limit = NumberField(
        label="Families may differ by", initial="3", help_text="combined standard uncertainties; more needs a person"
    )
    system = ChemistryField(label="Chemistry for the model")
    initial_volume = NumberField(label="Volume in the vessel at the start, mL", required=False)
    temperature_correction = forms.BooleanField(label="Volumes are corrected to 20 °C", required=False)
    temperature_within = NumberField(
        label="Temperature known within, °C", initial="4",
        help_text="about the temperature read, or about 20 °C where volumes are not corrected",
    )  # fmt: skip
    drift_u = NumberField(
        label="u of the drift, µL/min", required=False, help_text="titres are then corrected for drift over their time"
    )


def _constants(item: dict[str, Any]) -> str:
    words = ["pKa " + " ".join(f"{value}" for value in item["pKa"])] if item.get("pKa") else []
    return ", ".join(words + [f"{key} {item[key]}" for key in OF_SUBSTANCE[1:] if item.get(key) is not None])


def _written(value: Any) -> str:
    return {True: "yes", False: "no"}[value] if isinstance(value, bool) else str(value)
