"""Plotly figures: the data that is drawn and the same as a table."""

import pytest

from labrecords.figures.budget import budget_figure, share_bar
from labrecords.figures.control_chart import control_chart_figure
from labrecords.figures.curve import curve_figure
from labrecords.figures.residuals import residual_figure

ENDPOINT = {
    "volume": 10.0, "u": 0.01, "family": "model", "kind": "equivalence point",
    "all": {"model": [{"volume": 10.0, "u": 0.01}], "gran": [{"volume": 10.5, "u": 0.03}], "segments": []},
    "derivative": [[5.0, 15.0], [0.1, 0.9]], "model": [[0.0, 20.0], [3.0, 11.0]],
    "residuals": [0.1, -0.2, 0.1],
}  # fmt: skip
VOLUME, READING = ["0.00", "10.00", "20.00"], ["3.00", "7.00", "11.00"]
LIMITS = {"centre": 6.1, "lower": 6.0, "upper": 6.2, "warn_lower": None, "warn_upper": None, "version": 1}
POINTS = [
    {"label": "R-26-00001", "value": 6.1, "url": "/runs/1", "signals": [], "out": False},
    {"label": "R-26-00002", "value": 6.25, "url": None, "signals": ["beyond the upper limit"], "out": True},
    {"label": "R-26-00003", "value": 6.12, "url": None, "signals": ["nine points on one side"], "out": False},
]


def curve(endpoint=ENDPOINT):
    return curve_figure(endpoint, volume=VOLUME, reading=READING, quantity="pH")


def names(figure):
    return [trace.name for trace in figure.data]


def test_curve_figure_marks_every_family_that_found_an_endpoint():
    assert names(curve()) == ["measured", "first derivative", "fitted model", "model, decides", "gran"]


def test_curve_figure_puts_an_endpoint_on_the_curve():
    gran = curve().data[-1]
    assert gran.y[0] == pytest.approx(7.2)  # a twentieth of the way from 7 to 11
    assert gran.error_x.array[0] == pytest.approx(0.06)


def test_curve_figure_without_an_endpoint_shows_what_was_measured():
    assert names(curve(None)) == ["measured"]


def test_curve_figure_tables_the_readings_as_recorded():
    assert curve().layout.meta["rows"][1] == ("10.00", "7.00")


def test_residual_figure_draws_a_point_each():
    figure = residual_figure(ENDPOINT["residuals"], volume=VOLUME, quantity="pH")
    assert list(figure.data[0].y) == [0.1, -0.2, 0.1]


def test_control_chart_figure_gives_each_signal_a_mark_and_words():
    figure = control_chart_figure(POINTS, limits=LIMITS, title="g/100 mL")
    assert list(figure.data[-1].marker.symbol) == ["circle", "x", "triangle-up"]
    told = [note.text for note in figure.layout.annotations]
    assert "beyond the upper limit" in told
    assert "upper limit 6.200" in told


def test_control_chart_figure_draws_only_the_limits_it_has():
    figure = control_chart_figure(POINTS, limits=LIMITS, title="g/100 mL")
    assert names(figure) == ["centre 6.100", "lower limit 6.000", "upper limit 6.200", "value"]


def test_control_chart_figure_draws_limits_that_widen():
    limits = LIMITS | {"upper": [6.15, 6.18, 6.2]}
    figure = control_chart_figure(POINTS, limits=limits, title="g/100 mL")
    assert list(figure.data[2].y) == [6.15, 6.18, 6.2]


def test_control_chart_figure_leads_from_a_point_to_its_run():
    figure = control_chart_figure(POINTS, limits=LIMITS, title="g/100 mL")
    assert figure.data[-1].customdata[0] == "/runs/1"


def test_budget_figure_has_the_largest_share_on_top():
    budget = [{"label": "pipette", "u": 0.008, "share": 0.2}, {"label": "burette", "u": 0.02, "share": 0.8}]
    figure = budget_figure({"budget": budget})
    assert list(figure.data[0].y) == ["pipette", "burette"]  # Plotly counts upwards
    assert figure.layout.meta["rows"][0] == ("burette", "0.020", "80.0\xa0%")


def test_share_bar_leaves_a_negative_share_hollow():
    assert 'fill="none"' in share_bar(-0.1)
    assert 'fill="none"' not in share_bar(0.1)
