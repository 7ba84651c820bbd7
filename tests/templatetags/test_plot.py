"""A figure in a page: its place, its data, its table."""

import json
import re

import plotly.graph_objects as go
from django.template import Context, Template


def page(label="Titration curve", name="measured"):
    figure = go.Figure(data=[go.Scatter(x=[1.0, 2.0], y=[3.0, 4.0], name=name)])
    figure.layout.meta = {"columns": ["Volume, mL", "pH"], "rows": [["1.00", "3.00"], ["2.00", "4.00"]]}
    return Template("{% load plot %}{% plot figure label %}").render(Context({"figure": figure, "label": label}))


def test_plot_carries_the_figure_as_data():
    text = re.search(r'<script type="application/json">(.*?)</script>', page(), re.DOTALL).group(1)
    assert json.loads(text)["data"][0]["name"] == "measured"


def test_plot_cannot_be_closed_by_its_data():
    assert "</script><b>" not in page(name="</script><b>")


def test_plot_repeats_its_numbers_as_a_table():
    assert '<td class="n">4.00</td>' in page()


def test_plot_is_named_for_a_screen_reader():
    assert 'aria-label="Titration curve"' in page()
