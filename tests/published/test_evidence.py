"""The evidence page: current, complete, and silent about nothing it misses."""

import os
import re
import subprocess
import sys
from pathlib import Path

import pytest
from published.command import solved as vented
from published.evidence_row import Source, count, row
from published.experiments_inside import CASES, solved
from published.faces import heat_by_face
from published.slices import Slices, slice_of_vented

ROOT = Path(__file__).parents[2]
PAGE = ROOT / "docs" / "evidence.md"
COMMAND = "python tests/published/evidence.py > docs/evidence.md"
HEAD = ["case", "source", "quantity", "theirs", "ours", "error %", "band ±", "inside", "why"]
RUNG = re.compile(r"^### Rung (\d), (.*)$")


@pytest.fixture(scope="module")
def written() -> str:
    """The page as the command writes it, in a process of its own."""
    ended = subprocess.run(
        [sys.executable, "-W", "error", str(ROOT / "tests" / "published" / "evidence.py")],
        env={**os.environ, "PYTHONIOENCODING": "utf-8", "OPENBLAS_NUM_THREADS": "1"},
        capture_output=True,
        timeout=300,
    )
    assert ended.returncode == 0, ended.stderr.decode()
    return ended.stdout.decode("utf-8")


@pytest.fixture(scope="module")
def rows() -> list[dict[str, str]]:
    """The rows of the page as it stands, with their rung and kind."""
    found, rung, kind = [], "", ""
    for line in PAGE.read_text(encoding="utf-8").splitlines():
        if heading := RUNG.match(line):
            rung, kind = heading.groups()
        elif line.startswith("| ") and rung:
            cells = [cell.strip() for cell in line.strip("|").split("|")]
            assert len(cells) == len(HEAD), line
            if cells != HEAD and cells[0] != "---":
                found.append({**dict(zip(HEAD, cells, strict=True)), "rung": rung, "kind": kind})
        elif line.startswith("## "):
            rung = ""
    return found


def test_the_page_is_current(written):
    assert written == PAGE.read_text(encoding="utf-8"), f"out of date, run: {COMMAND}"
    assert f"`{COMMAND}`" in written
    assert f"\n{COMMAND}\n" in (ROOT / "DEVELOPERS.md").read_text(encoding="utf-8")


def test_every_row_that_is_missed_says_why(rows):
    missed = [each for each in rows if each["inside"] == "**no**"]
    assert missed
    assert [each["case"] for each in missed if not each["why"]] == []


def test_textbook_numbers_are_close_or_say_which_law_differs(rows):
    """Within 1 % with the source's own law, within 3 % of one surface, gap or network."""
    most = {"1": 1.0, "2": 3.0, "3": 3.0}
    examples = [each for each in rows if each["kind"] == "worked examples" and each["rung"] in most]
    assert len(examples) > 100
    silent = [
        each["case"]
        for each in examples
        if abs(float(each["error %"])) > most[each["rung"]] and not each["why"]
    ]
    assert silent == []


def test_all_experiments_and_boxes_are_there(rows):
    cases = " ".join(each["case"] for each in rows)
    named = ("X1", "X2", "X3", "X5", "X6", "G,", "B:", "B20:", "B10:", "C:", "D:", "F:")
    named += (
        "1.2 x 2.0 x 0.6 m",
        "panel 4 x 8 x 2 ft",
        "duct",
        "cube",
        "oven",
        "600 W",
        "anodised",
    )
    named += ("vents", "cards", "still-air", "cabinet 0.3", "board 15 x 20 cm", "disc", "fin ")
    assert [each for each in named if each not in cases] == []


def test_every_document_is_used():
    """And by the real command, whose path is in `command.py` alone."""
    text = "".join(
        path.read_text(encoding="utf-8") for path in Path(__file__).parent.glob("rows_*.py")
    )
    for path in sorted((Path(__file__).parent / "documents").glob("*.yaml")):
        name = re.sub(r"_\d$", "_{", path.stem)
        assert f'"{name}' in text, path.name


def test_the_last_line_counts_the_rows(rows):
    last = PAGE.read_text(encoding="utf-8").splitlines()[-1]
    counted = [int(number) for number in re.findall(r"(\d+) rows", last)]
    assert last.startswith("**Totals.**")
    assert sum(counted) == len(rows)
    inside = [int(number) for number in re.findall(r"rows, (\d+) ", last)]
    assert sum(inside) == sum(each["inside"] == "yes" for each in rows)


# Rows themselves ------------------------------------------------------------------------------

SOMEBODY = Source("somebody", "somebody")


def made(theirs, ours, **more):
    given = {"band": 1.0, **more}
    return row(2, "worked example", "case", SOMEBODY, "p. 1", "seen", "K", theirs, ours, **given)


@pytest.mark.parametrize(
    ("theirs", "ours", "inside", "error"),
    [
        (10.0, 10.9, True, 9.0),
        (10.0, 8.9, False, -11.0),
        ((8.0, 12.0), 12.9, True, 29.0),
        ((8.0, 12.0), 13.1, False, 31.0),
        (-10.0, -9.0, True, 10.0),
    ],
)
def test_inside_the_band(theirs, ours, inside, error):
    found = made(theirs, ours)
    assert found.inside is inside
    assert found.error_pct == pytest.approx(error)


def test_errors_may_be_shares_of_something_else():
    assert made(0.005, 0.015, scale=1.0).error_pct == pytest.approx(1.0)


def test_a_flag_has_no_error():
    raised, missed = made(40.0, 87.0, flag=True), made(40.0, 39.0, flag=True)
    assert (raised.inside, missed.inside) == (True, False)
    assert raised.error_pct is None


def test_counts():
    found = count([made(10.0, 11.0), made(10.0, 6.0), made(40.0, 87.0, flag=True)])
    assert (found.rows, found.inside) == (3, 2)
    assert found.rms_pct == pytest.approx(((100 + 1600) / 2) ** 0.5)
    assert found.worst is not None
    assert found.worst.ours == 6.0


def test_heat_of_faces_adds_up():
    """What the sides and the rim of a board give off is its power, and all walls take it."""
    case = next(each for each in CASES if each.name == "C")
    faces = heat_by_face(solved(case, 2.5))
    board = sum(heat for face, heat in faces.items() if face.startswith("board"))
    assert board == pytest.approx(2.5, rel=1e-6)
    assert sum(faces.values()) == pytest.approx(0.0, abs=1e-6)


def test_a_slice_of_the_vented_box_holds_the_films_of_its_board():
    inside = (0.100, 0.152, 0.254)
    board = {"along": 0.140, "thickness": 0.002, "low": 0.027, "high": 0.227}
    found = vented("vented_board")
    air = Slices(found.network, found.solution)
    assert slice_of_vented(found, inside, board, 0.05) == air.core(0.05)
    assert 0.5 < slice_of_vented(found, inside, board, 0.5) - air.core(0.5) < 5.0
