"""Runs the real command on the documents beside this file and reads its JSON report."""

import json
import tempfile
from functools import cache
from pathlib import Path
from typing import Any

from enclosure_check.check import solve_case
from enclosure_check.cli import main
from enclosure_check.description.load import load_document
from enclosure_check.findings.confidence import bands
from enclosure_check.findings.solved import Solved

DOCUMENTS = Path(__file__).parent / "documents"


@cache
def reported(name: str) -> tuple[int, dict[str, Any]]:
    """Exit code and report of ``enclosure-check check`` on a document."""
    with tempfile.TemporaryDirectory() as folder:
        output = Path(folder) / "report.json"
        arguments = ["check", str(DOCUMENTS / f"{name}.yaml"), "--format", "json"]
        code = main([*arguments, "--output", str(output)])
        assert code in (0, 1), f"{name}: exit code {code}"
        return code, json.loads(output.read_text(encoding="utf-8"))


@cache
def condition(name: str, which: str = "base") -> dict[str, Any]:
    """What the report says of one condition."""
    found = reported(name)[1]["conditions"]
    return next(each for each in found if each["name"] == which)


def wall(found: dict[str, Any], which: str) -> dict[str, Any]:
    """One wall of a condition."""
    return next(each for each in found["walls"] if each["name"] == which)


@cache
def solved(name: str) -> Solved:
    """A document without conditions, solved, for what no report has."""
    (case,) = load_document(str(DOCUMENTS / f"{name}.yaml")).cases()
    return solve_case(case)


def board_band_k(name: str, board: str) -> float:
    """Band of the mean of a board of such a document [K]."""
    node = solved(name).network.places.boards[board].mean
    found = bands(solved(name), [node])
    assert found is not None
    return found.band_k(node)
