"""The dossier: everything a result rests on, checked with nothing but what lies in it."""

from __future__ import annotations

import csv
import hashlib
import io
import json
import shutil
import subprocess
import zipfile
from pathlib import Path

import pytest

from labrecords.canonical import sha256_of
from labrecords.documents.dossier import dossier_of_run
from labrecords.models import Run, Signature
from tests.factories.bench import Bench, approved_run, approved_standardization, started_run
from tests.factories.register import CERTIFICATE

pytestmark = pytest.mark.django_db


def unpacked(run: Run) -> dict[str, bytes]:
    with zipfile.ZipFile(io.BytesIO(dossier_of_run(run))) as archive:
        assert archive.testzip() is None
        return {name: archive.read(name) for name in archive.namelist()}


@pytest.fixture
def run(bench: Bench) -> Run:
    approved_standardization(bench)
    return approved_run(bench)


def test_dossier_holds_each_signature_as_it_was_signed(run: Run) -> None:
    files = unpacked(run)
    signed = {name: content for name, content in files.items() if name.startswith("signatures/")}
    assert len(signed) == 4
    for name, content in signed.items():
        assert hashlib.sha256(content).hexdigest() == name.removesuffix(".json").rsplit("-", 1)[1]
    on_chain = Signature.objects.filter(record_number__in=[run.number, run.standardization.number])
    assert set(signed.values()) == {item.content.encode() for item in on_chain}


def test_dossier_holds_the_inputs_that_the_signature_names(run: Run) -> None:
    files = unpacked(run)
    calculation = run.calculation
    assert calculation is not None
    inputs = files[f"calculations/{run.number}-{calculation.number}-inputs.json"].decode()
    assert sha256_of(inputs) == calculation.inputs_sha256
    (reviewed,) = (text for name, text in files.items() if name.startswith(f"signatures/{run.number}-reviewed"))
    assert json.loads(reviewed)["calculation"]["inputs_sha256"] == calculation.inputs_sha256


def test_dossier_holds_the_certificate_as_it_arrived(run: Run, bench: Bench) -> None:
    certificates = [content for name, content in unpacked(run).items() if name.startswith("certificates/")]
    assert certificates == [CERTIFICATE[2]]


def test_dossier_is_checked_by_the_tool_of_every_system(run: Run, tmp_path: Path) -> None:
    tool = shutil.which("sha256sum")
    assert tool is not None
    with zipfile.ZipFile(io.BytesIO(dossier_of_run(run))) as archive:
        archive.extractall(tmp_path)
        names = set(archive.namelist())
    said = subprocess.run([tool, "-c", "SHA256SUMS"], cwd=tmp_path, capture_output=True, text=True, check=True).stdout
    assert {line.removesuffix(": OK") for line in said.splitlines()} == names - {"SHA256SUMS"}


def test_dossier_tells_the_trail_of_every_record(run: Run) -> None:
    rows = list(csv.DictReader(io.StringIO(unpacked(run)["trail.csv"].decode(), newline="")))
    assert {row["record"] for row in rows} == {run.number, run.standardization.number}
    assert any("approved run" in row["what"] and row["person"] == "Maren Okafor" for row in rows)
    assert any("end: empty → 12.35" in row["changes"] for row in rows)


def test_dossier_of_the_same_records_is_the_same_file(run: Run) -> None:
    assert dossier_of_run(run) == dossier_of_run(run)


def test_dossier_of_an_open_run_says_so(bench: Bench) -> None:
    approved_standardization(bench)
    run = started_run(bench)
    assert f"run {run.number}, sample CS-A-1, TA, version 1, open" in unpacked(run)["README.txt"].decode()


@pytest.mark.parametrize("name", ["../../etc/passwd", "/etc/passwd", "..\\x.pdf", "a b/ü.pdf", "..."])
def test_dossier_leads_into_no_other_folder(run: Run, as_enemy, name: str) -> None:
    as_enemy("UPDATE labrecords_storedfile SET name = %s", name)
    (path,) = (path for path in unpacked(run) if path.startswith("certificates/"))
    assert path.count("/") == 1
    assert "\\" not in path
    assert ".." not in path.split("/")
