"""Results side by side: what they share is told and taken into account."""

from __future__ import annotations

import pytest

from labrecords.models import Run
from labrecords.queries.result import results_together
from labrecords.services.run import void_run
from tests.factories.bench import Bench, approved_standardization, set_up_bench, some_version
from tests.factories.people import signed_by
from tests.factories.products import approved_run_of, some_batch, some_product, submitted_run_of

pytestmark = pytest.mark.django_db


@pytest.fixture
def bench(analyst, supervisor) -> Bench:
    bench = set_up_bench(analyst, supervisor)
    approved_standardization(bench)
    return bench


@pytest.fixture
def runs(bench) -> list[Run]:
    version = some_version(bench)
    product = some_product(bench, version)
    batches = [some_batch(bench, product, number) for number in ("TV-1", "TV-2", "TV-3")]
    return [
        approved_run_of(bench, batch, version, titre)
        for batch, titre in zip(batches, ("12.30", "12.35", "12.90"), strict=True)
    ]


def test_runs_on_one_titrant_and_burette_move_together(runs) -> None:
    found = results_together([run.number for run in runs[:2]])
    # Same titres, same bottle, same burette and pipette: only scatter and reading are their own.
    assert 0.4 < found.together.correlation[0, 1] < 1
    assert found.together.differences[0].u < 0.75 * float(found.together.u.max()) * 2**0.5
    assert found.together.mean.u > found.together.mean.u_if_independent
    assert any("burette B-07" in label for label in found.shared)
    assert "they agree" in found.sentences[0]


def test_page_tells_what_agrees_and_what_does_not(client, auditor, runs) -> None:
    client.force_login(auditor)
    numbers = "+".join(run.number for run in runs)
    page = client.get(f"/results/together/?numbers={numbers}").content.decode()
    assert "they agree" in page
    assert "they do not agree" in page
    assert "Weighted mean" in page
    assert "burette B-07" in page


@pytest.mark.parametrize(
    ("numbers", "sentence"),
    [
        ("R-99-1", "R-99-1 is no run and no standardization."),
        ("{0}", "1 result is given; two or more are compared."),
        ("{0} {0}", "1 result is given; two or more are compared."),
        ("{0} {s}", "only results in one unit are compared"),
        (" ".join(f"R-{n}" for n in range(13)), "13 numbers are given; up to 12"),
    ],
)
def test_what_cannot_be_compared_is_said(client, auditor, runs, bench, numbers, sentence) -> None:
    client.force_login(auditor)
    typed = numbers.format(runs[0].number, s=runs[0].standardization.number)
    answer = client.get("/results/together/", {"numbers": typed})
    assert answer.status_code == 409
    assert sentence in answer.content.decode()


def test_void_result_is_not_compared(client, bench, supervisor, runs) -> None:
    version = runs[0].method_version
    run = submitted_run_of(bench, some_batch(bench, runs[0].sample.batch.product, "TV-4"), version)
    void_run(run, by=supervisor, credentials=signed_by(supervisor), reason="the wrong flask was taken")
    client.force_login(supervisor)
    answer = client.get("/results/together/", {"numbers": f"{run.number}, {runs[0].number}"})
    assert "is void; a void result is not compared" in answer.content.decode()


def test_empty_page_says_what_to_type(client, auditor) -> None:
    client.force_login(auditor)
    assert "Type two or more numbers" in client.get("/results/together/").content.decode()


def test_page_is_for_people_who_signed_in(client) -> None:
    assert client.get("/results/together/").status_code == 302
