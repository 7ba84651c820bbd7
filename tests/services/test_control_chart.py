"""Control charts: recorded once, their limits computed from a baseline, signed, and never changed."""

from __future__ import annotations

from itertools import pairwise
from typing import Any

import pytest
from django.db import DatabaseError, transaction

from labrecords.canonical import sha256_of
from labrecords.models import ControlChart, ControlLimits, Signature, User
from labrecords.queries.control_chart import effective_limits, points_of, signals_on, versions_of
from labrecords.services import audit
from labrecords.services.control_chart import record_chart
from tests.factories.bench import Bench, approved_standardization
from tests.factories.charts import add_point, limits_of, some_chart
from tests.factories.people import signed_by
from tests.support.trail import all_records, one_event, refusal_of

pytestmark = pytest.mark.django_db


def chart_of(bench: Bench, **given: Any) -> ControlChart:
    said = {"by": bench.supervisor, "code": "C-NaOH", "title": "sodium hydroxide", "titrant": bench.titrant}
    return record_chart(**said | given)


def test_record_chart_is_one_event(bench: Bench) -> None:
    with one_event("control_chart.record"):
        chart = chart_of(bench)
    assert (chart.titrant, chart.control_sample) == (bench.titrant, None)


@pytest.mark.parametrize(
    ("given", "sentence"),
    [
        ({"code": ""}, "Code is empty"),
        ({"code": "a/b"}, "letters, digits, spaces, dots"),
        ({"code": "record"}, "a word that the site uses itself"),
        ({"title": " "}, "Title is empty"),
        ({"titrant": None}, "electrode's slope: choose one"),
    ],
)
def test_record_chart_refuses(bench: Bench, given: dict[str, Any], sentence: str) -> None:
    assert sentence in refusal_of(chart_of, bench, **given)


def test_record_chart_refuses_a_code_in_use_and_an_analyst(bench: Bench) -> None:
    chart_of(bench)
    assert "C-NaOH is recorded already" in refusal_of(chart_of, bench, code="c-naoh")
    assert "Ines Castell is not a supervisor" in refusal_of(chart_of, bench, code="X", by=bench.analyst)


def test_points_are_approved_values_with_their_runs(bench: Bench) -> None:
    chart = some_chart(bench, ["12.30", "12.35"])
    assert [point.number for point in points_of(chart)] == ["R-26-00001", "R-26-00002"]
    assert [point.noun for point in points_of(chart_of(bench))] == ["standardization"]


def test_set_limits_is_the_mean_and_the_mean_moving_range(bench: Bench) -> None:
    chart = some_chart(bench)
    with one_event("control_chart.set_limits"):
        limits = limits_of(chart, bench)
    values = [point.value for point in points_of(chart)]
    ranges = [abs(b - a) for a, b in pairwise(values)]
    assert limits.centre == pytest.approx(sum(values) / 10)
    assert limits.mean_moving_range == pytest.approx(sum(ranges) / 9)
    # d2 = 1.128 of two values: ISO 7870-2:2013 and every table of control-chart constants
    assert limits.sigma == pytest.approx(sum(ranges) / 9 / 1.128, rel=1e-3)


def test_set_limits_leaves_an_excluded_point_and_its_ranges_out(bench: Bench) -> None:
    chart = some_chart(bench, ["12.30", "12.35", "12.25", "12.30", "14.90", *["12.30", "12.35"] * 4])
    odd = points_of(chart)[4].calculation_id
    limits = limits_of(chart, bench, excluded={odd: "the pipette dripped after delivery"})
    assert limits.excluded == [{"calculation": odd, "why": "the pipette dripped after delivery"}]
    assert limits.centre + 3 * limits.sigma < 0.76
    signals = signals_on(points_of(chart), versions_of(chart))
    assert [(item.point.number, item.rule) for item in signals] == [("R-26-00005", "one point beyond three sigma")]


def test_set_limits_signs_exactly_what_is_stored(bench: Bench) -> None:
    limits = limits_of(some_chart(bench), bench)
    signature = Signature.objects.get(noun="control_limits", record_id=limits.pk)
    assert (signature.meaning, signature.signer) == ("limits set by", bench.supervisor)
    assert sha256_of(signature.content) == signature.content_sha256
    assert repr(limits.centre) in signature.content


def test_set_limits_supersedes_and_points_keep_their_limits(bench: Bench) -> None:
    chart = some_chart(bench)
    first = limits_of(chart, bench)
    far = add_point(chart, bench, "12.55")
    second = limits_of(chart, bench, reason="the burette was exchanged")
    first.refresh_from_db()
    chart = ControlChart.objects.get(pk=chart.pk)
    assert (first.state, second.number, effective_limits(chart)) == ("superseded", 2, second)
    add_point(chart, bench, "12.55")
    assert [item.point.number for item in signals_on(points_of(chart), versions_of(chart))] == [far.number]


@pytest.mark.parametrize(
    ("given", "sentence"),
    [
        ({"rules": []}, "Choose at least one run rule"),
        ({"rules": ["a feeling"]}, "Rule 'a feeling' is not known"),
        ({"reason": " "}, "Reason is empty"),
        ({"baseline": [0]}, "names points that are not on this chart"),
        ({"baseline": []}, "The baseline has 0 points; at least 10 are needed"),
        ({"excluded": {0: "a cause that was found"}}, "left out that is not in the baseline"),
    ],
)
def test_set_limits_refuses(bench: Bench, given: dict[str, Any], sentence: str) -> None:
    assert sentence in refusal_of(limits_of, some_chart(bench, ["12.30"]), bench, **given)


def test_set_limits_refuses_values_that_never_vary(bench: Bench) -> None:
    chart = some_chart(bench, ["12.30"] * 10)
    assert "All values are the same" in refusal_of(limits_of, chart, bench)


def test_set_limits_refuses_an_exclusion_without_a_sentence(bench: Bench) -> None:
    chart = some_chart(bench, ["12.30"])
    key = points_of(chart)[0].calculation_id
    assert "R-26-00001 is left out without a sentence" in refusal_of(limits_of, chart, bench, excluded={key: "odd"})


def test_set_limits_refuses_analysts_and_wrong_passwords(bench: Bench) -> None:
    chart = some_chart(bench)
    assert "A supervisor sets limits" in refusal_of(limits_of, chart, bench, by=bench.analyst)
    wrong = signed_by(bench.supervisor, password="wrong")
    assert "The password is not right" in refusal_of(limits_of, chart, bench, credentials=wrong)


def test_set_limits_writes_nothing_without_a_trail(bench: Bench, break_trail) -> None:
    chart = some_chart(bench)
    before = all_records()
    break_trail()
    with pytest.raises(DatabaseError, match="no room for the trail"):
        limits_of(chart, bench)
    assert all_records() == before


def test_limits_never_change_once_they_are_signed(bench: Bench) -> None:
    limits = limits_of(some_chart(bench), bench)
    with (
        pytest.raises(DatabaseError),
        transaction.atomic(),
        audit.event("control_chart.set_limits", by=bench.supervisor),
    ):
        ControlLimits.objects.filter(pk=limits.pk).update(sigma=limits.sigma * 2)


def test_titrant_chart_counts_standardizations(bench: Bench, supervisor: User) -> None:
    approved_standardization(bench)
    (point,) = points_of(chart_of(bench))
    assert (point.noun, point.label) == ("standardization", bench.lot.number)
