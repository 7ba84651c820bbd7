"""One command starts database, broker, migrations, demo, worker, beat and site; Ctrl-C stops all.

    python -m labrecords.supervisor

It is for one machine and one person who looks around. A laboratory runs the same programs under its own
supervisor, with its own PostgreSQL and broker: see docker-compose.yml and DEVELOPERS.md.
"""

from __future__ import annotations

import contextlib
import fcntl
import hashlib
import os
import secrets
import signal
import sys
import time
from collections.abc import Callable, Iterator
from pathlib import Path

from labrecords.local import APP, OWNER, Postgres, Valkey, cluster_dir
from labrecords.local import programs as local

DATA = Path(os.environ.get("DATA_DIR") or local.CHECKOUT / ".lab").resolve()
STARTED = time.monotonic()
Stopping = Callable[[], bool]


def say(sentence: str) -> None:
    """A line of progress with the seconds so far."""
    print(f"{time.monotonic() - STARTED:6.1f} s  {sentence}", flush=True)


def main() -> int:
    """Start everything in order, wait for a signal or a failure, stop everything in order."""
    received: list[int] = []
    for number in (signal.SIGINT, signal.SIGTERM, signal.SIGHUP):
        signal.signal(number, lambda which, frame: received.append(which))
    try:
        DATA.mkdir(parents=True, exist_ok=True)
        with contextlib.ExitStack() as stack:
            if not stack.enter_context(alone()):
                return runs_already()
            run(stack, lambda: bool(received))
    except (RuntimeError, OSError) as problem:
        print(f"The laboratory cannot go on: {problem}", file=sys.stderr)
        return 1
    say("stopped; the data is kept")
    return 0


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


def runs_already() -> int:
    """Say where the other start of this folder is; it is left alone."""
    address = DATA / "address"
    if address.exists():
        print(f"The laboratory of this folder runs already, at {address.read_text().strip()}")
    else:
        print("The laboratory of this folder starts or stops in another terminal. Try again in a minute.")
    return 1


def run(stack: contextlib.ExitStack, stopping: Stopping) -> None:
    """The services, the database's content, the programs, and then waiting."""
    address = DATA / "address"
    address.unlink(missing_ok=True)
    first = wanted_port()
    local.end_left_overs(DATA)
    say("starting PostgreSQL and Valkey")
    postgres = Postgres(cluster_dir(DATA))
    stack.callback(postgres.stop)
    postgres.start()
    valkey = Valkey(DATA / "valkey")
    stack.callback(valkey.stop)
    valkey.start()
    (DATA / "valkey.pid").write_text(f"{valkey.process.pid if valkey.process else ''}\n")
    prepare(postgres, stopping)
    if stopping():
        return
    port = local.free_port(first)
    programs: dict[str, local.Program] = {}
    stack.callback(local.stop_programs, programs)
    stack.callback(address.unlink, missing_ok=True)
    open_site(programs, environment(postgres, APP, broker=valkey.url), port=port, stopping=stopping)
    while not stopping():
        postgres.check()
        valkey.check()
        local.check_running(programs, data=DATA)
        time.sleep(0.2)
    say("stopping")


def open_site(programs: dict[str, local.Program], env: local.Environment, *, port: int, stopping: Stopping) -> None:
    """Start the programs, wait for the first page, and say where it is."""
    commands = local.commands(DATA, port=port)

    def start(name: str) -> None:
        say(f"starting the {name}")
        programs[name] = local.start_program(name, commands[name], data=DATA, env=env)

    def still() -> bool:
        local.check_running(programs, data=DATA)
        return not stopping()

    address = f"http://127.0.0.1:{port}/"
    start("site")
    start("worker")
    local.first_page(address, still=still)
    start("beat")  # last: the first page does not wait for it on a small machine
    if not stopping():
        (DATA / "address").write_text(address)
        greet(address)


def wanted_port() -> int:
    """The port to begin the search at."""
    value = os.environ.get("PORT") or "8000"
    if not value.isascii() or not value.isdigit() or not 1024 <= int(value) <= 65535:
        raise RuntimeError(f"PORT is {value!r}; expected a number from 1024 to 65535.")
    return int(value)


def prepare(postgres: Postgres, stopping: Stopping) -> None:
    """Roles, database, migrations, the demo on the first start, and the files the site serves."""
    postgres.make_roles()
    filled = DATA / "filled"
    mark = filled.read_text().strip() if filled.exists() else ""
    complete = bool(mark) and mark == postgres.marked()
    if not complete:
        begin_again(postgres)
    postgres.make_database()
    owner = environment(postgres, OWNER, broker="memory://localhost")
    say("bringing the database up to date")
    local.manage("migrate", "-v0", "--skip-checks", env=owner, stopping=stopping)
    if not complete and not stopping():
        fill(postgres, owner, stopping)
    if not stopping():
        collect(owner, stopping)


def begin_again(postgres: Postgres) -> None:
    """An interrupted first filling leaves half a laboratory: it is removed, and filled from the beginning."""
    if postgres.has_database():
        say("the demo laboratory was not filled to its end: it is removed and filled again")
        postgres.drop_database()
    for name in ("filled", "anchors.txt", "demo-accounts.txt", "secret"):
        (DATA / name).unlink(missing_ok=True)


def fill(postgres: Postgres, owner: local.Environment, stopping: Stopping) -> None:
    """Fill the demo, then mark database and folder as belonging together."""
    say("filling the demo laboratory (first start only)")
    days = os.environ.get("LAB_DEMO_DAYS")  # a shorter history, for a slow machine or a quick look
    local.manage("fill_demo", *(["--days", days] if days else []), env=owner, stopping=stopping)
    if stopping():
        return
    mark = f"filled-{secrets.token_hex(8)}"
    postgres.mark(mark)
    (DATA / "filled").write_text(f"{mark}\n")


def collect(owner: local.Environment, stopping: Stopping) -> None:
    """Collect the files the site serves when they have changed."""
    stamp, now = DATA / "static.stamp", static_state()
    if stamp.exists() and stamp.read_text() == now:
        return
    say("collecting the files the site serves")
    local.manage("collectstatic", "--noinput", "--clear", "-v0", env=owner, stopping=stopping)
    if not stopping():
        stamp.write_text(now)


def static_state() -> str:
    """A digest of the names, sizes and times of what is served, so that it is collected only when changed."""
    files = sorted(path for path in (local.CHECKOUT / "static").rglob("*") if path.is_file())
    lines = [f"{path} {path.stat().st_size} {path.stat().st_mtime_ns}" for path in files]
    lines.append((local.CHECKOUT / "requirements.lock").read_text())
    return hashlib.sha256("\n".join(lines).encode()).hexdigest()


def environment(postgres: Postgres, role: str, *, broker: str) -> local.Environment:
    """The settings of the demo laboratory for one role."""
    return dict(
        os.environ, DATABASE_URL=postgres.url(role), BROKER_URL=broker, LAB_DEMO="1", DATA_DIR=str(DATA),
        SECRET_KEY=secret(), DJANGO_SETTINGS_MODULE="labrecords.settings", PYTHONUNBUFFERED="1",
        OMP_NUM_THREADS="1", OPENBLAS_NUM_THREADS="1",
    )  # fmt: skip


def secret() -> str:
    """This laboratory's own secret, made once, readable by its owner only."""
    path = DATA / "secret"
    if not path.exists():
        with open(os.open(path, os.O_WRONLY | os.O_CREAT | os.O_EXCL, 0o600), "w") as file:
            file.write(secrets.token_urlsafe(48))
    return path.read_text()


def greet(address: str) -> None:
    """The address, the accounts of the demo, and how to stop."""
    accounts = DATA / "demo-accounts.txt"
    print(f"\nThe laboratory is open at {address}\n")
    if accounts.exists():
        print(accounts.read_text())
    print(f"Logs and data are in {DATA}.")
    if cluster_dir(DATA).parent != DATA:
        print(f"The database is in {cluster_dir(DATA)}, where PostgreSQL's own account can reach it.")
    print("Ctrl-C stops everything; the next start keeps the data.\n", flush=True)


if __name__ == "__main__":
    sys.exit(main())
