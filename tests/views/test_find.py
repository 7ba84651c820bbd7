"""The find field: an exact number opens its record, a part of one lists what has it."""

from __future__ import annotations

import pytest
from django.db import connection
from django.test import Client
from django.test.utils import CaptureQueriesContext
from django.urls import reverse

from labrecords.queries.find import KINDS
from tests.factories.bench import Bench, approved_standardization, started_run
from tests.factories.charts import some_chart
from tests.factories.register import some_instrument

pytestmark = pytest.mark.django_db


@pytest.fixture
def desk(client: Client, bench: Bench) -> Client:
    client.force_login(bench.analyst)
    return client


def find(client: Client, q: str) -> str:
    """The page, or the address that it leads to."""
    answer = client.get(reverse("find-number"), {"q": q})
    return answer["Location"] if answer.status_code == 302 else " ".join(answer.content.decode().split())


def test_number_opens_the_record_of_every_kind(desk: Client, bench: Bench) -> None:
    approved_standardization(bench)
    run = started_run(bench)
    for typed, page in [
        (run.number, "run-sheet"),
        (run.standardization.number, "standardization-sheet"),
        (bench.lot.number, "titrant_lot-detail"),
        (run.sample.number, "sample-detail"),
        (bench.standard.number, "standard-detail"),
        (bench.burette.identifier, "instrument-detail"),
        ("TA", "method-detail"),
        (bench.titrant.code, "titrant-detail"),
        ("CS-A", "control_sample-detail"),
    ]:
        assert find(desk, typed) == reverse(page, args=[typed])


def test_number_is_found_however_it_is_typed(desk: Client, bench: Bench) -> None:
    assert find(desk, f"  {bench.lot.number.lower()} ") == reverse("titrant_lot-detail", args=[bench.lot.number])


def test_number_of_a_chart_opens_the_chart(desk: Client, bench: Bench) -> None:
    chart = some_chart(bench, [])
    chart_page = reverse("control_chart-detail", args=[chart.code])
    assert chart_page in find(desk, "CS-")  # its control sample has the same code and is first


def test_part_of_a_number_lists_what_has_it(desk: Client, bench: Bench) -> None:
    told = find(desk, "26-")
    for page, number in [
        ("titrant_lot-detail", bench.lot.number),
        ("standard-detail", bench.standard.number),
    ]:
        assert f'<a href="{reverse(page, args=[number])}">{number}</a>' in told


def test_part_of_a_number_takes_no_sign_for_any_letter(desk: Client, bench: Bench) -> None:
    for typed in ("%%", "__", "B_07", "N26%"):
        assert "Nothing has this number" in find(desk, typed)


@pytest.mark.parametrize("typed", ["", "x", "R-99-99999", "<script>", "0" * 5000])
def test_nothing_found_says_what_to_type(desk: Client, typed: str) -> None:
    told = find(desk, typed)
    assert "Type two or more characters of a run" in told
    assert "<script>" not in told.split("<main")[1]


@pytest.mark.parametrize("name", ["find-number", "lineage-find"])
def test_signs_that_do_not_print_are_passed_over(client: Client, supervisor, name: str) -> None:
    client.force_login(supervisor)
    assert client.get(reverse(name), {"q": "R\x07\u200b-99"}).status_code == 200


def test_list_of_matches_asks_once_for_each_kind(desk: Client, bench: Bench) -> None:
    some_instrument(bench.supervisor, identifier="B-99")
    with CaptureQueriesContext(connection) as asked:
        find(desk, "B-")
    tables = [model._meta.db_table for _, model, _, _ in KINDS]
    for table in tables:
        assert sum(f'FROM "{table}"' in query["sql"] for query in asked) == 2  # exact, then in part
