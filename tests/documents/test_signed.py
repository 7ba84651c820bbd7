"""Signed content as a person reads it: nothing of it is left out."""

from __future__ import annotations

from zoneinfo import ZoneInfo

import pytest

from labrecords.canonical import plain
from labrecords.documents.signed import laid_out
from labrecords.models import Run
from labrecords.queries.run import as_signed
from tests.factories.bench import Bench, approved_run, approved_standardization


def test_laid_out_puts_facts_first_and_a_table_for_each_list() -> None:
    content = {"number": "R-1", "replicates": [{"end": "12.30", "note": ""}, {"end": "12.35", "note": "late"}]}
    facts, table = laid_out(content)
    assert (facts.title, facts.rows) == ("Record", [("Number", "R-1")])
    assert (table.columns, table.rows) == (["End", "Note"], [["12.30", "empty"], ["12.35", "late"]])


def test_laid_out_leaves_out_columns_that_are_empty_throughout() -> None:
    (table,) = laid_out({"rows": [{"a": "1", "b": None}, {"a": "2", "b": ""}]})
    assert table.columns == ["A"]


def test_laid_out_tells_moments_in_the_zone_of_the_laboratory() -> None:
    """1 795 513 336 s is 2026-11-24 09:42:16 UTC (`date -u -d @1795513336`)."""
    (part,) = laid_out({"started_at": "1795513336123456"}, zone=ZoneInfo("Europe/Amsterdam"))
    ((name, told),) = part.rows
    assert (name, told.replace("\N{NO-BREAK SPACE}", " ")) == ("Started at", "24 Nov 2026 10:42 CET")


@pytest.mark.parametrize(
    ("value", "told"),
    [(False, "no"), (True, "yes"), (None, "empty"), (0, "0"), ("0.10", "0.10"), ("<b>", "<b>")],
)
def test_laid_out_says_every_value_in_words(value: object, told: str) -> None:
    assert laid_out({"x": value})[0].rows == [("X", told)]


@pytest.mark.django_db
def test_laid_out_holds_everything_of_a_run(bench: Bench) -> None:
    approved_standardization(bench)
    run: Run = approved_run(bench)
    told = " ".join(value for part in laid_out(plain(as_signed(run))) for row in part.rows for value in row)
    for text in (run.number, run.sample.number, "12.35", "B-07", run.calculation.inputs_sha256, "icastell"):
        assert text in told
