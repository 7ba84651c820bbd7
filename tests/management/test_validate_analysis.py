"""manage.py validate_analysis: the report, a laboratory's own cases, the catalogue."""

from __future__ import annotations

import io
import json
from pathlib import Path
from typing import Any

import pytest
from django.core.management import CommandError, call_command

from analysis.catalogue import CATALOGUE
from labrecords.management.commands import validate_analysis

OWN: dict[str, Any] = {
    "id": "titre of 24 November", "calculation": "titrant_by_mass", "inputs": {
        "mass": 0.5105, "purity": 0.9998, "molar_mass": 204.221, "volume": 24.85,
    },
    "expected": 0.10057, "tolerance": 0.00001, "source": "worksheet 7 of the laboratory", "provenance": "own",
}  # fmt: skip


def run(*, quick: bool = True, **options: Any) -> str:
    out = io.StringIO()
    call_command("validate_analysis", stdout=out, quick=quick, **options)
    return out.getvalue()


def written(folder: Path, data: Any) -> Path:
    file = folder / "own.json"
    file.write_text(data if isinstance(data, str) else json.dumps(data), encoding="utf-8")
    return file


def test_validate_analysis_writes_every_published_check_into_the_report(tmp_path: Path) -> None:
    said = run(report=tmp_path / "report.html")
    page = (tmp_path / "report.html").read_text("utf-8")
    assert ", 0 failures" in said
    assert "<strong>Passed.</strong>" in page
    for file in (validate_analysis.PUBLISHED / "cases").glob("*.json"):
        for case in json.loads(file.read_text("utf-8")):
            assert case["id"].replace("'", "&#x27;") in page


def test_validate_analysis_takes_own_cases_into_the_same_report(tmp_path: Path) -> None:
    run(cases=written(tmp_path, [OWN]), report=tmp_path / "report.html")
    page = (tmp_path / "report.html").read_text("utf-8")
    assert "own.json (the laboratory's own cases)" in page
    assert "worksheet 7 of the laboratory" in page


def test_validate_analysis_fails_on_a_miss_and_still_writes_the_report(tmp_path: Path) -> None:
    file = written(tmp_path, [{**OWN, "expected": 0.1006}])
    with pytest.raises(CommandError, match="1 failures"):
        run(cases=file, report=tmp_path / "report.html")
    page = (tmp_path / "report.html").read_text("utf-8")
    assert "<strong>Not passed.</strong>" in page
    assert "titre of 24 November: missed" in page


@pytest.mark.parametrize(
    ("data", "what"),
    [
        ("{", "own.json: "),
        ({"id": 1}, "a list of cases is expected"),
        ([{"id": "a"}], "has no 'calculation'"),
    ],
)
def test_validate_analysis_says_why_a_file_cannot_be_used(tmp_path: Path, data: Any, what: str) -> None:
    with pytest.raises(CommandError, match=what):
        run(cases=written(tmp_path, data), report=tmp_path / "report.html")


def test_validate_analysis_names_a_file_that_does_not_exist(tmp_path: Path) -> None:
    with pytest.raises(CommandError, match=r"none.json cannot be read: No such file"):
        run(cases=tmp_path / "none.json", report=tmp_path / "report.html")


def test_validate_analysis_escapes_what_a_case_says(tmp_path: Path) -> None:
    run(cases=written(tmp_path, [{**OWN, "source": "<script>alert(1)</script>"}]), report=tmp_path / "r.html")
    assert "<script>" not in (tmp_path / "r.html").read_text("utf-8")


def test_validate_analysis_lists_every_calculation_with_its_inputs() -> None:
    said = run(catalogue=True)
    for name, calculation in CATALOGUE.items():
        assert f"{name}: {calculation.title}" in said
        assert all(field.meaning in said for field in calculation.fields)


def test_validate_analysis_shows_a_case_that_can_be_run_as_it_is(tmp_path: Path) -> None:
    said = run(schema=True)
    example = said[said.index("[\n") :]
    run(cases=written(tmp_path, example), report=tmp_path / "report.html")


@pytest.mark.parametrize(
    ("name", "script", "passes"),
    [
        ("accuracy", "if __name__ == '__main__': print('coverage 95 %')", True),
        ("accuracy", "if __name__ == '__main__': raise SystemExit(1)", False),
        ("fit_speed", "if __name__ == '__main__': raise SystemExit(print('coverage 95 %') or 1)", True),
    ],
)
def test_validate_analysis_runs_the_benchmarks_too(
    tmp_path: Path, monkeypatch, name: str, script: str, passes: bool
) -> None:
    (tmp_path / f"{name}.py").write_text(script, encoding="utf-8")
    monkeypatch.setattr(validate_analysis, "BENCHMARKS", tmp_path)
    if passes:
        run(quick=False, report=tmp_path / "report.html")
        assert "coverage 95 %" in (tmp_path / "report.html").read_text("utf-8")
        return
    with pytest.raises(CommandError, match="1 failures"):
        run(quick=False, report=tmp_path / "report.html")
