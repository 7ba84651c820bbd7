"""A second bench in a second process: it shares the day's lots and works on its own products."""

from __future__ import annotations

import multiprocessing
import traceback
from collections.abc import Callable, Mapping
from datetime import datetime
from multiprocessing.connection import Connection

from django.db import connection

Day = Callable[[datetime, int, Mapping[str, int], Mapping[str, float]], int]


class SecondBench:
    """Begins a day beside the first bench and is waited for at its end."""

    def __init__(self, work: Day) -> None:
        connection.close()  # each process has its own
        context = multiprocessing.get_context("fork")
        self.ours, theirs = context.Pipe()
        self.process = context.Process(target=_serve, args=(theirs, work), daemon=True)
        self.process.start()

    def begin(self, now: datetime, position: int, *, lots: Mapping[str, int], true: Mapping[str, float]) -> None:
        """Give the second bench its day from now on, with the lots in use and their true concentrations."""
        self.ours.send((now, position, dict(lots), dict(true)))

    def end(self) -> int:
        """Wait for the end of its day; the runs it did."""
        answer = self.ours.recv()
        if isinstance(answer, str):
            raise RuntimeError(f"The second bench stopped: {answer}")
        return int(answer)

    def close(self) -> None:
        """Let it go home."""
        self.ours.send(None)
        self.process.join(30)


def _serve(pipe: Connection, work: Day) -> None:
    while (message := pipe.recv()) is not None:
        try:
            pipe.send(work(*message))
        except Exception:
            pipe.send(traceback.format_exc())
            return
    connection.close()
