"""The one way a service says no."""

from __future__ import annotations

from collections.abc import Iterable


class Refused(Exception):
    """A change is refused; ``reasons`` are sentences for the reader, each with what to do."""

    def __init__(self, reasons: Iterable[str]) -> None:
        self.reasons = tuple(reasons)
        super().__init__(" ".join(self.reasons))


def refuse_if(objections: Iterable[str]) -> None:
    """Raise Refused when there is any objection."""
    reasons = tuple(objections)
    if reasons:
        raise Refused(reasons)
