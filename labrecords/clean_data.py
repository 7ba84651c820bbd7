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
    cluster = cluster_dir(data)
    folders = [folder for folder in (cluster, data) if folder.exists() and folder.parent != data]
    if not folders:
        print(f"There is no data in {data}.")
        return 0
    data.mkdir(parents=True, exist_ok=True)
    with open(data / "lock", "w") as lock:
        try:
            fcntl.flock(lock, fcntl.LOCK_EX | fcntl.LOCK_NB)
        except BlockingIOError:
            print("The laboratory of this folder is running. Stop it with Ctrl-C first.")
            return 1
        if "--yes" not in arguments and not agreed(folders):
            print("Nothing was removed.")
            return 0
        for folder in folders:
            shutil.rmtree(folder)
    shutil.rmtree(data, ignore_errors=True)
    print("Removed. The next make run starts with a fresh demo laboratory.")
    return 0


def agreed(folders: list[Path]) -> bool:
    """Does the person type yes?"""
    try:
        answer = input(f"Remove every record in {' and '.join(map(str, folders))}? Type yes: ")
    except EOFError:
        print("\nNobody is there to answer; say YES=1 to remove without a question.")
        return False
    return answer.strip() == "yes"


if __name__ == "__main__":
    sys.exit(main(sys.argv[1:]))
