"""The page about steel cabinets: its tables are those the code gives."""

import re

import pytest
from published.cabinets import BARE, CABINETS, PAINTED, RISE_K, ours, rows


@pytest.fixture(scope="module")
def page(read_page):
    return read_page("docs/cabinets.md")


def test_table_of_sealed_cabinets(page):
    assert page.table("height x width x depth m", "A_e m2", "W", "straight") == rows()


def test_what_is_said_of_the_top(page):
    for emissivity in (PAINTED, BARE):
        found = [ours(cabinet, emissivity) for cabinet in CABINETS]
        mean = sum(each.top_k / each.middle_k for each in found) / len(found)
        assert re.search(rf"\b{mean:.1f} times", page.text)


def test_what_is_said_of_walls(page):
    """A fifth lower than free, beside the area method and with paint."""
    ratios = {
        on_wall: [
            ours(cabinet, PAINTED).middle_k / RISE_K
            for cabinet in CABINETS
            if cabinet.on_wall is on_wall
        ]
        for on_wall in (True, False)
    }
    wall, free = (sum(values) / len(values) for values in ratios.values())
    assert wall / free == pytest.approx(0.8, abs=0.05)
