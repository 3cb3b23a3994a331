"""Shipped louvres, meshes and filters are complete, physical and sourced."""

import re

import pytest

from enclosure_check.library import BASES
from enclosure_check.library.opening_rows import load_filters, load_louvres, load_screens

LOADERS = (load_louvres, load_screens, load_filters)
ROWS = [row for load in LOADERS for row in load().values()]


@pytest.mark.parametrize("load", LOADERS)
def test_tables_are_read_once_and_cannot_be_changed(load):
    assert load() is load()
    assert len(load()) >= 2
    with pytest.raises(TypeError):
        load()["new"] = None  # type: ignore[index]  # refused is what is tested


@pytest.mark.parametrize("row", ROWS, ids=lambda row: row.name)
def test_rows_are_named_and_sourced(row):
    assert re.fullmatch(r"[a-z][a-z0-9]*(_[a-z0-9]+)*", row.name)
    assert row.basis in BASES
    assert len(row.source) > 20


def test_numbers_are_those_of_the_trade():
    for louvre in load_louvres().values():
        # One velocity head is lost where the air comes out, whatever the blades do.
        assert 1.0 < louvre.loss - louvre.loss_spread < louvre.loss < 8.0
    for mesh in load_screens().values():
        assert 0.1 <= mesh.wire_mm < mesh.aperture_mm <= 12.5
    for mat in load_filters().values():
        assert 1.0 <= mat.resistance_pa_s_per_m <= 100.0
        assert 20 <= mat.spread_pct <= 60
