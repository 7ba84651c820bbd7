"""Accounts, folders and processes: what the private services need of the machine."""

from __future__ import annotations

import ctypes
import hashlib
import importlib.util
import os
import pwd
import signal
import subprocess
import sys
import tempfile
import time
from collections.abc import Callable
from pathlib import Path
from typing import Any

PR_SET_PDEATHSIG = 1
LONGEST_SOCKET = 85  # sun_path holds 104 to 108 bytes, and the port's name is appended


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
    """Where the database lies: in the data folder, or, as root, where another account can reach it."""
    if not unprivileged():
        return data_dir / "postgres"
    digest = hashlib.sha256(str(data_dir.resolve()).encode()).hexdigest()[:10]
    return Path("/var/lib") / f"labrecords-{digest}"


def package_dir(name: str) -> Path:
    """The folder of an installed package, found without importing it."""
    spec = importlib.util.find_spec(name)
    if spec is None or not spec.submodule_search_locations:
        raise RuntimeError(
            f"There is no package {name} for this machine. Install PostgreSQL and Valkey, and set LAB_PG_BIN"
            " to PostgreSQL's bin folder and LAB_VALKEY_BIN to the program valkey-server."
        )
    return Path(next(iter(spec.submodule_search_locations)))


def short_socket_dir(wanted: Path) -> Path:
    """``wanted``, or a short new folder where the name of a socket in it would be too long."""
    if len(str(wanted)) <= LONGEST_SOCKET:
        return wanted
    return Path(tempfile.mkdtemp(prefix="labrecords-", dir="/tmp"))


def command_of(pid: int) -> str:
    """The command line of a process, empty when there is none."""
    try:
        return Path(f"/proc/{pid}/cmdline").read_bytes().replace(b"\0", b" ").decode()
    except OSError:
        pass
    if sys.platform.startswith("linux"):
        return ""
    answer = subprocess.run(["ps", "-p", str(pid), "-o", "command="], capture_output=True, text=True)
    return answer.stdout.strip()


def end_left_over(pid: int, *, naming: str, number: signal.Signals, seconds: float = 15) -> None:
    """End what a killed start left behind, if its command names ``naming``, and wait for its end."""
    if naming not in command_of(pid):
        return
    os.kill(pid, number)
    end = time.monotonic() + seconds
    while naming in command_of(pid) and time.monotonic() < end:
        time.sleep(0.05)
