"""Fillers and shield cans: what they carry, and what they cover."""

import numpy as np
import pytest
from support.cases import case_of, part, patched
from support.features import (
    CAN,
    FILLER,
    answer,
    board_grid,
    boxed,
    conductance,
    links,
    node,
    rises,
)

from enclosure_check.findings.parts import part_heat
from enclosure_check.network.covering import bare_board, bare_wall, between_parts, parts_on
from enclosure_check.network.grid import PlateGrid
from enclosure_check.network.links import LinkLabel
from enclosure_check.physics.air import air

SIGMA = 5.670374419e-8
ZERO_C = 273.15

# Fillers --------------------------------------------------------------------------------------


def test_filler_is_a_slab_with_its_contacts():
    row = {**FILLER, "contact_mm2k_per_w": 300}
    solved = answer(boxed(parts={}, fillers={"a": row}))
    per_area = 10e-3 / 1.5 + 300e-6
    found = conductance(solved, "board:main", "filler")
    assert found == pytest.approx(0.12 * 0.1 / per_area)


def test_every_patch_of_filler_conducts_straight_across():
    """Cells of the board against cells of the wall, 10 mm of filler: places that face each other."""
    row = {**FILLER, "at_mm": [33, 41], "length_mm": 37, "width_mm": 23}
    solved = answer(boxed(parts={}, fillers={"a": row}))
    a, b, g = links(solved, "board:main", "filler")
    places = solved.network.places
    grids = {}
    for cells, low, size in (
        (places.boards["main"].cells, (40, 25), (120, 100)),
        (places.wall_inside["front"].cells, (0, 0), (200, 150)),
    ):
        for place in np.ndindex(cells.shape):
            lows = [o + s * i / n for o, s, i, n in zip(low, size, place, cells.shape, strict=True)]
            highs = [
                o + s * (i + 1) / n
                for o, s, i, n in zip(low, size, place, cells.shape, strict=True)
            ]
            grids[int(cells[place])] = lows, highs
    rectangle = (40 + 33 - 18.5, 25 + 41 - 11.5), (40 + 33 + 18.5, 25 + 41 + 11.5)
    for one, other, value in zip(a, b, g, strict=True):
        area = 1.0
        for axis in range(2):
            low = max(grids[one][0][axis], grids[other][0][axis], rectangle[0][axis])
            high = min(grids[one][1][axis], grids[other][1][axis], rectangle[1][axis])
            area *= high - low
        assert value == pytest.approx(1.5 * area * 1e-6 / 10e-3)
    assert g.sum() == pytest.approx(1.5 * 0.037 * 0.023 / 10e-3)


def test_thin_filler_of_high_conductivity_makes_board_and_wall_one():
    row = {"side": "front", "conductivity_w_per_mk": 5000}
    document = boxed(parts={}, fillers={"a": row})
    document = patched(document, {"boards": {"main": {"from_walls_mm": {"front": 0.1}}}})
    solved = answer(document)
    places = solved.network.places
    plate, wall = solved.at(places.boards["main"].mean), places.wall_inside["front"].cells
    middle = solved.temperature_c[wall[1:3, 1:3]].mean()
    assert plate == pytest.approx(middle, abs=0.5)


def test_filler_takes_its_area_off_the_films_of_both_faces():
    case = case_of(boxed(fillers={"a": {**FILLER, "length_mm": 60}}))
    plate = board_grid()
    wall = PlateGrid((0, 2), (0.0, 0.0, 0.0), (0.2, 0.1, 0.15), (4, 4), np.ones((2, 4, 4)))
    assert bare_board(case, "main", "front", plate).sum() == pytest.approx(0.06 * 0.1)
    assert bare_board(case, "main", "back", plate).sum() == pytest.approx(0.12 * 0.1)
    assert bare_wall(case, "front", wall).sum() == pytest.approx(0.2 * 0.15 - 0.06 * 0.1)
    assert bare_wall(case, "back", wall).sum() == pytest.approx(0.2 * 0.15)
    # U1, 14 x 10 mm, stands in the filler: neither of them leaves its place to the other.
    (filler,) = case.boards["main"].fillers
    under = between_parts(plate, filler, parts_on(case, "main", "front"))
    assert under.sum() == pytest.approx(0.06 * 0.1 - 0.014 * 0.01)


def test_cover_that_cuts_cells_leaves_their_rest_bare():
    """18 x 14 mm around a part of 14 x 10 mm, on cells of 10 x 10 mm: 252 mm2 are covered."""
    row = {**FILLER, "at_mm": [60, 50], "length_mm": 18, "width_mm": 14}
    case = case_of(boxed(fillers={"a": row}))
    bare = bare_board(case, "main", "front", board_grid())
    assert bare.sum() == pytest.approx(0.012 - 252e-6)


def test_part_in_a_filler_gives_its_heat_through_the_rest_of_it():
    """14 x 10 x 2 mm in 10 mm of filler: 8 mm are left over its top; no film, no radiation."""
    solved = answer(boxed(fillers={"a": {**FILLER, "contact_mm2k_per_w": 50}}))
    resistance = (8e-3 / 1.5 + 50e-6) / 140e-6
    (heat,) = part_heat(solved)
    assert heat.to_air_w == heat.to_radiation_w == 0.0
    top = node(solved, "U1 junction") - node(solved, "front under U1")
    assert heat.to_pad_w == pytest.approx(top / resistance, rel=1e-6)
    assert heat.to_pad_w + heat.to_mount_w == pytest.approx(heat.power_w)
    board_w = conductance(solved, "board:main", "filler")
    assert board_w == pytest.approx((0.12 * 0.1 - 140e-6) / (10e-3 / 1.5 + 50e-6))


def test_part_partly_in_a_filler_keeps_the_rest_of_its_surface():
    """A filler over the left half of the board ends in the middle of U1."""
    row = {**FILLER, "at_mm": [30, 50], "length_mm": 60}
    solved = answer(boxed(fillers={"a": row}))
    (heat,) = part_heat(solved)
    top = node(solved, "U1 junction") - node(solved, "front under U1")
    assert heat.to_pad_w == pytest.approx(top * 1.5 * 70e-6 / 8e-3, rel=1e-6)
    assert heat.to_air_w > 0
    assert heat.to_radiation_w > 0
    parts = heat.to_pad_w + heat.to_mount_w + heat.to_air_w + heat.to_radiation_w
    assert parts == pytest.approx(heat.power_w)


def test_two_fillers_that_meet_over_a_part_are_one():
    row = {**FILLER, "at_mm": [30, 50], "length_mm": 60}
    halves = {"a": row, "b": {**row, "at_mm": [90, 50]}}
    one, two = answer(boxed(fillers={"a": FILLER})), answer(boxed(fillers=halves))
    np.testing.assert_allclose(rises(two), rises(one), rtol=0.01)
    (heat,) = part_heat(two)
    assert heat.to_air_w == heat.to_radiation_w == 0.0


def test_filler_that_only_covers_a_part_joins_no_board():
    row = {**FILLER, "at_mm": [60, 50], "length_mm": 14, "width_mm": 10}
    solved = answer(boxed(fillers={"a": row}))
    labels = list(solved.network.labels)
    assert LinkLabel("part:U1", "filler") in labels
    assert links(solved, "board:main", "filler")[0].size == 0


def test_part_as_high_as_the_space_touches_the_wall():
    parts = {"U1": part(power_w=2, height_mm=10)}
    solved = answer(boxed(parts=parts, fillers={"a": {**FILLER, "contact_mm2k_per_w": 140}}))
    top = node(solved, "U1 junction") - node(solved, "front under U1")
    assert solved.flow("part:U1", "filler") == pytest.approx(top, rel=1e-6)  # at 1 K/W


# Cans -----------------------------------------------------------------------------------------


OWNER = "can:main/c"


def can_of(**changes):
    return {"shield_cans": {"c": {**CAN, **changes}}}


def test_what_enters_a_can_leaves_it():
    solved = answer(boxed(**can_of()))
    enters = [
        solved.flow("part:U1", "still_air"),
        solved.flow("part:U1", "radiation_inside"),
        solved.flow(OWNER, "still_air"),
        solved.flow(OWNER, "radiation_under"),
        -solved.flow(OWNER, "frame"),  # from the can to the board
    ]
    leaves = [solved.flow(OWNER, "convection_inside"), solved.flow(OWNER, "radiation_inside")]
    assert sum(enters) == pytest.approx(sum(leaves), rel=1e-6)
    assert min(*enters[:2], *leaves) > 0


def test_part_under_a_can_sees_only_the_can():
    """Still air over 3 mm, and radiation between parallel faces of 0.9 and 0.88."""
    solved = answer(boxed(**can_of(finish="grey_paint")))
    part_c, can_c = node(solved, "U1 junction"), node(solved, "c can on main")
    area, k = 140e-6, float(air(25 + ZERO_C).conductivity)
    assert conductance(solved, "part:U1", "still_air") == pytest.approx(k * area / 3e-3)
    eps = case_of(boxed()).parts["U1"].finish.emissivity, 0.88
    fourth = (part_c + ZERO_C) ** 4 - (can_c + ZERO_C) ** 4
    expected = SIGMA * area * fourth / (1 / eps[0] + 1 / eps[1] - 1)
    assert solved.flow("part:U1", "radiation_inside") == pytest.approx(expected, rel=1e-6)
    assert solved.flow("part:U1", "convection_inside") == 0.0
    (heat,) = part_heat(solved)
    assert heat.to_air_w == pytest.approx(k * area / 3e-3 * (part_c - can_c), rel=1e-6)
    total = heat.to_air_w + heat.to_radiation_w + heat.to_mount_w
    assert total == pytest.approx(heat.power_w)
    # The air around it is told to be as warm as the can.
    assert solved.at(solved.network.places.parts["U1"].air) == can_c


def test_board_under_a_can_sees_only_the_can():
    """30 x 20 mm less a part of 14 x 10 mm, still air over 5 mm."""
    solved = answer(boxed(**can_of()))
    area, k = 600e-6 - 140e-6, float(air(25 + ZERO_C).conductivity)
    assert conductance(solved, OWNER, "still_air") == pytest.approx(k * area / 5e-3)
    case = case_of(boxed(**can_of()))
    plate = board_grid()
    assert bare_board(case, "main", "front", plate).sum() == pytest.approx(0.012 - 600e-6)
    assert bare_board(case, "main", "back", plate).sum() == pytest.approx(0.012)


def test_frame_is_its_conductance_along_the_outline():
    solved = answer(boxed(**can_of(frame_conductance_w_per_mk=1e-3)))
    assert conductance(solved, OWNER, "frame") == pytest.approx(1e-3 * 0.1, rel=1e-3)


def test_tight_frame_makes_the_can_as_warm_as_the_board_along_it():
    solved = answer(boxed(**can_of(frame_conductance_w_per_mk=10_000)))
    _, cells, g = links(solved, OWNER, "frame")
    along = float(np.sum(solved.temperature_c[cells] * g) / g.sum())
    assert node(solved, "c can on main") == pytest.approx(along, abs=1.0)


def test_loose_frame_leaves_the_can_to_its_air_gaps():
    """The can is cooler, the part under it hotter, than with a frame that conducts."""
    loose, tight = (answer(boxed(**can_of(frame_conductance_w_per_mk=g))) for g in (1e-6, 10_000))
    assert node(loose, "c can on main") < node(tight, "c can on main") - 5
    assert node(loose, "U1 junction") > node(tight, "U1 junction")


def test_bright_can_and_part_do_not_radiate():
    document = boxed(parts={"U1": part(power_w=2, finish="mirror")}, **can_of(finish="mirror"))
    document = patched(document, {"finishes": {"mirror": {"emissivity": 0}}})
    solved = answer(document)
    assert solved.flow("part:U1", "radiation_inside") == 0.0
    assert solved.flow(OWNER, "radiation_under") == 0.0
    assert solved.flow(OWNER, "radiation_inside") == 0.0


@pytest.mark.parametrize("height", [2, 2.05])
def test_gap_over_a_part_as_high_as_its_can_is_a_tenth_of_a_millimetre(height):
    solved = answer(boxed(**can_of(height_mm=height)))
    k = float(air(25 + ZERO_C).conductivity)
    assert conductance(solved, "part:U1", "still_air") == pytest.approx(k * 140e-6 / 1e-4)


def test_part_that_fills_its_can_leaves_no_board_in_it():
    solved = answer(boxed(**can_of(length_mm=14, width_mm=10)))
    assert LinkLabel(OWNER, "still_air") not in solved.network.labels
    assert solved.flow("part:U1", "still_air") > 0


def test_can_over_nothing_and_part_beside_a_can():
    solved = answer(boxed(**can_of(at_mm=[20, 20])))
    assert solved.flow(OWNER, "still_air") > 0
    assert solved.flow("part:U1", "convection_inside") > 0
    assert LinkLabel("part:U1", "still_air") not in solved.network.labels
