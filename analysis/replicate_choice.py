"""Which titrations count, by the method's policy, and what is not acceptable about them."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import Any

from analysis.replicates import concordant_set, spread
from analysis.titration_inputs import Titration, choice, positive

Inputs = Mapping[str, Any]


def titrations_that_count(
    inputs: Inputs, counted: Sequence[Titration], values: Mapping[int, float]
) -> tuple[list[Titration], list[str], str]:
    """The titrations that count by the method's policy, what is not acceptable about them, and how a tie went."""
    method = inputs["method"]
    policy = choice(method["policy"], ("concordance", "all"), name="Policy")
    limit_kind = choice(method["limit_kind"], ("range_mL", "rsd_percent"), name="Kind of limit")
    limit, needed = positive(method["limit"], name="Limit"), int(method["replicates_needed"])
    scaled = _titres_for_equal_amounts(counted)
    tie, inside = "", list(counted)
    if policy == "concordance" and limit_kind == "range_mL":
        found = concordant_set(scaled, limit=limit)
        inside, tie = [counted[place] for place in found.indices], found.tie_sentence
    reasons = [] if len(inside) >= needed else [_too_few(inside, counted, needed=needed, limit=limit, policy=policy)]
    if policy == "all" or limit_kind == "rsd_percent":
        reasons += _too_wide(inside, values, scaled, limit=limit, limit_kind=limit_kind)
    return inside, reasons, tie


def _titres_for_equal_amounts(counted: Sequence[Titration]) -> list[float]:
    """Titres as they would be for the first sample amount, so that weighed samples can be compared."""
    first = counted[0].amount or 1.0
    return [float(item.titre or 0.0) * first / (item.amount or first) for item in counted]


def _too_few(
    inside: Sequence[Titration], counted: Sequence[Titration], *, needed: int, limit: float, policy: str
) -> str:
    if policy == "concordance" and len(counted) >= needed:
        return f"{len(inside)} titres agree within {limit:g} mL, {needed} are needed. Titrate another."
    return f"{len(counted)} of {needed} titrations are complete. Titrate {needed - len(counted)} more."


def _too_wide(
    inside: Sequence[Titration],
    values: Mapping[int, float],
    scaled: Sequence[float],
    *,
    limit: float,
    limit_kind: str,
) -> list[str]:
    if len(inside) < 2:
        return []
    if limit_kind == "range_mL":
        width = spread(scaled).range
        return (
            [
                (
                    f"The titres range over {width:.3f} mL, up to {limit:g} "
                    "mL is accepted. Titrate another or find the cause."
                )
            ]
            if width > limit + 1e-9
            else []
        )
    rsd = spread([values[item.number] for item in inside]).rsd_percent or 0.0
    return (
        [f"The RSD is {rsd:.2f} %, up to {limit:g} % is accepted. Titrate another or find the cause."]
        if rsd > limit
        else []
    )
