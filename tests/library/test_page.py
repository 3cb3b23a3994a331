"""The page about the library is the one its rows make."""

import subprocess
import sys
from pathlib import Path

from enclosure_check.library import load_finishes, load_materials
from enclosure_check.library.opening_rows import load_filters, load_louvres, load_screens
from enclosure_check.library.page import library_page

ROOT = Path(__file__).parents[2]
PAGE = ROOT / "docs" / "library.md"
COMMAND = "python -m enclosure_check.library.page > docs/library.md"


def table_rows(page):
    """The cells of every table row that names a shipped row."""
    lines = [line for line in page.splitlines() if line.startswith("| `")]
    return [line.removeprefix("| ").removesuffix(" |").split(" | ") for line in lines]


def test_the_page_is_current():
    assert PAGE.read_text(encoding="utf-8") == library_page(), f"out of date, run: {COMMAND}"


def test_the_page_names_the_command_that_writes_it():
    assert f"`{COMMAND}`" in library_page()


def test_the_command_writes_the_page():
    run = subprocess.run(
        [sys.executable, "-m", "enclosure_check.library.page"],
        cwd=ROOT,
        capture_output=True,
        check=True,
        encoding="utf-8",
    )
    assert run.stdout == library_page()
    assert run.stderr == ""


def test_every_row_is_on_the_page_once_with_all_its_cells_and_its_source():
    cells = table_rows(library_page())
    surfaces = [*load_materials().values(), *load_finishes().values()]
    louvres, screens, filters = load_louvres(), load_screens(), load_filters()
    expected = [*surfaces, *louvres.values(), *screens.values(), *filters.values()]
    assert [row[0] for row in cells] == [f"`{row.name}`" for row in expected]
    counts = [8] * len(surfaces) + [5] * len(louvres) + [6] * len(screens) + [5] * len(filters)
    assert [len(row) for row in cells] == counts
    assert [row[-1] for row in cells] == [row.source for row in expected]


def test_values_are_printed_as_shipped():
    cells = {row[0].strip("`"): row for row in table_rows(library_page())}
    assert cells["fr4"][1] == "0.343 through, 1.059 in plane"
    assert cells["copper"][1:5] == ["386", "4", "8930", "385"]
    white = load_finishes()["white_paint"]
    assert float(cells["white_paint"][1]) == white.emissivity
    assert float(cells["white_paint"][4]) == white.solar_absorptivity
