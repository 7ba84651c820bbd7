"""The plotting script comes out of its package, and nothing else of it."""

from pathlib import Path

from django.contrib.staticfiles import finders

from labrecords.static_finder import PlotlyFinder


def test_find_gives_the_script_of_the_installed_package():
    found = Path(finders.find("vendor/plotly.min.js"))
    assert found.stat().st_size > 1_000_000
    assert "plotly.js" in found.read_text(encoding="utf-8")[:300]


def test_find_gives_nothing_else_of_the_package():
    assert PlotlyFinder().find("vendor/widgetbundle.js") == []
    assert PlotlyFinder().find("vendor/plotly.min.js", find_all=True) != []


def test_list_gives_one_file_with_its_folder():
    [(name, storage)] = PlotlyFinder().list(None)
    assert f"{storage.prefix}/{name}" == "vendor/plotly.min.js"
    assert storage.exists(name)


def test_find_gives_htmx_and_our_own_files():
    for name in ("django_htmx/htmx-2.min.js", "css/tokens.css", "js/autosave.js", "favicon.svg"):
        assert finders.find(name), name
