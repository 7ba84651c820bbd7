"""How long a file and a function may be, and what is never left in the code."""

from __future__ import annotations

import ast
import re
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parent.parent.parent
CODE = [
    path
    for folder in ("analysis", "labrecords", "tests")
    for path in sorted((ROOT / folder).rglob("*.py"))
    if "migrations" not in path.parts
]
PAGES = [path for folder in ("templates", "static") for path in sorted((ROOT / folder).rglob("*.*"))]
LEFT_OVER = re.compile("TO" + r"DO\b|FIX" + r"ME\b|X" + r"XX\b|NotImplemented" + "Error")


def name(path: Path) -> str:
    return str(path.relative_to(ROOT))


def length(function: ast.FunctionDef | ast.AsyncFunctionDef) -> int:
    """Lines of a function without its docstring."""
    first = function.body[0]
    says = isinstance(first, ast.Expr) and isinstance(first.value, ast.Constant)
    docstring = (first.end_lineno or 0) - first.lineno + 1 if says else 0
    return (function.end_lineno or 0) - function.lineno + 1 - docstring


@pytest.mark.parametrize("path", CODE, ids=name)
def test_files_and_functions_are_short(path: Path) -> None:
    text = path.read_text()
    assert len(text.splitlines()) <= 300
    functions = [node for node in ast.walk(ast.parse(text)) if isinstance(node, ast.FunctionDef)]
    assert [found.name for found in functions if length(found) > 40] == []


@pytest.mark.parametrize("path", [*CODE, *PAGES], ids=name)
def test_nothing_is_left_for_later(path: Path) -> None:
    if path.suffix in {".py", ".html", ".js", ".css"}:
        assert not LEFT_OVER.search(path.read_text())


def test_only_services_write_records() -> None:
    writing = re.compile(
        r"\.objects\.(create|bulk_create|bulk_update|get_or_create|update_or_create)\(|\.save\((\)|update_fields|force_)|\.delete\(\)"
    )
    layers = (
        "views",
        "api",
        "forms",
        "queries",
        "rules",
        "figures",
        "documents",
        "imports",
        "templatetags",
        "models",
    )
    found = [
        name(path)
        for layer in layers
        for path in (ROOT / "labrecords" / layer).rglob("*.py")
        if writing.search(path.read_text())
    ]
    assert found == []
