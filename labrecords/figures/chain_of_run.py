"""The chains of one run, drawn from the certificate to the result."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from django.urls import reverse
from django.utils.safestring import SafeString

from labrecords import writing
from labrecords.figures.chain import chain
from labrecords.models import Run
from labrecords.queries.lineage import ChainLink

VIA = ("titrant", "excess solution")


def chains_of_run(record: Run, links: Sequence[ChainLink]) -> list[SafeString]:
    """The chain of the titrant, and that of the excess solution where there is one."""
    by_via = [[link for link in links if link.via == via] for via in VIA]
    return [chain(_marks(record, found)[::-1]) for found in by_via if found]


def _marks(record: Run, links: Sequence[ChainLink]) -> list[dict[str, Any]]:
    """The chain as it is drawn: the result first, then the standardizations, then the certificate."""
    marks = [
        _mark(
            record.number, record.method_version.method.title, page="run-sheet", state=record.state,
            who=record.started_by.full_name, when=writing.day(record.started_at),
        )
    ]  # fmt: skip
    for link in links:
        marks.append(
            _mark(
                link.number, f"lot {link.lot}", page="standardization-sheet", state=link.state,
                who=link.started_by, when=writing.day(link.started_at),
            )
        )  # fmt: skip
        if link.standard:
            marks.append(
                _mark(
                    link.standard, link.substance, page="standard-detail", state=link.standard_state,
                    who=link.certificate, when="",
                )
            )  # fmt: skip
    return marks


def _mark(
    number: str, title: str | None, *, page: str, state: str | None, who: str | None, when: str
) -> dict[str, Any]:
    told = {"title": title or "", "state": state or "", "who": who or "", "when": when}
    return {"number": number, "url": reverse(page, args=[number]), **told}
