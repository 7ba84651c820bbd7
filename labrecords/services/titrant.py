"""Titrants and their lots: recorded, withdrawn, superseded."""

from __future__ import annotations

from datetime import date, timedelta
from decimal import Decimal
from typing import Any

from django.db import transaction
from django.utils import timezone

from labrecords.errors import refuse_if
from labrecords.models import LotState, Meaning, Titrant, TitrantLot, User
from labrecords.rules.review import objections_to_reason
from labrecords.rules.titrant_register import (
    objections_to_expiring_lot,
    objections_to_recording_lot,
    objections_to_recording_titrant,
    objections_to_superseding_titrant,
    objections_to_withdrawing_lot,
)
from labrecords.services import audit
from labrecords.services.number import reserve_name
from labrecords.services.question import raise_questions_on
from labrecords.services.signature import Credentials, sign


@transaction.atomic(durable=True)
def record_titrant(*, by: User, **rule: Any) -> Titrant:
    """Record a kind of solution with its window, intervals and the rule of its standardization."""
    titrant = Titrant(**rule)
    reserve_name("titrant", titrant.code)
    refuse_if(objections_to_recording_titrant(titrant, by=by))
    with audit.event("titrant.record", by=by, subject=titrant.code):
        titrant.save()
    return titrant


@transaction.atomic(durable=True)
def supersede_titrant(titrant: Titrant, *, by: User, reason: str, **rule: Any) -> Titrant:
    """Replace a titrant's rule by a new entry under a new code; lots keep the one they were made under."""
    titrant = Titrant.objects.select_for_update(of=("self",)).select_related("superseded_by").get(pk=titrant.pk)
    successor = Titrant(**rule)
    reserve_name("titrant", successor.code)
    refuse_if(
        [
            *objections_to_superseding_titrant(titrant, by=by),
            *objections_to_recording_titrant(successor, by=by),
            *objections_to_reason(reason, what="the titrant is superseded"),
        ]
    )
    with audit.event("titrant.supersede", by=by, subject=titrant.code, reason=reason):
        successor.save()
        titrant.superseded_by = successor
        titrant.save(update_fields=["superseded_by"])
    return successor


@transaction.atomic(durable=True)
def record_lot(
    titrant: Titrant, *, by: User, number: str, prepared_on: date, prepared_by: User, reagent_lot: str,
    volume: Decimal,
    expires_on: date | None = None,
) -> TitrantLot:  # fmt: skip
    """Record a bottle or tank; it stays in quarantine until its first standardization is approved."""
    lot = TitrantLot(
        titrant=titrant, number=number, prepared_on=prepared_on, prepared_by=prepared_by,
        reagent_lot=reagent_lot,
        volume=volume, expires_on=expires_on or prepared_on + timedelta(days=titrant.shelf_life_days),
    )  # fmt: skip
    reserve_name("titrant_lot", number)
    with audit.event("titrant_lot.record", by=by, subject=number) as event:
        refuse_if(objections_to_recording_lot(lot, by=by, today=timezone.localtime(event.at).date()))
        lot.save()
    return lot


@transaction.atomic(durable=True)
def withdraw_lot(lot: TitrantLot, *, by: User, credentials: Credentials, reason: str, is_doubtful: bool) -> TitrantLot:
    """Take a lot out of use; when it is doubtful, everything that rests on it is put in question."""
    lot = TitrantLot.objects.select_for_update(of=("self",)).select_related("titrant").get(pk=lot.pk)
    refuse_if(
        [
            *objections_to_withdrawing_lot(lot, by=by),
            *objections_to_reason(reason, what="the lot is withdrawn"),
        ]
    )
    with audit.event("titrant_lot.withdraw", by=by, subject=lot.number, reason=reason):
        lot.state, lot.withdrawn_reason = LotState.WITHDRAWN, reason
        lot.save(update_fields=["state", "withdrawn_reason"])
        sign(
            Meaning.WITHDRAWN, by=by, credentials=credentials, noun="titrant_lot", record_id=lot.pk,
            number=lot.number,
            content={"noun": "titrant_lot", "number": lot.number, "titrant": lot.titrant.code,
            "reason": reason},
            reason=reason, zone=timezone.get_current_timezone_name(),
        )  # fmt: skip
        if is_doubtful:
            ids = list(lot.standardizations.values_list("pk", flat=True))
            raise_questions_on(ids, because=f"Titrant lot {lot.number} is withdrawn: {reason}", by=by)
    return lot


@transaction.atomic(durable=True)
def expire_lot(lot: TitrantLot, *, by: User) -> TitrantLot:
    """Mark a lot whose shelf life is over; what was done with it in time stays good."""
    lot = TitrantLot.objects.select_for_update().get(pk=lot.pk)
    with audit.event("titrant_lot.expire", by=by, subject=lot.number) as event:
        refuse_if(objections_to_expiring_lot(lot, by=by, today=timezone.localtime(event.at).date()))
        lot.state = LotState.EXPIRED
        lot.save(update_fields=["state"])
    return lot
