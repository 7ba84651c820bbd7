"""make run, whole: a first start, a second beside it, kill -9, a later start, and the removal of its data."""

from __future__ import annotations

import os
import shutil
import signal
import subprocess
import sys
import tempfile
import time
import urllib.request
from collections.abc import Iterator
from pathlib import Path

import pytest

from labrecords.local import cluster_dir
from labrecords.local.process import command_of
from labrecords.local.programs import free_port

CHECKOUT = Path(__file__).resolve().parent.parent.parent
PROGRAMS = ("site", "worker", "beat", "valkey")
pytestmark = pytest.mark.slow


class Start:
    """One start of the laboratory in a folder."""

    def __init__(self, data: Path) -> None:
        self.data, self.output = data, data.with_suffix(".log")
        env = dict(os.environ, DATA_DIR=str(data), PORT="8400", LAB_DEMO_DAYS="15", LAB_HASHED_STATIC="1")
        with open(self.output, "w") as output:
            self.process = subprocess.Popen(
                [sys.executable, "-m", "labrecords.supervisor"], cwd=CHECKOUT, env=env, stdout=output,
                stderr=output, process_group=0,
            )  # fmt: skip

    def wait_for(self, sentence: str, *, seconds: float = 120) -> None:
        """Wait until it says a sentence."""
        end = time.monotonic() + seconds
        while sentence not in self.said():
            assert time.monotonic() < end, self.said()
            assert self.process.poll() is None, self.said()
            time.sleep(0.05)

    def said(self) -> str:
        """What it printed so far."""
        return self.output.read_text()

    def stop(self, number: signal.Signals = signal.SIGINT) -> int:
        """Send a signal and wait for the end."""
        self.process.send_signal(number)
        return self.process.wait(60)


@pytest.fixture(scope="module")
def data() -> Iterator[Path]:
    """An empty data folder, removed as make clean-data does."""
    parent = Path(tempfile.mkdtemp(prefix="labtest-", dir="/tmp"))
    folder = parent / "lab"
    yield folder
    assert clean(folder).returncode == 0
    assert not folder.exists()
    assert not cluster_dir(folder).exists()
    shutil.rmtree(parent)


def clean(folder: Path) -> subprocess.CompletedProcess[str]:
    """make clean-data YES=1."""
    command = [sys.executable, "-m", "labrecords.clean_data", str(folder), "--yes"]
    return subprocess.run(command, cwd=CHECKOUT, capture_output=True, text=True)


def get(path: str, data: Path) -> str:
    with urllib.request.urlopen((data / "address").read_text() + path, timeout=20) as answer:
        return answer.read().decode()


def running(data: Path) -> list[str]:
    """The programs whose numbers are on file and that still run."""
    numbers = {name: int((data / f"{name}.pid").read_text()) for name in PROGRAMS}
    return [name for name, number in numbers.items() if command_of(number)]


def test_start_stopped_while_it_fills_begins_again(data: Path) -> None:
    start = Start(data)
    start.wait_for("filling the demo laboratory")
    assert start.stop() == 0
    assert not (data / "filled").exists()
    again = Start(data)
    again.wait_for("it is removed and filled again")
    again.wait_for("Ctrl-C stops everything")
    assert "marram quay demo" in again.said()
    assert '"applied"' in get("healthz", data)
    assert again.stop() == 0
    assert running(data) == []


def test_later_start_keeps_the_data_and_is_quick(data: Path) -> None:
    marked = (data / "filled").read_text()
    begun = time.monotonic()
    start = Start(data)
    start.wait_for("Ctrl-C stops everything")
    assert time.monotonic() - begun < 30  # measured: 6 to 8 s on two idle cores
    assert "filling" not in start.said()
    assert (data / "filled").read_text() == marked
    assert "Sign in" in get("sign-in/", data)
    assert start.stop(signal.SIGTERM) == 0


def test_second_start_beside_it_names_the_address(data: Path) -> None:
    start = Start(data)
    start.wait_for("Ctrl-C stops everything")
    second = subprocess.run(
        [sys.executable, "-m", "labrecords.supervisor"], cwd=CHECKOUT, capture_output=True, text=True,
        env=dict(os.environ, DATA_DIR=str(data)), timeout=30,
    )  # fmt: skip
    assert second.returncode == 1
    assert (data / "address").read_text() in second.stdout
    assert "is running" in clean(data).stdout
    start.stop()


def test_start_after_kill_recovers(data: Path) -> None:
    start = Start(data)
    start.wait_for("Ctrl-C stops everything")
    start.stop(signal.SIGKILL)
    again = Start(data)
    again.wait_for("Ctrl-C stops everything")
    assert "filling" not in again.said()
    assert sorted(running(data)) == sorted(PROGRAMS)
    assert again.stop() == 0
    assert running(data) == []


def test_failure_of_a_program_stops_everything_and_names_it(data: Path) -> None:
    start = Start(data)
    start.wait_for("Ctrl-C stops everything")
    os.kill(int((data / "worker.pid").read_text()), signal.SIGKILL)
    assert start.process.wait(60) == 1
    assert "the worker stopped by itself" in start.said()
    assert running(data) == []


def test_taken_port_moves_to_the_next() -> None:
    import socket

    with socket.socket() as taken:
        taken.bind(("127.0.0.1", 0))
        taken.listen()
        port = taken.getsockname()[1]
        assert free_port(port) > port


@pytest.mark.parametrize("port", ["http", "80", "70000", "8000,"])
def test_bad_port_is_named_with_what_is_expected(tmp_path: Path, port: str) -> None:
    done = subprocess.run(
        [sys.executable, "-m", "labrecords.supervisor"], cwd=CHECKOUT, capture_output=True, text=True,
        env=dict(os.environ, DATA_DIR=str(tmp_path / "lab"), PORT=port), timeout=30,
    )  # fmt: skip
    assert done.returncode == 1
    assert f"PORT is '{port}'; expected a number from 1024 to 65535." in done.stderr
