"""Lineage pages: a number leads to its chain, a chain to its certificates, a signature to what was signed."""

from __future__ import annotations

from decimal import Decimal as D

import pytest
from django.test import Client
from django.urls import reverse

from labrecords.models import Run, Signature
from tests.factories.bench import Bench, approved_run, approved_standardization, some_version, started_run
from tests.factories.products import some_batch, some_product, submitted_run_of

pytestmark = pytest.mark.django_db


@pytest.fixture
def run(bench: Bench) -> Run:
    approved_standardization(bench)
    return approved_run(bench)


@pytest.fixture
def reader(client: Client, auditor) -> Client:
    client.force_login(auditor)
    return client


def page(client: Client, name: str, *arguments: object) -> str:
    answer = client.get(reverse(name, args=arguments))
    assert answer.status_code == 200
    return " ".join(answer.content.decode().split())


def test_find_leads_each_number_to_its_lineage(reader: Client, run: Run, bench: Bench) -> None:
    for typed, name, number in [
        (run.number.lower(), "lineage-run", run.number),
        (run.standardization.number, "lineage-standardization", run.standardization.number),
        (bench.lot.number, "lineage-lot", bench.lot.number),
        (f" {bench.standard.number} ", "lineage-standard", bench.standard.number),
        ("B-07", "lineage-instrument", "B-07"),
        (run.sample.number, "lineage-sample", run.sample.number),
        ("certificate.pdf", "lineage-standard", bench.standard.number),
        ("TA", "method-detail", "TA"),
    ]:
        answer = reader.get(reverse("lineage-find"), {"q": typed})
        assert (answer.status_code, answer["Location"]) == (302, reverse(name, args=[number]))


def test_find_says_what_to_do_when_nothing_has_the_number(reader: Client) -> None:
    answer = reader.get(reverse("lineage-find"), {"q": "R-99-00000"}).content.decode()
    assert "Nothing has the number R-99-00000." in answer


def test_run_shows_the_chain_up_to_the_certificate(reader: Client, run: Run, bench: Bench) -> None:
    shown = page(reader, "lineage-run", run.number)
    certificate = reverse("standard-certificate", args=[bench.standard.certificate_id])
    for told in (run.standardization.number, bench.lot.number, bench.standard.number, certificate, "W-01"):
        assert told in shown
    assert f"{run.standardization.number}: reviewed by {bench.supervisor.full_name}" in shown


def test_run_that_is_not_computed_yet_has_a_page(reader: Client, bench: Bench) -> None:
    approved_standardization(bench)
    assert "Not computed yet." in page(reader, "lineage-run", started_run(bench).number)


@pytest.mark.parametrize(
    ("name", "of"),
    [
        ("lineage-standardization", lambda run, bench: run.standardization.number),
        ("lineage-lot", lambda run, bench: bench.lot.number),
        ("lineage-standard", lambda run, bench: bench.standard.number),
        ("lineage-instrument", lambda run, bench: bench.balance.identifier),
        ("lineage-sample", lambda run, bench: run.sample.number),
    ],
)
def test_everything_above_shows_the_run_below(reader: Client, run: Run, bench: Bench, name: str, of) -> None:
    shown = page(reader, name, of(run, bench))
    assert reverse("lineage-run", args=[run.number]) in shown
    assert "1 <small>1 approved</small>" in shown


def test_signed_shows_the_readings_as_they_were_signed(reader: Client, run: Run) -> None:
    signature = Signature.objects.get(noun="run", record_id=run.pk, meaning="reviewed by")
    shown = page(reader, "lineage-signed", signature.pk)
    assert shown.count("<td>10.00</td>") == 3
    assert shown.count("<td>12.30</td>") == 2
    assert shown.count("<td>12.35</td>") == 1
    assert "unaltered" in shown
    assert "approved run" in shown


def test_provenance_is_saved_as_a_file_of_json(reader: Client, run: Run) -> None:
    answer = reader.get(reverse("lineage-provenance", args=[run.number]))
    assert answer["Content-Disposition"] == f'attachment; filename="{run.number}.prov.json"'
    assert f"lab:run/{run.number}" in answer.json()["activity"]


@pytest.mark.parametrize("name", ["run", "standardization", "lot", "standard", "instrument", "batch", "sample"])
def test_number_that_does_not_exist_is_not_found(reader: Client, name: str) -> None:
    assert reader.get(reverse(f"lineage-{name}", args=["none"])).status_code == 404


def test_batch_and_investigation_lead_to_their_runs(reader: Client, bench: Bench) -> None:
    approved_standardization(bench)
    version = some_version(bench)
    batch = some_batch(bench, some_product(bench, version, lower=D("0.80"), upper=None))
    run = submitted_run_of(bench, batch, version)
    investigation = run.investigations.get()
    answer = reader.get(reverse("lineage-find"), {"q": investigation.number})
    assert answer["Location"] == reverse("lineage-run", args=[run.number])
    assert reader.get(reverse("lineage-find"), {"q": batch.number})["Location"] == reverse(
        "lineage-batch", args=[batch.number]
    )
    shown = page(reader, "lineage-batch", batch.number)
    assert reverse("lineage-run", args=[run.number]) in shown
    assert "does not conform" in shown
    assert "1 <small>1 testing</small>" in shown
    assert reverse("lineage-batch", args=[batch.number]) in page(reader, "lineage-run", run.number)


def test_dossier_is_saved_as_a_file(reader: Client, run: Run) -> None:
    answer = reader.get(reverse("lineage-dossier", args=[run.number]))
    assert answer["Content-Disposition"] == f'attachment; filename="{run.number}-dossier.zip"'
    assert answer.content.startswith(b"PK")
    assert reverse("lineage-dossier", args=[run.number]) in page(reader, "lineage-run", run.number)
