"""The validation report: what this installation gives beside what is published, as one HTML file to keep."""

from __future__ import annotations

import platform
from collections.abc import Iterator, Mapping, Sequence
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

    @property
    def has_failed(self) -> bool:
        """Whether it casts doubt on a calculation; being slow on a busy machine does not."""
        return not self.is_met and not self.name.endswith("speed")


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
        "failed_benchmarks": sum(each.has_failed for each in benchmarks),
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
    text = "; ".join(_words(value, name=""))
    return text if len(text) <= LONGEST else f"{text[:LONGEST]} ..."


def _words(value: Any, *, name: str) -> Iterator[str]:
    """Plain data as words, such as "cp.value 1.7; n 20"; numbers to ten figures, for the eye alone."""
    before = f"{name} " if name else ""
    if isinstance(value, Mapping):
        for key, each in value.items():
            yield from _words(each, name=f"{name}.{key}" if name else str(key))
    elif isinstance(value, list | tuple):
        yield before + ", ".join(_plain(each) for each in value)
    else:
        yield before + _plain(value)


def _plain(value: Any) -> str:
    if isinstance(value, bool) or value is None:
        return {True: "yes", False: "no", None: "none"}[value]
    if isinstance(value, float):
        return f"{value:.10g}"
    if isinstance(value, Mapping):
        return f"({'; '.join(_words(value, name=''))})"
    return f"({', '.join(map(_plain, value))})" if isinstance(value, list | tuple) else str(value)
