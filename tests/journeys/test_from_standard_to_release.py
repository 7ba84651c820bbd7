"""One whole journey: standardize, run, out of specification, investigate, repeat, approve, release, trace back."""

from __future__ import annotations

import pytest

from labrecords.models import Batch, Investigation, Run, Signature, Standardization
from labrecords.queries.integrity import checks
from tests.factories.bench import WEIGHED, set_up_bench, some_version
from tests.factories.products import some_batch, some_product

pytestmark = [pytest.mark.browser, pytest.mark.slow]


def standardizes(analyst, bench) -> Standardization:
    analyst.open(f"/lots/{bench.lot.number}/")
    analyst.press("Standardize", role="link")
    analyst.press("Start the standardization")
    analyst.type_cells("amount", [amount for amount, _ in WEIGHED])
    analyst.type_cells("start", ["0.00"] * 4)
    analyst.type_cells("end", ["0,05"], skip=0)
    analyst.type_cells("end", [end for _, end in WEIGHED], skip=1)
    analyst.sees("computed by the worker")
    analyst.picture("standardization")
    analyst.sign("Sign and submit")
    analyst.sees("waits for a second person")
    return Standardization.objects.get()


def runs(analyst, batch, version, titre: str) -> Run:
    analyst.open(f"/samples/{batch.number}-1/")
    analyst.press("Start a run", role="link")
    analyst.press("Start the run")
    analyst.type_cells("amount", ["10.00"] * 3)
    analyst.type_cells("start", ["0.00"] * 4)
    analyst.type_cells("end", ["0.05", titre, titre, titre])
    analyst.sees("computed by the worker")
    analyst.sign("Sign and submit")
    analyst.sees("waits for a second person")
    return Run.objects.order_by("-id")[0]


def finds_the_cause(supervisor, investigation: Investigation) -> None:
    supervisor.open(f"/investigations/{investigation.number}/")
    for select in supervisor.page.locator("select[name^='answer-']").all():
        select.select_option("yes")
    supervisor.page.select_option("[name=answer-instruments]", "no")
    supervisor.page.fill("[name=note-instruments]", "The pipette was filled past its mark.")
    supervisor.sign("Sign the assessment")
    supervisor.sees("Conclude")
    supervisor.page.select_option("[name=conclusion]", "assignable cause")
    supervisor.page.fill("[name=cause]", "The pipette was filled past its mark.")
    supervisor.page.fill("[name=text]", "The bench note shows the overfilled pipette; the run is void and repeated.")
    supervisor.picture("investigation")
    supervisor.sign("Sign the conclusion")
    supervisor.sees("the run is void, the test is repeated")


def approves(supervisor, record: Run | Standardization) -> None:
    supervisor.open("/reviews/")
    supervisor.press(record.number, role="link")
    supervisor.sign("Sign and approve")
    supervisor.sees(f"{record.number} is approved")


@pytest.mark.django_db(transaction=True)
def test_titration_goes_from_the_standard_to_the_released_batch(
    at_the_site, analyst, supervisor, auditor, other_supervisor
):
    bench = set_up_bench(analyst, supervisor)
    version = some_version(bench)
    batch = some_batch(bench, some_product(bench, version))
    at_bench, reviewing, tracing = at_the_site(analyst), at_the_site(supervisor), at_the_site(auditor)

    approves(reviewing, standardizes(at_bench, bench))
    outside = runs(at_bench, batch, version, "14.30")
    assert outside.calculation.outcome == "does_not_conform"
    finds_the_cause(reviewing, Investigation.objects.get(run=outside))
    outside.refresh_from_db()
    assert outside.state == "void"

    again = runs(at_bench, batch, version, "12.30")
    approves(reviewing, again)
    reviewing.picture("run")
    reviewing.open(f"/batches/{batch.number}/")
    reviewing.sign("Sign and release")
    reviewing.sees("released by")
    reviewing.picture("batch")
    assert Batch.objects.get(pk=batch.pk).state == "released"

    tracing.open("/lineage/")
    tracing.page.fill("main [name=q]", again.number)
    tracing.press("Show its lineage")
    tracing.sees(bench.standard.number)
    tracing.sees(bench.standard.certificate.name)
    tracing.picture("lineage")
    assert at_bench.problems + reviewing.problems + tracing.problems == []
    assert Signature.objects.filter(meaning="released by").count() == 1
    assert [finding for check in checks().values() for finding in check()] == []


@pytest.mark.django_db(transaction=True)
def test_sheet_works_on_a_phone_and_waits_for_a_worker_that_is_down(at_the_site, worker, analyst, supervisor):
    bench = set_up_bench(analyst, supervisor)
    phone = at_the_site(analyst, width=360)
    worker.kill()
    phone.open(f"/lots/{bench.lot.number}/")
    phone.press("Standardize", role="link")
    phone.press("Start the standardization")
    phone.type_cells("amount", [amount for amount, _ in WEIGHED])
    phone.type_cells("start", ["0.00"] * 4)
    phone.type_cells("end", ["0.05", *(end for _, end in WEIGHED)])
    phone.page.reload()
    phone.sees("Waiting for the worker")
    assert phone.page.evaluate("document.documentElement.scrollWidth") == 360
    phone.picture("sheet-360")
    worker.start()
    worker.send("labrecords.tasks.sweep_waiting")
    phone.sees("computed by the worker")
    assert phone.problems == []
