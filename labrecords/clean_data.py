"""Remove the demo laboratory's data after asking: python -m labrecords.clean_data FOLDER [--yes]."""

from __future__ import annotations

import fcntl
import shutil
import sys
from pathlib import Path

from labrecords.local import cluster_dir


def main(arguments: list[str]) -> int:
    """Ask, then remove the data folder and the cluster; refuse while the laboratory runs."""
    data = Path(arguments[0]).resolve()
    if not data.exists():
        print(f"There is no data in {data}.")
        return 0
    with open(data / "lock", "w") as lock:
        try:
            fcntl.flock(lock, fcntl.LOCK_EX | fcntl.LOCK_NB)
        except BlockingIOError:
            print("The laboratory of this folder is running. Stop it with Ctrl-C first.")
            return 1
        question = f"Remove every record in {data}? Type yes: "
        if "--yes" not in arguments and input(question).strip() != "yes":
            print("Nothing was removed.")
            return 0
        shutil.rmtree(cluster_dir(data), ignore_errors=True)
        shutil.rmtree(data, ignore_errors=True)
    print("Removed. The next make run starts with a fresh demo laboratory.")
    return 0


if __name__ == "__main__":
    sys.exit(main(sys.argv[1:]))
