"""None, zones, and everything at once: limits, balances and sums done by hand."""

import random
from types import SimpleNamespace

import numpy as np
import pytest
from support.cases import board, patched
from support.features import (
    CABLE,
    CLAMP,
    FILLER,
    HALVED,
    POUR,
    STAND_OFF,
    answer,
    boxed,
    flat_grid,
    full,
    node,
    rises,
)
from support.places import NO_PLACES

from enclosure_check.findings.heat import heat_balance, wall_findings
from enclosure_check.network.builder import NetworkBuilder
from enclosure_check.network.features import painted
from enclosure_check.network.grid import PlateGrid
from enclosure_check.network.links import LinkLabel
from enclosure_check.network.site import Site
from enclosure_check.solve.steady import solve_steady


@pytest.fixture(scope="module")
def plain():
    """The box with nothing more."""
    return answer(boxed())


# None, and next to none -----------------------------------------------------------------------


def test_none_is_exactly_none(plain):
    empty = {key: {} for key in ("zones", "stand_offs", "edge_clamps", "fillers", "shield_cans")}
    none = answer(boxed(walls={"left": {"cables": {}}}, **empty))
    assert plain.network.node_labels == none.network.node_labels
    assert np.array_equal(plain.solution.rise, none.solution.rise)
    walls = wall_findings(plain)
    assert [wall.cables_w for wall in walls] == [0.0] * 6
    assert heat_balance(plain, walls).cables_w == 0.0
    ours = {"edge_clamp", "filler", "still_air", "radiation_under", "frame", "cable"}
    assert not ours & {label.role for label in plain.network.labels}
    assert not any(label.owner.startswith("stand_off") for label in plain.network.labels)


NEXT_TO_NONE = {
    "zone like the board": {"zones": {"a": {"at_mm": [50, 40], "length_mm": 31, "width_mm": 17,
                                            "copper": board()["copper"]}}},
    "small zone": {"zones": {"a": {"at_mm": [50, 40], "length_mm": 1e-6, "width_mm": 1e-6,
                                   "conductivity_in_plane_w_per_mk": 5000}}},
    "stand-off that resists": {"stand_offs": {"a": {**STAND_OFF, "contact_k_per_w": 100_000}}},
    "thin stand-off": {"stand_offs": {"a": {**STAND_OFF, "diameter_mm": 0.01}}},
    "loose clamp": {"edge_clamps": {"left": {"conductance_w_per_mk": 1e-6}}},
    "short clamp": {"edge_clamps": {"left": {**CLAMP, "length_mm": 1e-3}}},
    "small filler": {"fillers": {"a": {**FILLER, "at_mm": [20, 20], "length_mm": 1e-3,
                                       "width_mm": 1e-3}}},
}  # fmt: skip


@pytest.mark.parametrize("features", NEXT_TO_NONE.values(), ids=NEXT_TO_NONE)
def test_next_to_none_changes_next_to_nothing(features, plain):
    np.testing.assert_allclose(rises(answer(boxed(**features))), rises(plain), rtol=1e-3)


def test_next_to_no_cable(plain):
    walls = {"left": {"cables": {"a": {**CABLE, "inside_mm": 1e-4}}}}
    np.testing.assert_allclose(rises(answer(boxed(walls=walls))), rises(plain), rtol=1e-4)


# Zones ----------------------------------------------------------------------------------------


def test_painted_is_the_mean_over_each_cell():
    """Cells of 10 x 10 mm; a rectangle over 3/4 of one, 1/4 of it covered again."""
    grid = flat_grid((3, 2), (0.03, 0.02))
    first = (0.0025, 0.0, 0.0), (0.0075, 0.01, 0.0), 5.0
    second = (0.005, 0.005, 0.0), (0.005, 0.005, 0.0), 9.0
    mean = painted(grid, 1.0, [first, second])
    assert mean[0, 0] == pytest.approx(0.25 * 1 + 0.5 * 5 + 0.25 * 9)
    assert mean.sum() - mean[0, 0] == pytest.approx(5 * 1.0)
    under = painted(grid, 1.0, [second, first])
    assert under[0, 0] == pytest.approx(0.25 * 1 + 0.75 * 5)


def test_painted_without_rectangles_is_the_base():
    np.testing.assert_allclose(painted(flat_grid((5, 4)), 0.3, []), 0.3, rtol=1e-12)


def test_painted_over_several_cells_keeps_the_integral():
    grid = flat_grid((12, 6))
    low, size = (0.013, 0.021, 0.0), (0.047, 0.0173, 0.0)
    mean = painted(grid, 2.0, [(low, size, 7.0)])
    assert mean.sum() * grid.cell_area == pytest.approx(2 * 0.0072 + 5 * 0.047 * 0.0173)
    assert pytest.approx(mean.min()) == 2.0
    assert mean.max() == pytest.approx(2 + 5 * 0.9)  # 9 of 10 mm of a row of cells


def test_two_halves_conduct_in_series():
    """1 W along a plate whose halves differ: the resistances of the halves add up."""
    grid = flat_grid((12, 6))
    halves = painted(grid, 0.02, [((0.0, 0.0, 0.0), (0.06, 0.06, 0.0), 0.3)])
    grid = PlateGrid(grid.axes, grid.low, grid.size, grid.counts, np.stack((halves, halves)))
    builder = NetworkBuilder(300.0, 101325.0)
    ends = builder.node("hot"), builder.node("cold", 300.0)

    cells = builder.nodes("plate", grid.counts)
    Site.conduct_along(
        SimpleNamespace(builder=builder), cells, grid, 1.0, LinkLabel("plate:p", "along")
    )
    for end, row in zip(ends, (cells[0], cells[-1]), strict=True):
        builder.conduct(row, end, 1e6, LinkLabel("plate:p", "end"))
    builder.heat(ends[0], 1.0, LinkLabel("plate:p", "power"))
    network = builder.finish(places=NO_PLACES)
    rise = solve_steady(network).rise[ends[0], 0]
    # From the middle of the first cell to the middle of the last.
    assert rise == pytest.approx(0.055 / (0.3 * 0.06) + 0.055 / (0.02 * 0.06), rel=1e-5)


def test_zone_as_large_as_the_board_is_the_board():
    whole = {"at_mm": [60, 50], "length_mm": 120, "width_mm": 100, "copper": POUR}
    other = boxed(zones={"all": whole})
    same = patched(boxed(), {"boards": {"main": {"copper": {**POUR, "one": None}}}})
    np.testing.assert_allclose(rises(answer(other)), rises(answer(same)), rtol=1e-9)


def test_pour_under_a_part_cools_it_and_a_cut_warms_it(plain):
    zone = {"at_mm": [60, 50], "length_mm": 30, "width_mm": 30}
    poured = answer(boxed(zones={"a": {**zone, "copper": POUR}}))
    cut = answer(boxed(zones={"a": zone}))
    cool, even, warm = (node(each, "U1 junction") for each in (poured, plain, cut))
    assert cool < even - 5
    assert warm > even + 5


# All together ---------------------------------------------------------------------------------


@pytest.mark.parametrize("parallel", ["left", "back", "bottom"])
def test_everything_at_once_balances(parallel):
    solved = answer(full(parallel))
    found = {label for label in solved.network.labels if abs(solved.flow(*label)) > 1e-6}
    for owner, role in (
        ("stand_off:main/a", "to_wall"),
        ("stand_off:main/b", "to_wall"),
        ("board:main", "edge_clamp"),
        ("board:main", "filler"),
        ("part:U2", "filler"),
        ("part:U1", "still_air"),
        ("can:main/c", "frame"),
        ("wall:left", "cable"),
    ):
        assert LinkLabel(owner, role) in found, (owner, role)


@pytest.mark.parametrize("parallel", ["left", "back", "bottom"])
def test_halving_the_cells_moves_no_part_of_everything(parallel):
    found = []
    for options in (None, HALVED):
        solved = answer(full(parallel), options)
        found.append([solved.solution.rise[each.junction, 0]
                      for each in solved.network.places.parts.values()])  # fmt: skip
    np.testing.assert_allclose(found[1], found[0], rtol=0.03)


def test_mirror_images_agree():
    """Left and right exchanged: the same temperatures, cell by cell."""
    document = full("back")
    image = patched(document, {})
    row = image["boards"]["main"]
    for key in ("zones", "stand_offs", "fillers", "shield_cans"):
        for each in row[key].values():
            each["at_mm"] = [90 - each["at_mm"][0], each["at_mm"][1]]
    names = {"left": "right", "right": "left"}
    row["edge_clamps"] = {names.get(wall, wall): each for wall, each in row["edge_clamps"].items()}
    image["walls"] = {names[wall]: each for wall, each in image["walls"].items()}
    for each in image["parts"].values():
        each["at_mm"] = [90 - each["at_mm"][0], each["at_mm"][1]]
    one, other = answer(document), answer(image)
    plates = [each.network.places.boards["main"].cells for each in (one, other)]
    np.testing.assert_allclose(
        one.temperature_c[plates[0]], other.temperature_c[plates[1][::-1]], atol=1e-4
    )
    for name in ("U1", "U2"):
        nodes = [each.network.places.parts[name].junction for each in (one, other)]
        assert one.at(nodes[0]) == pytest.approx(other.at(nodes[1]), abs=1e-4)
    assert node(one, "c can on main") == pytest.approx(node(other, "c can on main"), abs=1e-4)


def test_without_power_all_is_as_warm_as_the_surroundings():
    document = full("back")
    document["boards"]["main"]["other_power_w"] = 0
    document["walls"]["left"]["cables"]["a"]["current_a"] = 0
    for each in document["parts"].values():
        each["power_w"] = 0
    solved = answer(document)
    assert np.abs(rises(solved)).max() < 1e-9


def test_more_power_cools_nothing():
    document = full("bottom")
    more = patched(document, {"parts": {"U1": {"power_w": 2}}})
    one, other = answer(document), answer(more)
    assert (rises(other) - rises(one)).min() > 0


def test_boards_at_random_converge_and_balance():
    rng = random.Random(7)
    for _ in range(25):
        parallel = rng.choice(["left", "back", "bottom"])
        document = full(parallel, box={"tilt": {"lean_back_deg": rng.uniform(-180, 180)}})
        row = document["boards"]["main"]
        row["edge_clamps"] = {
            wall: {"conductance_w_per_mk": 10 ** rng.uniform(-2, 4)} for wall in row["edge_clamps"]
        }
        row["fillers"]["gap"]["conductivity_w_per_mk"] = 10 ** rng.uniform(-2, 3)
        row["stand_offs"]["a"]["diameter_mm"] = rng.uniform(1, 9)
        row["stand_offs"]["b"]["resistance_k_per_w"] = rng.choice([0, 10 ** rng.uniform(-3, 4)])
        row["shield_cans"]["c"]["frame_conductance_w_per_mk"] = 10 ** rng.uniform(-3, 4)
        row["shield_cans"]["c"]["height_mm"] = rng.uniform(2, 11)
        document["walls"]["left"]["cables"]["a"]["current_a"] = rng.uniform(0, 20)
        solved = answer(document)
        assert np.isfinite(rises(solved)).all()
        assert rises(solved).min() > 0
