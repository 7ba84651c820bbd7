"""What a reference standard must say, and when it may be used or withdrawn."""

from __future__ import annotations

from datetime import date

from labrecords.models import LotState, ReferenceStandard, User
from labrecords.rules.readings import objections_to_date, objections_to_order, objections_to_purity


def objections_to_recording_standard(standard: ReferenceStandard, *, by: User, today: date) -> list[str]:
    """A number of its own, a purity with its uncertainty, and dates in order."""
    found = [] if by.is_analyst or by.is_supervisor else ["An analyst or a supervisor records reference standards."]
    if not standard.number.strip():
        found.append("Number is empty: write the number on the bottle's label.")
    if ReferenceStandard.objects.filter(number=standard.number).exists():
        found.append(f"{standard.number} is recorded already. Open it, or choose another number.")
    found += objections_to_purity(standard.purity)
    if not standard.purity_expanded > 0:
        found.append(f"U of the purity is {standard.purity_expanded}: the certificate's value, above 0.")
    if not standard.purity_k >= 1:
        found.append(f"Coverage factor is {standard.purity_k}: 1 or more, usually 2.")
    if not standard.supplier_lot.strip():
        found.append("Supplier's lot is empty: write it as on the certificate.")
    found += objections_to_date(standard.received_on, today=today, field="Received on", may_be_future=False)
    return found + objections_to_order(
        standard.received_on, standard.expires_on, earlier_field="Received on", later_field="Expires on"
    )


def objections_to_issuing(standard: ReferenceStandard, *, by: User, today: date) -> list[str]:
    """From quarantine, with a certificate, before its expiry, by a supervisor."""
    found = [] if by.is_supervisor else [f"{by.full_name} is not a supervisor. A supervisor issues standards."]
    if standard.state != LotState.QUARANTINED:
        found.append(f"{standard.number} is {standard.state}. Only a lot in quarantine is issued.")
    if standard.certificate_id is None:
        found.append(f"{standard.number} has no certificate. Record it again with the file of its certificate.")
    if standard.expires_on < today:
        found.append(f"{standard.number} lapsed on {standard.expires_on:%-d %b %Y}. It is not issued.")
    return found


def objections_to_withdrawing_standard(standard: ReferenceStandard, *, by: User) -> list[str]:
    """A supervisor, once only."""
    found = [] if by.is_supervisor else [f"{by.full_name} is not a supervisor. A supervisor withdraws standards."]
    if standard.state == LotState.WITHDRAWN:
        found.append(f"{standard.number} is withdrawn already.")
    return found
