"""Checks by drawing, done by the real worker."""

from __future__ import annotations

import pytest
from django.urls import reverse

from labrecords.errors import Refused
from labrecords.models import AuditEvent, Calculation, MonteCarloCheck
from labrecords.services.monte_carlo import ask_for_check, do_check
from tests.factories.bench import approved_standardization, set_up_bench, started_standardization


@pytest.fixture
def calculation(analyst, supervisor) -> Calculation:
    return approved_standardization(set_up_bench(analyst, supervisor)).calculation


@pytest.mark.django_db
def test_do_check_compares_draws_with_the_budget(calculation, auditor):
    check = ask_for_check(calculation, by=auditor)
    do_check(check.pk)
    check.refresh_from_db()
    assert check.state == "done"
    assert check.outputs["value"] == pytest.approx(calculation.value, rel=1e-4)
    assert check.draws >= 200_000
    assert "95 % interval" in check.outputs["sentence"]


@pytest.mark.django_db
def test_do_check_twice_leaves_the_first_answer(calculation, auditor):
    check = ask_for_check(calculation, by=auditor)
    do_check(check.pk)
    first = MonteCarloCheck.objects.get(pk=check.pk).outputs
    do_check(check.pk)
    assert MonteCarloCheck.objects.get(pk=check.pk).outputs == first


@pytest.mark.django_db
def test_check_changes_no_record(calculation, auditor):
    events = AuditEvent.objects.count()
    do_check(ask_for_check(calculation, by=auditor).pk)
    assert AuditEvent.objects.count() == events


@pytest.mark.django_db
def test_ask_for_check_refuses_a_second_one_meanwhile_and_strangers(calculation, auditor, administrator):
    with pytest.raises(Refused, match="An analyst, a supervisor or an auditor"):
        ask_for_check(calculation, by=administrator)
    ask_for_check(calculation, by=auditor)
    with pytest.raises(Refused, match="is being checked already"):
        ask_for_check(calculation, by=auditor)


@pytest.mark.django_db
def test_page_asks_and_shows_what_was_found(client, calculation, auditor):
    client.force_login(auditor)
    answer = client.post(reverse("calculation-check", args=[calculation.pk]), follow=True)
    assert "The worker draws the inputs" in answer.content.decode()
    do_check(MonteCarloCheck.objects.get().pk)
    shown = client.get(reverse("calculation-checked", args=[calculation.pk])).content.decode()
    assert "By the budget" in shown


@pytest.mark.django_db(transaction=True)
def test_worker_does_the_check(worker, analyst, supervisor, auditor):
    worker.stop()  # the bench computes by itself
    record = approved_standardization(set_up_bench(analyst, supervisor))
    worker.start()
    check = ask_for_check(record.calculation, by=auditor)
    worker.wait_until(lambda: MonteCarloCheck.objects.get(pk=check.pk).state == "done")


@pytest.mark.django_db
def test_open_sheet_without_a_result_offers_no_check(client, analyst, supervisor):
    record = started_standardization(set_up_bench(analyst, supervisor))
    client.force_login(analyst)
    page = client.get(reverse("standardization-sheet", args=[record.number])).content.decode()
    assert "Check by drawing" not in page
