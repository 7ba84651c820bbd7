"""Capability of products and titrants: which results count, and what stands in for too few of them."""

from __future__ import annotations

from decimal import Decimal as D
from statistics import fmean, stdev

import pytest

from labrecords.models import MethodVersion
from labrecords.queries import capability
from labrecords.queries.capability import fit_of_titrant, fits_of_products
from labrecords.queries.control_chart import points_of
from labrecords.services.control_chart import record_chart
from labrecords.services.run import void_run
from tests.factories.bench import Bench, approved_standardization, some_version
from tests.factories.charts import some_chart
from tests.factories.people import signed_by
from tests.factories.products import approved_run_of, some_batch, some_product, submitted_run_of

pytestmark = pytest.mark.django_db
TITRES = ["12.30", "12.40", "12.20", "12.35"]


@pytest.fixture
def version(bench: Bench) -> MethodVersion:
    approved_standardization(bench)
    return some_version(bench, replicates_needed=2, blanks_needed=0)


@pytest.fixture
def _four_are_enough(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(capability, "FEWEST", 4)


def results(bench: Bench, version: MethodVersion, titres: list[str]) -> list[float]:
    """Approved results of one batch each, as stored."""
    product = some_product(bench, version)
    batches = [some_batch(bench, product, f"TV-{place}") for place in range(len(titres))]
    runs = [approved_run_of(bench, *pair) for pair in zip(batches, [version] * len(titres), titres, strict=True)]
    return [run.calculation.value for run in runs]


@pytest.mark.usefixtures("_four_are_enough")
def test_fits_of_products_follow_the_definition_of_ppk(bench: Bench, version: MethodVersion) -> None:
    """Ppk = min(mean - L, U - mean) / (3 s): ISO 22514-2:2017."""
    values = results(bench, version, TITRES)
    (fit,) = fits_of_products()
    mean, sd = fmean(values), stdev(values)
    assert fit.indices is not None
    assert (fit.count, fit.lower, fit.upper, fit.unit) == (4, D("0.70"), D("0.78"), "g/100 mL")
    assert fit.indices.ppk.value == pytest.approx(min(mean - 0.70, 0.78 - mean) / (3 * sd))


def test_fits_of_products_say_no_index_of_few(bench: Bench, version: MethodVersion) -> None:
    results(bench, version, TITRES[:2])
    (fit,) = fits_of_products()
    assert (fit.count, fit.indices) == (2, None)


@pytest.mark.usefixtures("_four_are_enough")
def test_fits_of_products_say_no_index_of_what_never_varies(bench: Bench, version: MethodVersion) -> None:
    results(bench, version, ["12.30"] * 4)
    (fit,) = fits_of_products()
    assert (fit.count, fit.indices) == (4, None)


def test_fits_of_products_count_approved_results_of_batches_only(bench: Bench, version: MethodVersion) -> None:
    product = some_product(bench, version)
    waiting = submitted_run_of(bench, some_batch(bench, product, "TV-1"), version)
    taken_back = approved_run_of(bench, some_batch(bench, product, "TV-2"), version)
    void_run(taken_back, by=bench.supervisor, credentials=signed_by(bench.supervisor), reason="the wrong bottle")
    approved_run_of(bench, some_batch(bench, product, "TV-3"), version)
    assert waiting.state == "submitted"
    assert [fit.count for fit in fits_of_products()] == [1]


def test_fit_of_titrant_is_in_its_window(bench: Bench, version: MethodVersion) -> None:
    chart = record_chart(by=bench.supervisor, code="C-1", title="alkali", titrant=bench.titrant)
    fit = fit_of_titrant(chart, points_of(chart))
    assert fit is not None
    assert (fit.lower, fit.upper, fit.count, fit.indices) == (D("0.095"), D("0.105"), 1, None)


def test_fit_of_titrant_is_of_titrants_alone(bench: Bench) -> None:
    chart = some_chart(bench, [])
    assert fit_of_titrant(chart, []) is None
