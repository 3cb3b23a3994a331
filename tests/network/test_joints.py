"""Stand-offs and edge clamps: what they carry, by hand and on any cells."""

import numpy as np
import pytest
from support.cases import patched
from support.features import (
    CLAMP,
    HALVED,
    STAND_OFF,
    answer,
    boxed,
    conductance,
    links,
    node,
)

# Stand-offs -----------------------------------------------------------------------------------


def carried(solved, wall="back"):
    """What the stand-off carries, and from one end of it to the other [W], [K]."""
    ends = [node(solved, f"{host} under main/a") for host in ("main", wall)]
    flow = solved.flow("stand_off:main/a", "to_wall")
    assert flow == pytest.approx(-solved.flow("stand_off:main/a", "to_board"), rel=1e-6)
    return flow, ends[0] - ends[1]


def test_stand_off_carries_what_its_column_does():
    """Brass of 115 W/mK, 6 mm with a bore of 3 mm, from the board to the wall, and contacts."""
    solved = answer(boxed(stand_offs={"a": {**STAND_OFF, "bore_mm": 3, "contact_k_per_w": 2}}))
    length, section = 100 - 10 - 1.6, np.pi / 4 * (36 - 9)
    flow, fall = carried(solved)
    assert fall / flow == pytest.approx(length * 1e-3 / (115 * section * 1e-6) + 2, rel=1e-6)
    assert flow > 0


def test_stated_resistance_stands_for_the_column():
    row = {"to": "front", "at_mm": [60, 10], "resistance_k_per_w": 7, "contact_k_per_w": 1}
    flow, fall = carried(answer(boxed(stand_offs={"a": row})), "front")
    assert fall / flow == pytest.approx(8, rel=1e-6)


def test_stand_off_without_resistance_leaves_the_spreading():
    row = {"to": "front", "at_mm": [60, 20], "resistance_k_per_w": 0}
    solved = answer(boxed(stand_offs={"a": row}))
    flow, fall = carried(solved, "front")
    assert fall == pytest.approx(0, abs=1e-3)
    assert flow > 0.1
    around = node(solved, "under main/a, to_board")
    assert around > node(solved, "main under main/a") + 1


def test_halving_the_cells_hardly_moves_what_a_stand_off_carries():
    """The spreading at its ends is counted once."""
    row = {"to": "front", "at_mm": [60, 25], "resistance_k_per_w": 1}
    document = boxed(stand_offs={"a": row})
    flows = [carried(answer(document, options), "front")[0] for options in (None, HALVED)]
    assert flows[1] == pytest.approx(flows[0], rel=0.03)
    assert flows[0] > 0.1


# Edge clamps ----------------------------------------------------------------------------------


@pytest.mark.parametrize(("wall", "edge"), [("left", 0.1), ("right", 0.1), ("top", 0.12)])
def test_loose_clamp_is_its_conductance_times_the_edge(wall, edge):
    clamp = {"conductance_w_per_mk": 1e-3}
    solved = answer(boxed(edge_clamps={wall: clamp}))
    found = conductance(solved, "board:main", "edge_clamp")
    assert found == pytest.approx(1e-3 * edge, rel=1e-3)


def test_half_a_cell_of_board_lies_in_series():
    """A tight clamp on a wall that conducts well: what is left is half a cell of the board."""
    wall = {"material": "copper", "thickness_mm": 50}
    document = boxed(edge_clamps={"left": {"conductance_w_per_mk": 10_000}}, walls={"left": wall})
    document = patched(document, {"boards": {"main": {"conductivity_in_plane_w_per_mk": 0.5,
                                                      "copper": None}}})  # fmt: skip
    solved = answer(document)
    grid_steps = 120 / solved.network.places.boards["main"].cells.shape[0]
    half = grid_steps * 1e-3 / 2 / (0.5 * 1.6e-3)
    found = conductance(solved, "board:main", "edge_clamp")
    assert found == pytest.approx(0.1 / half, rel=0.002)


def test_clamp_joins_the_edge_to_the_wall_beside_it():
    """Cells of the left edge over 40 of 100 mm, to the wall cells at the board's depth."""
    solved = answer(boxed(edge_clamps={"left": {**CLAMP, "length_mm": 40}}))
    a, b, g = links(solved, "board:main", "edge_clamp")
    cells = solved.network.places.boards["main"].cells
    wall = solved.network.places.wall_inside["left"].cells
    assert set(a) <= set(cells[0])
    # The board lies 10 mm behind the front: in the first row of wall cells, 25 mm deep.
    assert set(b) <= set(wall[0])
    clamped = [index for index, cell in enumerate(cells[0]) if cell in set(a)]
    step = 100 / cells.shape[1]
    assert clamped == [
        index for index in range(cells.shape[1]) if abs((index + 0.5) * step - 50) < 20 + step / 2
    ]
    assert g.sum() == pytest.approx(0.04 * g.max() / (step * 1e-3), rel=1e-6)


def test_clamp_between_two_rows_of_wall_cells_serves_both_alike():
    document = boxed(edge_clamps={"left": CLAMP})
    document = patched(document, {"boards": {"main": {"from_walls_mm": None}}})
    solved = answer(document)
    _, b, g = links(solved, "board:main", "edge_clamp")
    wall = solved.network.places.wall_inside["left"].cells
    assert wall.shape[0] == 4
    rows = [g[np.isin(b, wall[row])].sum() for row in range(4)]
    assert rows[1] == pytest.approx(rows[2])
    assert rows[0] == rows[3] == 0.0


@pytest.mark.parametrize("depth", [12.5, 24.2, 40])
@pytest.mark.parametrize(
    ("material", "per_metre"), [("aluminium_5052", 100), ("pc_abs", 100), ("pc_abs", 10_000)]
)
def test_halving_the_cells_hardly_moves_what_a_clamp_carries(material, per_metre, depth):
    """On the middle of a row of wall cells, on the edge of one, and between; a copper-clad board."""
    clamp = {"left": {"conductance_w_per_mk": per_metre}}
    document = boxed(edge_clamps=clamp, walls={"left": {"material": material}})
    row = {"conductivity_in_plane_w_per_mk": 200, "copper": None, "from_walls_mm": {"front": depth}}
    document = patched(document, {"boards": {"main": row}})
    flows = [
        answer(document, options).flow("board:main", "edge_clamp") for options in (None, HALVED)
    ]
    assert flows[1] == pytest.approx(flows[0], rel=0.03)
