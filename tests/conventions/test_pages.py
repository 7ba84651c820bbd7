"""One name, four places; and pages that a strict content security policy lets work."""

from __future__ import annotations

import re
from pathlib import Path

import pytest
from django.template.loader import get_template
from django.urls import URLPattern, get_resolver

ROOT = Path(__file__).resolve().parent.parent.parent
TEMPLATES = sorted((ROOT / "templates").rglob("*.html"))
FILES = {"validation/report.html"}  # written to a file that has to stand alone, never served
SERVED = [path for path in TEMPLATES if str(path.relative_to(ROOT / "templates")) not in FILES]
PYTHON = "\n".join(path.read_text() for path in (ROOT / "labrecords").rglob("*.py"))
MARKUP = "\n".join(path.read_text() for path in TEMPLATES)
PATTERNS = [found for found in get_resolver().url_patterns if isinstance(found, URLPattern)]
OURS = [found for found in PATTERNS if found.callback.__module__.startswith("labrecords.views")]


def relative(path: Path) -> str:
    return str(path.relative_to(ROOT / "templates"))


@pytest.mark.parametrize("pattern", OURS, ids=lambda found: found.name)
def test_address_is_named_after_noun_and_view(pattern: URLPattern) -> None:
    noun, view = pattern.callback.__module__.rsplit(".", 1)[1], pattern.callback.__name__
    assert pattern.name == f"{noun}-{view}"


@pytest.mark.parametrize("path", TEMPLATES, ids=relative)
def test_template_is_used_and_can_be_read(path: Path) -> None:
    get_template(relative(path))
    used = PYTHON + MARKUP
    assert f'"{relative(path)}"' in used or f"'{relative(path)}'" in used


@pytest.mark.parametrize("path", SERVED, ids=relative)
def test_page_has_no_inline_script_style_or_handler(path: Path) -> None:
    text = path.read_text()
    assert not re.search(r"<style\b|\sstyle=|\son[a-z]+=|javascript:", text, re.I)
    for attributes, content in re.findall(r"<script\b([^>]*)>(.*?)</script>", text, re.S | re.I):
        assert "src=" in attributes or "json" in attributes, content[:60]


def test_every_template_a_view_names_exists() -> None:
    for named in set(re.findall(r'"([a-z_]+/[a-z_/]+\.html)"', PYTHON)):
        get_template(named)
