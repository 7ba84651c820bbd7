"""manage.py validate_analysis: do the calculations of this installation give what is published?"""

from __future__ import annotations

import json
import os
import subprocess
import sys
from collections.abc import Iterator, Sequence
from pathlib import Path
from typing import Any

from django.conf import settings
from django.core.management.base import BaseCommand, CommandError
from django.utils import timezone

from analysis.calculation import Field
from analysis.case import Case, CheckedCase, cases_from, check_case
from analysis.catalogue import CATALOGUE
from labrecords.documents.validation import Benchmark, Topic, validation_report

PUBLISHED = Path(settings.BASE_DIR) / "tests" / "published"
BENCHMARKS = Path(settings.BASE_DIR) / "tests" / "benchmarks"
LONGEST_BENCHMARK = 3600  # [s]


class Command(BaseCommand):
    help = (
        "Reruns all published checks and benchmarks and writes a dated report (HTML). Exits 1 when a check is missed, "
        "when a known misprint is reproduced, or when a benchmark fails."
    )
    requires_system_checks: list[str] = []

    def add_arguments(self, parser: Any) -> None:
        """What to run, and where the report goes."""
        parser.add_argument("--cases", type=Path, metavar="FILE", help="a file of your own cases, see --schema")
        parser.add_argument("--report", type=Path, metavar="FILE", help="where to write the report")
        parser.add_argument("--quick", action="store_true", help="leave the benchmarks out: seconds, not many minutes")
        parser.add_argument("--catalogue", action="store_true", help="list every calculation that can be named")
        parser.add_argument("--schema", action="store_true", help="say what a file of cases looks like")

    def handle(self, *args: Any, **options: Any) -> None:
        """List the catalogue, or run, write the report and say how it went."""
        if options["catalogue"] or options["schema"]:
            self.stdout.write("\n".join(_catalogue() if options["catalogue"] else _schema()))
            return
        topics = [*_published(), *_own(options["cases"])]
        misprints = [check_case(case) for case in _read(PUBLISHED / "misprints.json")]
        benchmarks = [] if options["quick"] else list(self._benchmarks())
        at = timezone.now()
        report = options["report"] or Path(settings.DATA_DIR) / f"validation-{at:%Y-%m-%d-%H%M%S}.html"
        page = validation_report(topics, at=at, lab=settings.LAB_NAME, misprints=misprints, benchmarks=benchmarks)
        report.parent.mkdir(parents=True, exist_ok=True)
        report.write_text(page, encoding="utf-8")
        self._say(topics, misprints, benchmarks, report)

    def _say(
        self,
        topics: Sequence[Topic],
        misprints: Sequence[CheckedCase],
        benchmarks: Sequence[Benchmark],
        report: Path,
    ) -> None:
        failures = 0
        for topic in topics:
            self.stdout.write(f"{'FAILED' if topic.missed else 'ok    '}  {topic.title}: {len(topic.checked)} checks")
            for checked in topic.checked:
                for miss in checked.misses:
                    self.stdout.write(f"        {checked.case.id}: {miss}")
            failures += topic.missed
        for checked in misprints:
            if checked.is_met:
                self.stdout.write(f"FAILED  {checked.case.id}: a known misprint is reproduced")
                failures += 1
        for benchmark in benchmarks:
            word = "FAILED" if benchmark.has_failed else "ok    " if benchmark.is_met else "slow  "
            self.stdout.write(f"{word}  benchmark {benchmark.name}")
            failures += benchmark.has_failed
        checks = sum(len(topic.checked) for topic in topics)
        self.stdout.write(f"{checks} checks, {failures} failures. Report: {report}")
        if failures:
            raise CommandError(f"{failures} failures. Do not use these calculations before each is explained.")

    def _benchmarks(self) -> Iterator[Benchmark]:
        scripts = sorted(file for file in BENCHMARKS.glob("*.py") if "__main__" in file.read_text("utf-8"))
        if not scripts:
            raise CommandError(f"There are no benchmarks in {BENCHMARKS}; install them, or say --quick.")
        for script in scripts:
            self.stdout.write(f"        running benchmark {script.stem}")
            self.stdout.flush()
            yield _run(script)


def _published() -> Iterator[Topic]:
    files = sorted((PUBLISHED / "cases").glob("*.json"))
    if not files:
        raise CommandError(f"There are no published cases in {PUBLISHED / 'cases'}; the installation is not complete.")
    for file in files:
        title = file.stem.replace("_", " ").capitalize()
        yield Topic(title, [check_case(case) for case in _read(file)])


def _own(file: Path | None) -> list[Topic]:
    return [] if file is None else [Topic(file.name, [check_case(case) for case in _read(file)], is_own=True)]


def _read(file: Path) -> tuple[Case, ...]:
    try:
        return cases_from(json.loads(file.read_text(encoding="utf-8-sig")))
    except OSError as problem:
        raise CommandError(f"{file} cannot be read: {problem.strerror}.") from problem
    except ValueError as problem:
        raise CommandError(f"{file}: {problem}") from problem


def _run(script: Path) -> Benchmark:
    environment = {**os.environ, "PYTHONPATH": str(settings.BASE_DIR)}
    try:
        done = subprocess.run(
            [sys.executable, str(script)], cwd=settings.BASE_DIR, env=environment, capture_output=True,
            text=True, timeout=LONGEST_BENCHMARK, check=False,
        )  # fmt: skip
    except subprocess.TimeoutExpired:
        return Benchmark(script.stem, f"Not finished after {LONGEST_BENCHMARK} s.", is_met=False)
    return Benchmark(script.stem, done.stdout + done.stderr, is_met=done.returncode == 0)


def _catalogue() -> Iterator[str]:
    for name, calculation in sorted(CATALOGUE.items()):
        yield f"{name}: {calculation.title}"
        yield from (f"    {_field(field)}" for field in calculation.fields)
        yield f"    gives {calculation.gives}"


def _field(field: Field) -> str:
    unit = f" [{field.unit}]" if field.unit else ""
    return f"{field.name}{unit}{'' if field.is_needed else ' (optional)'}: {field.meaning}"


def _schema() -> Iterator[str]:
    yield (sys.modules["analysis.case"].__doc__ or "").strip()
    yield "\nFor example:"
    yield json.dumps([vars_of(_read(PUBLISHED / "cases" / "conformity.json")[0])], indent=1, ensure_ascii=False)


def vars_of(case: Case) -> dict[str, Any]:
    """The keys of a case as they stand in a file."""
    return {key: getattr(case, key) for key in Case.__slots__ if getattr(case, key)}
