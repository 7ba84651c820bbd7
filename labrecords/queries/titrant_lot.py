"""Reading one titrant lot: how much of it was used, and by what."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from decimal import Decimal

from django.db.models import Q, Sum

from labrecords.models import RecordState, Replicate, Run, TitrantLot


@dataclass(frozen=True, slots=True)
class VolumeBalance:
    """What was prepared, what recorded titrations delivered, and what was pipetted from the lot [mL]."""

    prepared: Decimal
    delivered: Decimal
    pipetted: Decimal
    titrations: int

    @property
    def used(self) -> Decimal:
        return self.delivered + self.pipetted

    @property
    def left(self) -> Decimal:
        return self.prepared - self.used


def volume_balance(lot: TitrantLot) -> VolumeBalance:
    """The volume of a lot against every titration recorded with it, excluded and void ones too.

    A bottle that empties faster than its records say was titrated with and not written down.
    """
    rows = Replicate.objects.filter(Q(run__standardization__lot=lot) | Q(standardization__lot=lot)).values_list(
        "start", "end", "curve__volumes"
    )
    delivered = [volume for row in rows if (volume := _delivered(*row)) is not None]
    return VolumeBalance(
        prepared=lot.volume,
        delivered=sum(delivered, Decimal(0)),
        pipetted=_pipetted(lot),
        titrations=len(delivered),
    )


def runs_on_lot(lot: TitrantLot) -> int:
    """How many runs rest on the lot's concentration, void ones not counted."""
    resting = Q(standardization__lot=lot) | Q(excess_standardization__lot=lot)
    return Run.objects.filter(resting).exclude(state=RecordState.VOID).count()


def _delivered(start: Decimal | None, end: Decimal | None, volumes: Sequence[str] | None) -> Decimal | None:
    """What left the burette: to the end of a recorded curve, which lies past its endpoint."""
    if volumes:
        return max(Decimal(str(volume)) for volume in volumes)
    return None if end is None else end - (start or 0)


def _pipetted(lot: TitrantLot) -> Decimal:
    """Excess solution of back titrations, and aliquots that other lots were standardized with."""
    excess = Replicate.objects.filter(run__excess_standardization__lot=lot)
    excess = excess.filter(Q(end__isnull=False) | Q(curve__isnull=False))
    aliquots = Replicate.objects.filter(standardization__against__lot=lot)
    return sum(
        (
            excess.aggregate(sum=Sum("run__method_version__excess_volume"))["sum"] or Decimal(0),
            aliquots.aggregate(sum=Sum("amount"))["sum"] or Decimal(0),
        ),
        Decimal(0),
    )
