"""Risks of decision rules from approved results, against an independent integration by drawing."""

from __future__ import annotations

from decimal import Decimal as D

import numpy as np
import pytest

from labrecords.models import Specification
from labrecords.queries import risk
from labrecords.queries.risk import risks_of
from tests.factories.bench import Bench, approved_standardization, some_version
from tests.factories.products import approved_run_of, some_batch, some_product

pytestmark = pytest.mark.django_db
TITRES = ["12.20", "12.50", "12.60", "12.35", "12.45", "12.00"]


@pytest.fixture
def specification(bench: Bench, monkeypatch) -> Specification:
    monkeypatch.setattr(risk, "FEWEST", 6)
    approved_standardization(bench)
    version = some_version(bench)
    product = some_product(bench, version, upper=D("0.76"), rule="guard", guard_factor=D("0.5"))
    for number, titre in enumerate(TITRES):
        approved_run_of(bench, some_batch(bench, product, f"TV-{number}"), version, titre)
    return product.specifications.get()


def test_risks_are_those_of_drawn_batches(specification) -> None:
    (found,) = risks_of(specification)
    assert found.risks is not None
    generator = np.random.default_rng(4)
    true = generator.normal(found.mean, found.sd, 400_000)
    measured = true + generator.normal(0.0, found.u, true.size)
    inside, accepted = (true > 0.70) & (true < 0.76), (measured > 0.70 + found.guard) & (measured < 0.76 - found.guard)
    assert found.risks.consumer == pytest.approx(np.mean(~inside & accepted), abs=0.002)
    assert found.risks.producer == pytest.approx(np.mean(inside & ~accepted), abs=0.002)


def test_few_results_give_no_risk(client, specification, auditor, monkeypatch) -> None:
    client.force_login(auditor)
    page = client.get("/products/TV/").content.decode()
    assert "Outside, yet accepted" in page
    monkeypatch.setattr(risk, "FEWEST", 7)
    assert risks_of(specification)[0].risks is None
    assert "at least 20 approved results are needed" in client.get("/products/TV/").content.decode()
