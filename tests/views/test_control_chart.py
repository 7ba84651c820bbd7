"""Charts on pages: signals in words with links, limits chosen by ticks and signed, refusals that keep all."""

from __future__ import annotations

from typing import Any

import pytest
from django.db import connection
from django.test import Client
from django.test.utils import CaptureQueriesContext
from django.urls import reverse

from labrecords.models import ControlChart, ControlLimits
from labrecords.queries.control_chart import points_of
from tests.factories.bench import Bench, approved_standardization, some_version
from tests.factories.charts import RULES, TITRES, add_point, limits_of, some_chart
from tests.factories.people import typed_by
from tests.factories.products import some_product

pytestmark = pytest.mark.django_db


@pytest.fixture
def chart(bench: Bench) -> ControlChart:
    return some_chart(bench)


@pytest.fixture
def desk(client: Client, bench: Bench) -> Client:
    client.force_login(bench.supervisor)
    return client


def shown(client: Client, name: str, *arguments: object) -> str:
    answer = client.get(reverse(name, args=arguments))
    assert answer.status_code == 200
    return " ".join(answer.content.decode().split())


def choice(chart: ControlChart, bench: Bench, **given: Any) -> dict[str, Any]:
    """What the page sends when every point is ticked."""
    said = {"baseline": [point.calculation_id for point in points_of(chart)], "rules": RULES}
    return said | {"limits_reason": "the first ten values"} | typed_by(bench.supervisor) | given


def test_list_names_the_newest_signal_of_each_chart(desk: Client, chart: ControlChart, bench: Bench) -> None:
    assert "not set" in shown(desk, "control_chart-list")
    limits_of(chart, bench)
    run = add_point(chart, bench, "12.90")
    told = shown(desk, "control_chart-list")
    assert '<span class="tag is-person">one point beyond three sigma</span>' in told
    assert run.number in told


def test_detail_names_each_signal_with_a_link_to_its_run(desk: Client, chart: ControlChart, bench: Bench) -> None:
    limits_of(chart, bench)
    run = add_point(chart, bench, "12.90")
    told = shown(desk, "control_chart-detail", "CS-A")
    link = f'<a href="{reverse("run-sheet", args=[run.number])}">{run.number}</a>'
    assert f'<th scope="row">{link}</th>' in told
    assert '<td data-label="Rule">one point beyond three sigma</td>' in told
    assert "0.735 ± 0.010" in told


def test_detail_without_limits_judges_no_point(desk: Client, chart: ControlChart) -> None:
    told = shown(desk, "control_chart-detail", "CS-A")
    assert "No limits are set yet, so no point is judged." in told
    assert "No signals" in told


def test_detail_of_a_chart_without_points_says_what_will_appear(desk: Client, bench: Bench) -> None:
    some_chart(bench, [])
    assert "A point appears with each approved record." in shown(desk, "control_chart-detail", "CS-A")


def test_set_limits_signs_what_was_ticked(desk: Client, chart: ControlChart, bench: Bench) -> None:
    out = points_of(chart)[3].calculation_id
    add_point(chart, bench, "12.30")
    why = {f"why-{out}": "the pipette dripped after delivery"}
    answer = desk.post(reverse("control_chart-set_limits", args=["CS-A"]), choice(chart, bench, **why))
    assert (answer.status_code, answer["Location"]) == (302, reverse("control_chart-detail", args=["CS-A"]))
    limits = ControlLimits.objects.get()
    assert len(limits.baseline) == len(TITRES) + 1
    assert limits.excluded == [{"calculation": out, "why": "the pipette dripped after delivery"}]


def test_set_limits_keeps_the_ticks_and_sentences_when_refused(desk: Client, chart: ControlChart, bench: Bench) -> None:
    first, second = (point.calculation_id for point in points_of(chart)[:2])
    given = {"baseline": [first], f"why-{first}": "the wrong <b>flask</b>", "limits_reason": ""}
    answer = desk.post(reverse("control_chart-set_limits", args=["CS-A"]), choice(chart, bench, **given))
    told = " ".join(answer.content.decode().split())
    assert answer.status_code == 409
    assert "The baseline has 0 points; at least 10 are needed" in told
    assert "Reason is empty: say why these limits are set." in told
    assert 'value="the wrong &lt;b&gt;flask&lt;/b&gt;"' in told
    assert f'value="{first}" aria-label="R-26-00001 in the baseline" checked' in told
    assert f'value="{second}" aria-label="R-26-00002 in the baseline" checked' not in told


@pytest.mark.parametrize("sent", [{"baseline": "x"}, {"baseline": "9" * 40}, {"why-x": "because of it"}])
def test_set_limits_refuses_what_no_page_sends(desk: Client, chart: ControlChart, bench: Bench, sent: dict) -> None:
    answer = desk.post(reverse("control_chart-set_limits", args=["CS-A"]), choice(chart, bench, **sent))
    assert answer.status_code == 409
    assert not ControlLimits.objects.exists()


def test_record_leads_to_the_new_chart(desk: Client, bench: Bench) -> None:
    sent = {"code": "C-NaOH", "title": "sodium hydroxide", "titrant": bench.titrant.pk}
    answer = desk.post(reverse("control_chart-record"), sent)
    assert answer["Location"] == reverse("control_chart-detail", args=["C-NaOH"])
    assert "at least 20 that vary are needed" in shown(desk, "control_chart-detail", "C-NaOH")


def test_record_sent_empty_says_what_is_missing(desk: Client) -> None:
    answer = desk.post(reverse("control_chart-record"))
    assert answer.status_code == 400
    assert not ControlChart.objects.exists()


def test_capability_says_what_will_appear(desk: Client) -> None:
    assert "No product has limits yet" in shown(desk, "control_chart-capability")


def test_list_asks_as_much_for_many_points_as_for_one(desk: Client, bench: Bench, django_assert_num_queries) -> None:
    chart = some_chart(bench, ["12.30"])
    with CaptureQueriesContext(connection) as few:
        shown(desk, "control_chart-list")
    add_point(chart, bench, "12.35")
    with django_assert_num_queries(len(few)):
        shown(desk, "control_chart-list")


def test_capability_says_each_limit_in_words(desk: Client, bench: Bench) -> None:
    approved_standardization(bench)
    some_product(bench, some_version(bench), upper=None)
    told = shown(desk, "control_chart-capability")
    assert "<td>at least 0.70 g/100 mL</td>" in told
    assert "at least 20 results that vary are needed" in told
