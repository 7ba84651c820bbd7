"""What a reference standard must say, and when it may be issued, corrected, superseded or withdrawn."""

from __future__ import annotations

from datetime import date

from labrecords.models import LotState, ReferenceStandard, User
from labrecords.rules.fit import objections_to_fit
from labrecords.rules.identifier import objections_to_identifier
from labrecords.rules.number import plain
from labrecords.rules.readings import objections_to_date, objections_to_order, objections_to_purity


def objections_to_recording_standard(standard: ReferenceStandard, *, by: User, today: date) -> list[str]:
    """A number of its own, a purity with its uncertainty, and dates in order."""
    found = [] if by.is_analyst or by.is_supervisor else [_not_their_work(by)]
    same = ReferenceStandard.objects.filter(number__iexact=standard.number)
    found += objections_to_identifier(standard.number, field="Number", known=same.values_list("number", flat=True))
    if standard.substance.superseded_by_id is not None:
        found.append(f"{standard.substance.name} is superseded. Choose the entry that took its place.")
    return found + objections_to_certificate_values(standard, today=today)


def objections_to_certificate_values(standard: ReferenceStandard, *, today: date) -> list[str]:
    """What was copied from the certificate and the bottle is possible and complete."""
    found = objections_to_fit(standard) + objections_to_purity(standard.purity)
    if not 0 < standard.purity_expanded < standard.purity:
        found.append(
            f"U of the purity is {plain(standard.purity_expanded)}: the certificate's value is expected, "
            "above 0 and below the purity."
        )
    if not 1 <= standard.purity_k <= 5:
        found.append(f"Coverage factor is {plain(standard.purity_k)}: 1 to 5 is expected, usually 2.")
    if not standard.supplier_lot.strip():
        found.append("Supplier's lot is empty: write it as on the certificate.")
    found += objections_to_date(standard.received_on, today=today, field="Received on", may_be_future=False)
    found += objections_to_date(standard.expires_on, today=today, field="Expires on", may_be_future=True)
    return found + objections_to_order(
        standard.received_on, standard.expires_on, earlier_field="Received on", later_field="Expires on"
    )


def objections_to_correcting_standard(standard: ReferenceStandard, *, by: User) -> list[str]:
    """Only before it is issued: afterwards results rest on what it said."""
    found = [] if by.is_analyst or by.is_supervisor else [_not_their_work(by)]
    if standard.state != LotState.QUARANTINED:
        found.append(
            f"{standard.number} is {standard.state}; only a lot in quarantine is corrected. "
            "Supersede it, or withdraw it when its values were wrong."
        )
    return found


def objections_to_issuing(standard: ReferenceStandard, *, by: User, today: date) -> list[str]:
    """From quarantine, with a certificate, before its expiry, by a supervisor."""
    found = []
    if not by.is_supervisor:
        found.append(f"{by.full_name} is not a supervisor. A supervisor issues standards.")
    if standard.state != LotState.QUARANTINED:
        found.append(f"{standard.number} is {standard.state}. Only a lot in quarantine is issued.")
    if standard.superseded_by_id is not None:
        found.append(f"{standard.number} is superseded by {standard.superseded_by}. Issue that one.")
    if standard.certificate_id is None:
        found.append(f"{standard.number} has no certificate. Correct it, with the file of its certificate.")
    if standard.expires_on < today:
        found.append(f"{standard.number} lapsed on {standard.expires_on:%-d %b %Y}. It is not issued.")
    return found


def objections_to_superseding_standard(standard: ReferenceStandard, *, by: User) -> list[str]:
    """A supervisor, once only."""
    found = []
    if not by.is_supervisor:
        found.append(f"{by.full_name} is not a supervisor. A supervisor supersedes standards.")
    if standard.superseded_by_id is not None:
        found.append(f"{standard.number} is superseded already. Open {standard.superseded_by} instead.")
    return found


def objections_to_withdrawing_standard(standard: ReferenceStandard, *, by: User) -> list[str]:
    """A supervisor, once only."""
    found = []
    if not by.is_supervisor:
        found.append(f"{by.full_name} is not a supervisor. A supervisor withdraws standards.")
    if standard.state == LotState.WITHDRAWN:
        found.append(f"{standard.number} is withdrawn already.")
    return found


def _not_their_work(by: User) -> str:
    return f"{by.full_name} is neither analyst nor supervisor. One of them records reference standards."
