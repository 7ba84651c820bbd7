"""Runs and batches over the API."""

from __future__ import annotations

import pytest
from django.urls import reverse

from tests.factories.bench import approved_standardization, set_up_bench, some_version
from tests.factories.products import approved_run_of, some_batch, some_product

pytestmark = pytest.mark.django_db


@pytest.fixture
def run(analyst, supervisor):
    bench = set_up_bench(analyst, supervisor)
    approved_standardization(bench)
    version = some_version(bench)
    return approved_run_of(bench, some_batch(bench, some_product(bench, version)), version)


def test_run_comes_with_its_result_and_the_digits_typed(client, auditor, run) -> None:
    client.force_login(auditor)
    found = client.get(reverse("api:run-detail", args=[run.number])).json()
    assert found["result"]["unit"] == "g/100 mL"
    assert found["result"]["expanded_uncertainty"] > 0
    assert found["replicates"][1] == {
        "kind": "sample", "number": 1, "amount": "10.00", "start": "0.00", "first_end": None, "end": "12.30",
        "temperature": None, "drift": None, "minutes": None,
        "is_excluded": False, "exclusion_cause": "",
    }  # fmt: skip


def test_runs_are_found_by_batch(client, auditor, run) -> None:
    client.force_login(auditor)
    found = client.get(reverse("api:run-list"), {"q": run.sample.batch.number, "state": "approved"}).json()
    assert [item["number"] for item in found["results"]] == [run.number]


def test_batch_says_where_each_test_stands(client, auditor, run) -> None:
    client.force_login(auditor)
    found = client.get(reverse("api:batch-detail", args=[run.sample.batch.number])).json()
    assert [(test["status"], test["run"]) for test in found["tests"]] == [("approved", run.number)]
    assert client.get(reverse("api:batch-list"), {"state": "testing"}).json()["count"] == 1


@pytest.mark.parametrize("name", ["run-list", "batch-list"])
def test_lists_are_read_only_and_closed_to_strangers(client, auditor, name) -> None:
    assert client.get(reverse(f"api:{name}")).status_code == 403
    client.force_login(auditor)
    assert client.post(reverse(f"api:{name}"), {}, content_type="application/json").status_code == 405
