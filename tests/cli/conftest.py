"""Runs the command line as a user does: a process of its own, in a folder of its own."""

import os
import subprocess
import sys
from collections.abc import Callable
from pathlib import Path
from typing import NamedTuple

import pytest

import enclosure_check

ROOT = Path(enclosure_check.__file__).parent.parent
# What would change how a process shows things.
_TAKEN_OUT = ("NO_COLOR", "FORCE_COLOR", "COLUMNS", "LINES", "TERM", "PYTHONIOENCODING")
COMMAND = [sys.executable, "-W", "error", "-m", "enclosure_check"]


class Ended(NamedTuple):
    code: int
    out: str
    err: str


Run = Callable[..., Ended]


def pytest_addoption(parser):
    parser.addoption(
        "--update-expected",
        action="store_true",
        help="rewrite tests/cli/cases/*/expected.txt; review the difference",
    )


def environment(**changes: str) -> dict[str, str]:
    kept = {name: value for name, value in os.environ.items() if name not in _TAKEN_OUT}
    return {**kept, "PYTHONPATH": str(ROOT), "PYTHONIOENCODING": "utf-8", **changes}


@pytest.fixture(autouse=True)
def _plain_surroundings(monkeypatch: pytest.MonkeyPatch):
    """In-process runs see nothing of the terminal the tests are run from."""
    for name in _TAKEN_OUT:
        monkeypatch.delenv(name, raising=False)


@pytest.fixture
def run(tmp_path: Path) -> Run:
    """Run the program with arguments; standard output is a pipe."""

    def go(*arguments: str, cwd: Path = tmp_path, **changes: str) -> Ended:
        ended = subprocess.run(
            [*COMMAND, *arguments],
            cwd=cwd,
            env=environment(**changes),
            capture_output=True,
            timeout=60,
        )
        encoding = changes.get("PYTHONIOENCODING", "utf-8")
        return Ended(ended.returncode, ended.stdout.decode(encoding), ended.stderr.decode(encoding))

    return go
