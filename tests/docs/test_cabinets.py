"""The page about steel cabinets: its tables are those the code gives."""

import re

import pytest
from published.cabinets import (
    BARE,
    CABINETS,
    PAINTED,
    RISE_K,
    ishizuka_rise_k,
    ours,
    rows,
    vented_rows,
)


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


def test_table_of_vented_cabinets(page):
    assert page.table("height x width x depth m", "W", "straight", "through vents") == vented_rows()


def test_what_is_said_of_air_that_leaves():
    for cabinet in CABINETS:
        practice = ishizuka_rise_k(cabinet)
        painted, bare = (ours(cabinet, emissivity, True) for emissivity in (PAINTED, BARE))
        assert painted.outlet_k == pytest.approx(practice, rel=0.15)
        assert bare.outlet_k > 1.2 * practice
        assert bare.middle_k < 0.8 * practice / 1.3
