"""Substances: recorded with the molar mass that the formula gives, and superseded."""

from __future__ import annotations

from collections.abc import Sequence
from decimal import Decimal

from django.db import transaction

from analysis.substance import molar_mass
from labrecords.errors import Refused, refuse_if
from labrecords.models import Substance, User
from labrecords.rules.review import objections_to_reason
from labrecords.rules.substance import (
    objections_to_recording_substance,
    objections_to_superseding_substance,
)
from labrecords.services import audit
from labrecords.services.number import reserve_name


@transaction.atomic(durable=True)
def record_substance(
    *, by: User, name: str, formula: str, hazards: Sequence[str] = (), density: Decimal | None = None
) -> Substance:
    """Record a substance; its molar mass comes from the formula and the named edition of atomic weights."""
    substance = _computed(name, formula=formula, hazards=hazards, density=density)
    reserve_name("substance", name)
    refuse_if(objections_to_recording_substance(substance, by=by))
    with audit.event("substance.record", by=by, subject=name):
        substance.save()
    return substance


@transaction.atomic(durable=True)
def supersede_substance(
    substance: Substance, *, by: User, name: str, formula: str, hazards: Sequence[str],
    density: Decimal | None,
    reason: str,
) -> Substance:  # fmt: skip
    """Replace a substance by a new entry; the old one stays with what rests on it."""
    substance = _locked(substance)
    successor = _computed(name, formula=formula, hazards=hazards, density=density)
    reserve_name("substance", name)
    refuse_if(
        [
            *objections_to_superseding_substance(substance, by=by),
            *objections_to_recording_substance(successor, by=by),
            *objections_to_reason(reason, what="the substance is superseded"),
        ]
    )
    with audit.event("substance.supersede", by=by, subject=substance.name, reason=reason):
        successor.save()
        substance.superseded_by = successor
        substance.save(update_fields=["superseded_by"])
    return successor


def _locked(substance: Substance) -> Substance:
    found = Substance.objects.select_for_update(of=("self",)).select_related("superseded_by")
    return found.get(pk=substance.pk)


def _computed(name: str, *, formula: str, hazards: Sequence[str], density: Decimal | None) -> Substance:
    try:
        mass = molar_mass(formula)
    except ValueError as problem:
        raise Refused([str(problem)]) from problem
    return Substance(
        name=name, formula=formula, molar_mass=mass.value, molar_mass_u=mass.standard_uncertainty,
        atomic_weights_edition=mass.edition, hazards=list(hazards), density=density,
    )  # fmt: skip
