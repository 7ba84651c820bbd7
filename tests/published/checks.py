"""Published cases as tests read them: one per check, named by its id."""

from __future__ import annotations

import json
from pathlib import Path

import pytest

from analysis.case import Case, cases_from, check_case

HERE = Path(__file__).parent


def published(*topics: str) -> pytest.MarkDecorator:
    """One test for each case of these topics (files of ``cases``)."""
    cases = [case for topic in topics for case in _read(HERE / "cases" / f"{topic}.json")]
    return pytest.mark.parametrize("case", cases, ids=[case.id for case in cases])


def misprints() -> pytest.MarkDecorator:
    """One test for each printed value that is known to be wrong."""
    cases = _read(HERE / "misprints.json")
    return pytest.mark.parametrize("case", cases, ids=[case.id for case in cases])


def assert_agrees(case: Case) -> None:
    """What is found is what is published, within the tolerance of the case."""
    checked = check_case(case)
    assert checked.is_met, f"{case.source} ({case.provenance}): {'; '.join(checked.misses)}. {case.note}"


def assert_differs(case: Case) -> None:
    """What is found is not what a misprint says; the calculation itself does run."""
    checked = check_case(case)
    assert checked.found is not None, checked.misses
    assert not checked.is_met, f"{case.source}: {case.note}"


def _read(file: Path) -> tuple[Case, ...]:
    return cases_from(json.loads(file.read_text(encoding="utf-8")))
