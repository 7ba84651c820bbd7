"""The lock, the dependencies and their reasons."""

from __future__ import annotations

import re
import tomllib
from pathlib import Path

import pytest
from packaging.requirements import Requirement
from packaging.utils import canonicalize_name

ROOT = Path(__file__).resolve().parent.parent.parent
PROJECT = (ROOT / "pyproject.toml").read_text()
READ = tomllib.loads(PROJECT)
WANTED = [*READ["project"]["dependencies"], *READ["dependency-groups"]["dev"]]
LOCKED = (ROOT / "requirements.lock").read_text()
PINS = re.findall(r"^([A-Za-z0-9._-]+)(?:\[[^]]*\])?==(\S+)([^\\\n]*)\\$", LOCKED, re.M)


@pytest.mark.parametrize("name", ["requirements.lock", "uv.txt"])
def test_lock_names_no_address(name: str) -> None:
    text = (ROOT / name).read_text()
    assert "://" not in text
    assert not re.search(r"^\s*(-i|--index-url|--extra-index-url|--find-links|--trusted-host)\b", text, re.M)


@pytest.mark.parametrize("name", ["requirements.lock", "uv.txt"])
def test_lock_has_a_hash_for_every_pin(name: str) -> None:
    blocks = re.split(r"^(?=[a-z0-9])", (ROOT / name).read_text(), flags=re.M | re.I)[1:]
    assert blocks
    for block in blocks:
        assert re.search(r"--hash=sha256:[0-9a-f]{64}", block), block.splitlines()[0]


@pytest.mark.parametrize("line", WANTED)
def test_lock_holds_a_version_the_project_wants(line: str) -> None:
    wanted = Requirement(line)
    found = [version for name, version, _ in PINS if canonicalize_name(name) == canonicalize_name(wanted.name)]
    assert found, f"{wanted.name} is not locked: make lock"
    assert all(version in wanted.specifier for version in found)


def test_dependencies_say_why() -> None:
    for line in PROJECT.splitlines():
        if re.match(r'\s+"[A-Za-z][\w-]*(\[[\w,-]+\])?[><=]', line):
            assert re.search(r'",\s+# \w+', line), line
