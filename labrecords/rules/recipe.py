"""Whether a run can be worked and its result be told by the numbers of a recipe."""

from __future__ import annotations

from decimal import Decimal

from labrecords.models import EndpointRule, MethodVersion
from labrecords.queries.chemistry import objections_to_unit
from labrecords.rules.number import plain

MOST_PLACES = 8
MOST_ENDPOINTS = 10
UNITS = {"volume": "mL", "mass": "g"}


def objections_to_working(version: MethodVersion) -> list[str]:
    """What is pipetted, weighed and diluted must be something."""
    found = []
    expected = UNITS.get(version.sample_by)
    if expected is not None and version.sample_unit != expected:
        found.append(f"Sample unit is {version.sample_unit}; a sample by {version.sample_by} is in {expected}.")
    if version.excess_volume is not None and version.excess_volume <= 0:
        found.append(f"Excess volume is {plain(version.excess_volume)} mL: a number above 0.")
    for place, step in enumerate(version.dilutions, start=1):
        flask, aliquot = Decimal(step["flask"]), Decimal(step["aliquot"])
        if not 0 < aliquot <= flask:
            found.append(
                f"Dilution {place} takes {plain(aliquot)} mL from a flask of {plain(flask)} mL: "
                "above 0 and no more than the flask holds."
            )
    return found


def objections_to_result(version: MethodVersion) -> list[str]:
    """The unit belongs to the quantity, and the decimals are some that can be printed."""
    found = objections_to_unit(version.unit, quantity=version.quantity, formula=version.expressed_as.formula)
    return found + objections_to_places(version.places)


def objections_to_places(places: int) -> list[str]:
    """Decimals that can be printed."""
    if 0 <= places <= MOST_PLACES:
        return []
    return [f"Places is {places}: decimals from 0 to {MOST_PLACES} are expected."]


def objections_to_indicator(rule: EndpointRule) -> list[str]:
    """An indicator changes near equivalence, with an uncertainty that is none below zero."""
    bias, uncertainty = Decimal(rule.indicator_bias), Decimal(rule.indicator_u)
    if abs(bias) <= 1 and 0 <= uncertainty <= 1:
        return []
    return [
        f"Indicator is {plain(bias)} mL past equivalence with u {plain(uncertainty)} mL; "
        "within 1 mL, u not below 0, is expected."
    ]


def objections_to_counts(rule: EndpointRule) -> list[str]:
    """The endpoint that counts is one of those that are expected."""
    expected, chosen = rule.endpoints_expected, rule.endpoint_chosen
    found = []
    if not 1 <= expected <= MOST_ENDPOINTS:
        found.append(f"Endpoints expected is {expected}: from 1 to {MOST_ENDPOINTS}.")
    if not 1 <= chosen <= max(expected, 1):
        found.append(f"The one that counts is {chosen}, of {expected} expected: one of them counts.")
    if rule.initial_volume is not None and rule.initial_volume <= 0:
        found.append(f"Volume at the start is {plain(rule.initial_volume)} mL: above 0, or left empty.")
    return found
