"""A product with limits, its batches, and approved runs on them."""

from __future__ import annotations

from decimal import Decimal as D
from typing import Any

from django.utils import timezone

from labrecords.models import Batch, MethodVersion, Product, Run
from labrecords.services.batch import record_batch, record_sample
from labrecords.services.product import make_specification_effective, record_product, record_specification
from labrecords.services.run import approve_run, start_run, submit_run
from tests.factories.bench import Bench, compute, fill
from tests.factories.people import signed_by
from tests.factories.register import days_ago


def some_product(bench: Bench, version: MethodVersion, **given: Any) -> Product:
    """Table vinegar whose acidity lies between 0.70 and 0.78 g/100 mL, unless told otherwise."""
    limit = {
        "method": version.method, "lower": D("0.70"), "upper": D("0.78"), "unit": version.unit, "places": 2,
        "rounding": "half_up", "rule": "simple", "guard_factor": D(1),
    } | given  # fmt: skip
    product = record_product(by=bench.supervisor, code="TV", name="table vinegar")
    draft = record_specification(product, by=bench.supervisor, reason="first version", limits=[limit])
    make_specification_effective(draft, by=bench.supervisor, credentials=signed_by(bench.supervisor))
    return product


def some_batch(bench: Bench, product: Product, number: str = "TV-2611-04") -> Batch:
    """A batch made yesterday, with one sample of its number."""
    batch = record_batch(by=bench.analyst, number=number, product=product, made_on=days_ago(1))
    drawn: dict[str, Any] = {"drawn_at": timezone.now(), "drawn_by": "the filling line"}
    record_sample(by=bench.analyst, number=f"{number}-1", batch=batch, **drawn)
    return batch


def submitted_run_of(bench: Bench, batch: Batch, version: MethodVersion, titre: str = "12.30") -> Run:
    """A run of the batch's sample with the same titre three times."""
    instruments = {"burette": bench.burette, "pipette": bench.pipette}
    run = start_run(
        batch.samples.get(), by=bench.analyst, method_version=version, lot=bench.lot, instruments=instruments
    )
    fill(run, [("10.00", titre)] * version.replicates_needed, by=bench.analyst)
    compute(run)
    return submit_run(run, by=bench.analyst, credentials=signed_by(bench.analyst))


def approved_run_of(bench: Bench, batch: Batch, version: MethodVersion, titre: str = "12.30") -> Run:
    """The same after its review."""
    run = submitted_run_of(bench, batch, version, titre)
    return approve_run(run, by=bench.supervisor, credentials=signed_by(bench.supervisor))
