"""Charts of every kind on pages: what they draw agrees with the mathematics, what they tell with the settings."""

from __future__ import annotations

from decimal import Decimal as D
from typing import Any

import pytest
from django.test import Client

from analysis.ewma_cusum import cusum, ewma
from analysis.run_length import cusum_run_length, ewma_run_length
from labrecords.errors import Refused
from labrecords.models import ControlChart
from labrecords.queries.chart_kinds import averages, means_and_spread, moving_ranges, run_lengths, sums
from labrecords.queries.control_chart import points_of, signals_on, versions_of
from labrecords.services.control_chart import record_chart
from labrecords.services.instrument import record_calibration
from tests.factories.bench import Bench, approved_run, approved_standardization
from tests.factories.charts import TITRES, add_point, limits_of, some_chart
from tests.factories.people import typed_by
from tests.factories.register import calibrated, days_ago

pytestmark = pytest.mark.django_db
DRIFTING = ["12.40", "12.40", "12.45", "12.45", "12.45", "12.50"]


@pytest.fixture
def chart(bench: Bench) -> ControlChart:
    return some_chart(bench)


@pytest.fixture
def desk(client: Client, bench: Bench) -> Client:
    client.force_login(bench.supervisor)
    return client


def drifted(chart: ControlChart, bench: Bench, **given: Any) -> ControlChart:
    limits_of(chart, bench, **given)
    for titre in DRIFTING:
        add_point(chart, bench, titre)
    return chart


def test_charts_with_memory_draw_what_analysis_says(chart, bench) -> None:
    limits = limits_of(drifted(chart, bench), bench)
    points, versions = points_of(chart), [limits]
    values, of = [point.value for point in points], {"target": limits.centre, "sigma": limits.sigma}
    average, summed = ewma(values, **of), cusum(values, **of)
    assert averages(points, versions).values == pytest.approx(average.z)
    assert averages(points, versions).upper == pytest.approx(average.upper)
    assert sums(points, versions).upper == pytest.approx(summed.upper)
    assert sums(points, versions).lower == pytest.approx(summed.lower)


def test_moving_ranges_have_the_limit_of_two(chart, bench) -> None:
    limits = limits_of(chart, bench)
    drawn = moving_ranges(points_of(chart), [limits])
    assert len(drawn.values) == len(TITRES) - 1
    # D4 for subgroups of two is 3.267 (ISO 7870-2, table of factors).
    assert drawn.upper[0] == pytest.approx(3.267 * limits.mean_moving_range, rel=2e-4)


def test_new_limits_begin_to_count_anew(chart, bench) -> None:
    first = limits_of(chart, bench)
    for titre in DRIFTING:
        add_point(chart, bench, titre)
    second = limits_of(chart, bench)
    add_point(chart, bench, "12.60")
    points = points_of(chart)
    drawn = averages(points, versions_of(chart))
    assert drawn.centre[0] == first.centre
    assert drawn.centre[-1] == second.centre
    newest = 0.2 * points[-1].value + 0.8 * second.centre
    assert drawn.values[-1] == pytest.approx(newest)


def test_charts_with_memory_signal_where_the_limits_say_so(chart, bench) -> None:
    drifted(chart, bench)
    assert signals_on(points_of(chart), versions_of(chart)) == []
    other = limits_of(chart, bench, baseline=[point.calculation_id for point in points_of(chart)[:10]],
                      also=["ewma", "cusum"], memory={"cusum_interval": 3.0})  # fmt: skip
    rules = {signal.rule for signal in signals_on(points_of(chart), [other])}
    assert rules == {"weighted average beyond its limits", "cumulative sum beyond its interval"}


@pytest.mark.parametrize("kind", ["individuals", "ewma", "cusum", "means"])
def test_page_of_each_kind_leads_to_the_records(desk: Client, chart, bench, kind) -> None:
    limits_of(drifted(chart, bench), bench)
    answer = desk.get("/charts/CS-A/", {"as": kind})
    page = answer.content.decode()
    assert answer.status_code == 200
    assert 'aria-current="page"' in page
    if kind == "means":
        assert "Runs with two or more titrations that differ are needed" in page
    else:
        assert "data-plot" in page
        assert "/runs/R-" in page
        assert "none: a false alarm" in page


def test_means_and_spread_of_runs_that_differ_inside(chart, bench) -> None:
    run = add_point(chart, bench, "12.30")
    outputs = run.calculation.outputs
    assert [line["in_set"] for line in outputs["titrations"]] == [True, True]
    assert means_and_spread(chart, points_of(chart), None, spread="range") is None  # all titres of a run are the same


def test_run_lengths_are_solved_for_the_settings_in_force(chart, bench) -> None:
    limits = limits_of(chart, bench, memory={"ewma_weight": 0.1, "ewma_width": 2.7, "cusum_interval": 4.0})
    found = run_lengths(limits, "ewma")
    assert found.lengths[0] == pytest.approx(ewma_run_length(weight=0.1, width=2.7))
    # k = 0.5 and h = 4 give 168 points in control and 8.38 at one sigma (Montgomery, table of run lengths).
    found = run_lengths(limits, "cusum")
    assert found.lengths[0] == pytest.approx(168, abs=0.5)
    assert found.lengths[2] == pytest.approx(8.38, abs=0.01)
    assert found.lengths[1] == cusum_run_length(reference=0.5, interval=4.0, shift=0.5)
    assert run_lengths(limits, "individuals").lengths[0] == pytest.approx(370.4, abs=0.1)


@pytest.mark.parametrize(
    ("memory", "sentence"),
    [
        ({"ewma_weight": 0.0}, "Weight of the average, lambda, is 0; 0.01 to 1 is expected."),
        ({"ewma_width": 9.0}, "Width of its limits, L, is 9; 1 to 5"),
        ({"cusum_reference": -1.0}, "Reference value k is -1"),
        ({"cusum_interval": 99.0}, "Decision interval h is 99"),
    ],
)
def test_settings_out_of_range_are_refused(chart, bench, memory, sentence) -> None:
    with pytest.raises(Refused, match=sentence):
        limits_of(chart, bench, memory=memory)


def test_unknown_chart_with_memory_is_refused(chart, bench) -> None:
    with pytest.raises(Refused, match="'mosum' is no chart with memory"):
        limits_of(chart, bench, also=["mosum"])


def test_settings_are_typed_and_signed(desk: Client, chart, bench) -> None:
    sent = {
        "baseline": [point.calculation_id for point in points_of(chart)], "rules": ["one point beyond three sigma"],
        "limits_reason": "the first ten values", "also": ["cusum"], "ewma_weight": "0,1", "cusum_interval": "4",
    } | typed_by(bench.supervisor)  # fmt: skip
    wrong = desk.post("/charts/CS-A/limits/", sent | {"ewma_width": "wide"})
    assert wrong.status_code == 409
    assert "Width of its limits, L is “wide”" in wrong.content.decode()
    assert desk.post("/charts/CS-A/limits/", sent).status_code == 302
    limits = chart.limits.get()
    assert (limits.also, limits.ewma_weight, limits.cusum_interval) == (["cusum"], 0.1, 4.0)
    assert limits.ewma_width == 2.962


def test_blank_of_a_method_and_slope_of_an_electrode_have_charts(desk: Client, bench, supervisor) -> None:
    approved_standardization(bench)
    run = approved_run(bench)
    blank = record_chart(by=supervisor, code="B-TA", title="blank", method=run.method_version.method)
    assert [point.value for point in points_of(blank)] == [0.05]
    electrode = calibrated(supervisor, "electrode")
    record_calibration(
        electrode, by=supervisor, calibrated_on=days_ago(0), due_on=days_ago(-90), performed_by="the bench",
        slope_percent=D("98.5"),
    )  # fmt: skip
    slope = record_chart(by=supervisor, code="E-1", title="slope", instrument=electrode)
    assert points_of(slope)[-1].value == 98.5
    for code in ("B-TA", "E-1"):
        assert desk.get(f"/charts/{code}/").status_code == 200
    with pytest.raises(Refused, match="only an electrode has a slope"):
        record_chart(by=supervisor, code="E-2", title="slope", instrument=bench.burette)
