"""The programs of a start: management commands, site, worker and beat."""

from __future__ import annotations

import contextlib
import os
import signal
import socket
import subprocess
import sys
import time
import urllib.error
import urllib.request
from collections.abc import Callable
from pathlib import Path

from labrecords.local.process import die_with_parent, end_left_over

CHECKOUT = Path(__file__).resolve().parent.parent.parent
PYTHON = [sys.executable, "-W", "ignore::UserWarning"]  # Celery warns of root; its messages are JSON
Environment = dict[str, str]
Program = subprocess.Popen[bytes]


def manage(*arguments: str, env: Environment, stopping: Callable[[], bool]) -> None:
    """Run one management command to its end, or end it when the person stops the laboratory."""
    process = subprocess.Popen(
        [*PYTHON, "manage.py", *arguments], cwd=CHECKOUT, env=env, stdin=subprocess.DEVNULL, process_group=0,
        preexec_fn=die_with_parent(signal.SIGKILL),
    )  # fmt: skip
    while process.poll() is None:
        if stopping():
            process.kill()  # what it has not finished is begun again at the next start
            process.wait()
            return
        with contextlib.suppress(subprocess.TimeoutExpired):
            process.wait(0.1)
    if process.returncode:
        raise RuntimeError(f"manage.py {arguments[0]} ended with {process.returncode}; what it said stands above.")


def commands(data: Path, *, port: int) -> dict[str, list[str]]:
    """The command of each program, in the order of their start."""
    celery = [*PYTHON, "-m", "celery", "-A", "labrecords"]
    return {
        "site": [*PYTHON, "-m", "gunicorn", "labrecords.wsgi", "-b", f"127.0.0.1:{port}", "-w", "2",
                 "--threads", "4", "--preload", "--graceful-timeout", "5", "--no-control-socket"],
        "worker": [*celery, "worker", "-c", "2", "-l", "INFO", "--without-gossip", "--without-mingle"],
        "beat": [*celery, "beat", "-l", "WARNING", "-s", str(data / "beat"), "--pidfile="],
    }  # fmt: skip


def start_program(name: str, command: list[str], *, data: Path, env: Environment) -> Program:
    """Start one program in its own process group, with its own log and its number in a file."""
    with open(data / f"{name}.log", "ab") as log:
        program = subprocess.Popen(
            command, cwd=CHECKOUT, env=env, stdin=subprocess.DEVNULL, stdout=log, stderr=log, process_group=0,
            preexec_fn=die_with_parent(signal.SIGTERM),
        )  # fmt: skip
    (data / f"{name}.pid").write_text(f"{program.pid}\n")
    return program


def stop_programs(programs: dict[str, Program]) -> None:
    """Site, beat, then worker; what the worker has begun it finishes."""
    for name in ("site", "beat", "worker"):
        if name in programs and programs[name].poll() is None:
            programs[name].terminate()
    for program in programs.values():
        try:
            program.wait(15)
        except subprocess.TimeoutExpired:
            os.killpg(program.pid, signal.SIGKILL)
            program.wait()


def end_left_overs(data: Path) -> None:
    """End what a killed start left behind, so that nothing of it works beside the new one."""
    for name, naming in (
        ("site", "gunicorn"),
        ("beat", "celery"),
        ("worker", "celery"),
        ("valkey", "valkey"),
    ):
        with contextlib.suppress(OSError, ValueError):
            pid = int((data / f"{name}.pid").read_text())
            end_left_over(pid, naming=naming, number=signal.SIGTERM)


def free_port(first: int) -> int:
    """The first free loopback port from the wanted one on."""
    for port in range(first, min(first + 100, 65536)):
        with socket.socket() as probe:
            probe.setsockopt(socket.SOL_SOCKET, socket.SO_REUSEADDR, 1)
            try:
                probe.bind(("127.0.0.1", port))
            except OSError:
                continue
            return port
    raise RuntimeError(f"No free port from {first} to {first + 99}. Set PORT to another.")


def first_page(address: str, *, seconds: float = 60, still: Callable[[], bool]) -> None:
    """Wait until the site is healthy and serves the page where people sign in, while ``still`` says so."""
    end, problem = time.monotonic() + seconds, "no answer"
    while still():
        try:
            for path in ("healthz", "sign-in/"):
                with urllib.request.urlopen(address + path, timeout=10):
                    pass
            return
        except (urllib.error.URLError, OSError) as found:
            problem = str(found)
        if time.monotonic() > end:
            raise RuntimeError(f"The first page did not come within {seconds:.0f} s: {problem}")
        time.sleep(0.1)


def check_running(programs: dict[str, Program], *, data: Path) -> None:
    """Raise with the end of its log when a program stopped by itself."""
    for name, program in programs.items():
        if program.poll() is not None:
            ending = (data / f"{name}.log").read_text(errors="replace")[-2000:]
            raise RuntimeError(f"the {name} stopped by itself:\n{ending}")
