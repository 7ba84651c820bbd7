"""The validation report: what this installation gives beside what is published, as one HTML file to keep."""

from __future__ import annotations

import json
import platform
from collections.abc import Sequence
from dataclasses import dataclass
from datetime import datetime
from typing import Any

import numpy as np
import scipy
from django.template.loader import render_to_string

from analysis import VERSION
from analysis.case import CheckedCase, asked_part

LONGEST = 160  # characters of a cell; longer inputs stand in the file of cases


@dataclass(frozen=True, slots=True)
class Topic:
    """The checked cases of one file."""

    title: str
    checked: Sequence[CheckedCase]
    is_own: bool = False

    @property
    def missed(self) -> int:
        """Cases in which something else was found."""
        return sum(not each.is_met for each in self.checked)

    @property
    def rows(self) -> list[dict[str, Any]]:
        """One row of the table for each case."""
        return [_row(each) for each in self.checked]


@dataclass(frozen=True, slots=True)
class Benchmark:
    """One benchmark as run: its name, what it printed and whether it ended well."""

    name: str
    printed: str
    is_met: bool


def validation_report(
    topics: Sequence[Topic],
    *,
    at: datetime,
    lab: str,
    misprints: Sequence[CheckedCase] = (),
    benchmarks: Sequence[Benchmark] = (),
) -> str:
    """The report as one HTML document that needs no other file."""
    checks = sum(len(topic.checked) for topic in topics)
    missed = sum(topic.missed for topic in topics)
    content = {
        "topics": topics, "at": at, "lab": lab, "checks": checks, "missed": missed, "benchmarks": benchmarks,
        "misprints": [_row(each) for each in misprints],
        "reproduced": sum(each.is_met for each in misprints),
        "failed_benchmarks": sum(not each.is_met for each in benchmarks),
        "machine": _machine(),
    }  # fmt: skip
    return render_to_string("validation/report.html", content)


def _machine() -> list[tuple[str, str]]:
    return [
        ("Calculations", VERSION),
        ("Python", f"{platform.python_implementation()} {platform.python_version()}"),
        ("numpy", np.__version__),
        ("scipy", scipy.__version__),
        ("System", f"{platform.system()} {platform.release()}, {platform.machine()}"),
    ]


def _row(checked: CheckedCase) -> dict[str, Any]:
    case = checked.case
    found = "refused" if checked.found is None else _short(asked_part(checked.found, case.expected))
    return {
        "id": case.id, "calculation": case.calculation, "inputs": _short(case.inputs),
        "expected": _short(case.expected), "tolerance": _short(case.tolerance), "found": found,
        "source": case.source, "provenance": case.provenance, "note": case.note,
        "is_met": checked.is_met, "misses": checked.misses,
    }  # fmt: skip


def _short(value: Any) -> str:
    text = value if isinstance(value, str) else json.dumps(_rounded(value), ensure_ascii=False)
    return text if len(text) <= LONGEST else f"{text[:LONGEST]} ..."


def _rounded(value: Any) -> Any:
    """Numbers to twelve figures, for the eye; the comparison was made with all of them."""
    if isinstance(value, float):
        return float(f"{value:.12g}")
    if isinstance(value, dict):
        return {key: _rounded(each) for key, each in value.items()}
    return [_rounded(each) for each in value] if isinstance(value, list | tuple) else value
