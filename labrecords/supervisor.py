"""One command starts the laboratory: database, broker, migrations, demo, worker, beat and site; Ctrl-C stops all.

    python -m labrecords.supervisor

It is for one machine and one person who looks around. A laboratory runs the same programs under its own
supervisor, with its own PostgreSQL and broker: see docker-compose.yml and DEVELOPERS.md.
"""

from __future__ import annotations

import contextlib
import fcntl
import hashlib
import os
import signal
import socket
import subprocess
import sys
import time
import urllib.error
import urllib.request
from collections.abc import Iterator
from pathlib import Path
from typing import Any

from labrecords.local import APP, OWNER, Postgres, Valkey, cluster_dir, die_with_parent

HERE = Path(__file__).resolve().parent.parent
DATA = Path(os.environ.get("DATA_DIR", str(HERE / ".lab")))
FIRST_PORT = int(os.environ.get("PORT", "8000"))
STARTED = time.monotonic()


def say(sentence: str) -> None:
    """A line of progress with the seconds so far."""
    print(f"{time.monotonic() - STARTED:6.1f} s  {sentence}", flush=True)


def main() -> int:
    """Start everything in order, wait for a signal or a failure, stop everything in order."""
    stop: dict[str, int] = {}
    for number in (signal.SIGINT, signal.SIGTERM, signal.SIGHUP):
        signal.signal(number, lambda received, frame: stop.setdefault("signal", received))
    DATA.mkdir(parents=True, exist_ok=True)
    with contextlib.ExitStack() as stack:
        if not stack.enter_context(alone()):
            print(f"The laboratory of this folder runs already, at {(DATA / 'address').read_text().strip()}")
            return 1
        try:
            return run(stack, stop)
        except (RuntimeError, TimeoutError, subprocess.CalledProcessError) as problem:
            print(f"The laboratory could not start: {problem}", file=sys.stderr)
            return 1


@contextlib.contextmanager
def alone() -> Iterator[bool]:
    """Hold the folder's lock; the kernel gives it back whatever becomes of this process."""
    with open(DATA / "lock", "w") as lock:
        try:
            fcntl.flock(lock, fcntl.LOCK_EX | fcntl.LOCK_NB)
        except BlockingIOError:
            yield False
            return
        yield True


def run(stack: contextlib.ExitStack, stop: dict[str, int]) -> int:
    """The services, the database's content, the programs, and then waiting."""
    say("starting PostgreSQL and Valkey")
    postgres = Postgres(cluster_dir(DATA)).start()
    stack.callback(postgres.stop)
    valkey = Valkey(DATA / "valkey").start()
    stack.callback(valkey.stop)
    prepare(postgres, stop)
    if stop:
        return 0
    port = free_port()
    programs = start_programs(environment(postgres, APP, broker=valkey.url), port=port)
    stack.callback(stop_programs, programs)
    address = f"http://127.0.0.1:{port}/"
    if not first_page(address, programs, stop):
        return 0 if stop else failed(programs)
    (DATA / "address").write_text(address)
    greet(address)
    while not stop:
        if any(program.poll() is not None for program in programs.values()):
            return failed(programs)
        time.sleep(0.2)
    say("stopping")
    return 0


def prepare(postgres: Postgres, stop: dict[str, int]) -> None:
    """Roles, database, migrations, the demo on the first start, and the files the site serves."""
    filled = DATA / "filled"
    postgres.make_roles()
    if not filled.exists():
        postgres.drop_database()  # an interrupted first filling is begun again
        (DATA / "anchors.txt").unlink(missing_ok=True)
    postgres.make_database()
    owner = environment(postgres, OWNER, broker="memory://")
    say("bringing the database up to date")
    manage("migrate", "-v0", env=owner)
    if not filled.exists() and not stop:
        say("filling the demo laboratory (first start only)")
        manage("fill_demo", env=owner)
        filled.write_text(time.strftime("%Y-%m-%dT%H:%M:%S\n"))
    stamp, now = DATA / "static.stamp", static_state()
    if not stamp.exists() or stamp.read_text() != now:
        say("collecting the files the site serves")
        manage("collectstatic", "--noinput", "-v0", env=owner)
        stamp.write_text(now)


def environment(postgres: Postgres, role: str, *, broker: str) -> dict[str, str]:
    """The settings of the demo laboratory for one role."""
    return dict(
        os.environ, DATABASE_URL=postgres.url(role), BROKER_URL=broker, LAB_DEMO="1", DATA_DIR=str(DATA),
        DJANGO_SETTINGS_MODULE="labrecords.settings", PYTHONUNBUFFERED="1", OMP_NUM_THREADS="1",
        OPENBLAS_NUM_THREADS="1",
    )  # fmt: skip


def manage(*arguments: str, env: dict[str, str]) -> None:
    """Run one management command to its end."""
    command = [sys.executable, "manage.py", *arguments]
    subprocess.run(command, cwd=HERE, env=env, check=True, preexec_fn=die_with_parent(signal.SIGTERM))


def static_state() -> str:
    """A digest of the names, sizes and times of what is served, so that it is collected only when it changed."""
    files = sorted(path for path in (HERE / "static").rglob("*") if path.is_file())
    lines = [f"{path.relative_to(HERE)} {path.stat().st_size} {path.stat().st_mtime_ns}" for path in files]
    lines.append((HERE / "requirements.lock").read_text() if (HERE / "requirements.lock").exists() else "")
    return hashlib.sha256("\n".join(lines).encode()).hexdigest()


def free_port() -> int:
    """The first free loopback port from the wanted one on."""
    for port in range(FIRST_PORT, FIRST_PORT + 100):
        with socket.socket() as probe:
            probe.setsockopt(socket.SOL_SOCKET, socket.SO_REUSEADDR, 1)
            try:
                probe.bind(("127.0.0.1", port))
            except OSError:
                continue
            return port
    raise RuntimeError(f"No free port from {FIRST_PORT} to {FIRST_PORT + 99}. Set PORT to another.")


def start_programs(env: dict[str, str], *, port: int) -> dict[str, subprocess.Popen[bytes]]:
    """Site, worker and beat, each in its own process group and with its own log."""
    python = [sys.executable, "-W", "ignore::UserWarning", "-m"]
    commands: dict[str, list[str]] = {
        "site": [*python, "gunicorn", "labrecords.wsgi", "-b", f"127.0.0.1:{port}", "-w", "2", "--threads", "4",
                 "--graceful-timeout", "5", "--no-control-socket"],
        "worker": [*python, "celery", "-A", "labrecords", "worker", "-c", "2", "-l", "INFO", "--without-gossip",
                   "--without-mingle"],
        "beat": [*python, "celery", "-A", "labrecords", "beat", "-l", "WARNING", "-s", str(DATA / "beat"), "--pidfile="],
    }  # fmt: skip
    programs: dict[str, subprocess.Popen[bytes]] = {}
    for name, command in commands.items():
        say(f"starting the {name}")
        programs[name] = _program(name, command, env)
    return programs


def _program(name: str, command: list[str], env: dict[str, Any]) -> subprocess.Popen[bytes]:
    with open(DATA / f"{name}.log", "ab") as log:
        return subprocess.Popen(
            command, cwd=HERE, env=env, stdin=subprocess.DEVNULL, stdout=log, stderr=log, process_group=0,
            preexec_fn=die_with_parent(signal.SIGTERM),
        )  # fmt: skip


def first_page(address: str, programs: dict[str, subprocess.Popen[bytes]], stop: dict[str, int]) -> bool:
    """Wait until the site answers its first page."""
    end = time.monotonic() + 60
    while time.monotonic() < end and not stop:
        if any(program.poll() is not None for program in programs.values()):
            return False
        try:
            with urllib.request.urlopen(f"{address}healthz", timeout=5) as answer:
                if answer.status == 200:
                    return True
        except (urllib.error.URLError, OSError):
            time.sleep(0.1)
    return False


def failed(programs: dict[str, subprocess.Popen[bytes]]) -> int:
    """Say which program stopped by itself, with the end of its log."""
    for name, program in programs.items():
        if program.poll() is not None:
            print(f"The {name} stopped by itself:\n{(DATA / f'{name}.log').read_text()[-2000:]}", file=sys.stderr)
    return 1


def stop_programs(programs: dict[str, subprocess.Popen[bytes]]) -> None:
    """Site, beat, then worker; what the worker has begun it finishes."""
    for name in ("site", "beat", "worker"):
        if programs[name].poll() is None:
            programs[name].terminate()
    for program in programs.values():
        try:
            program.wait(15)
        except subprocess.TimeoutExpired:
            os.killpg(program.pid, signal.SIGKILL)
            program.wait()


def greet(address: str) -> None:
    """The address, the accounts of the demo, and how to stop."""
    accounts = DATA / "demo-accounts.txt"
    print(f"\nThe laboratory is open at {address}\n")
    if accounts.exists():
        print(accounts.read_text())
    print(f"Logs and data are in {DATA}. Ctrl-C stops everything; the next start keeps the data.\n", flush=True)


if __name__ == "__main__":
    sys.exit(main())
