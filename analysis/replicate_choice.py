"""Which titrations count, by the method's policy, and what is not acceptable about them."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import Any

from analysis.replicates import concordant_set, spread
from analysis.titration_inputs import Titration, choice, positive

Inputs = Mapping[str, Any]


def titrations_that_count(
    inputs: Inputs, counted: Sequence[Titration], values: Mapping[int, float], *, blank: float | None
) -> tuple[list[Titration], list[str], str]:
    """The titrations that count by the method's policy, what is not acceptable about them, and how a tie went."""
    method = inputs["method"]
    policy = choice(method["policy"], ("concordance", "all"), name="Policy")
    limit_kind = choice(method["limit_kind"], ("range_mL", "rsd_percent"), name="Kind of limit")
    limit, needed = positive(method["limit"], name="Limit"), int(method["replicates_needed"])
    scaled = _titres_for_equal_amounts(inputs, counted, blank)
    tie, inside = "", list(counted)
    if policy == "concordance" and limit_kind == "range_mL":
        found = concordant_set(scaled, limit=limit)
        inside, tie = [counted[place] for place in found.indices], found.tie_sentence
    reasons = [] if len(inside) >= needed else [_too_few(inside, counted, needed=needed, limit=limit, policy=policy)]
    if policy == "all" or limit_kind == "rsd_percent":
        reasons += _too_wide(inside, values, scaled, limit=limit, limit_kind=limit_kind)
    return inside, reasons, tie


def _titres_for_equal_amounts(
    inputs: Inputs, counted: Sequence[Titration], blank: float | None
) -> list[float]:  # fmt: skip
    """Titres, or where the amounts differ what each sample took, as it would be for the first amount [mL]."""
    titres = [float(item.titre or 0.0) for item in counted]
    amounts = [item.amount or 1.0 for item in counted]
    if max(amounts) == min(amounts):
        return titres
    taken = [_taken(inputs, titre, blank or 0.0) for titre in titres]
    return [volume * amounts[0] / amount for volume, amount in zip(taken, amounts, strict=True)]


def _taken(inputs: Inputs, titre: float, blank: float) -> float:
    """Volume of titrant [mL] that answers to the sample itself: only that grows with its amount."""
    kind = inputs["method"].get("titration", "direct")
    if kind == "blank_difference":
        return blank - titre
    if kind == "direct":
        return titre - blank
    excess = inputs["excess"]
    added = positive(excess["concentration"], name=f"Concentration of lot {excess['lot']}")
    added *= positive(excess["volume"], name="Excess volume")
    titrant = inputs["titrant"]
    return added / positive(titrant["concentration"], name=f"Concentration of lot {titrant['lot']}") - (titre - blank)


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
