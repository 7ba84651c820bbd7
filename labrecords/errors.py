"""The one way a service says no."""

from __future__ import annotations

from collections.abc import Iterable
from typing import TypeVar

Value = TypeVar("Value")


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


def sure_of(value: Value | None) -> Value:
    """A value that the rules have seen to; were it missing after all, the change is refused and nothing is kept."""
    if value is None:
        raise Refused(["What this rests on is gone. Open the page again and choose anew."])
    return value
