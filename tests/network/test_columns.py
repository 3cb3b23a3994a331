"""Columns of air between facing faces: by hand, by throwing points, and by adding areas up."""

import random

import numpy as np
import pytest
from support.cases import COARSE, board, box, network_of, part
from support.inside import inside_air, site_of
from support.random_documents import random_document

from enclosure_check.network.air import AirSite
from enclosure_check.network.columns import Column, Face, facing_at, find_columns

# Inside of the box [m]; the board's plane is the x-z plane.
X, Y, Z = 0.200, 0.100, 0.150
THICK = 0.0016
TINY = 1e-12
# Pieces of a cell below a square micron are left out. [m2]
CRUMB = 1e-10
RANDOM_SEEDS = range(12)


def between(site: AirSite) -> dict[tuple[str, str], Column]:
    """Columns by the names of the faces at their ends, the lower one first."""
    found = {}
    for column in find_columns(site.faces):
        key = tuple(site.films[face.surface].name for face in (column.lower, column.upper))
        assert key not in found
        found[key] = column
    return found


def areas(document) -> dict[tuple[str, str], tuple[float, float]]:
    """Area and width of every column, by the walls and boards at its ends."""
    site = site_of(document).air_site
    return {
        tuple(name.removeprefix("wall ").removesuffix(" inside") for name in key): (
            float(column.straight()[2].sum()),
            column.width,
        )
        for key, column in between(site).items()
    }


def one_board(**changes):
    return box(boards={"main": board(thickness_mm=1.6, **changes)})


def test_empty_box_has_three_columns():
    assert areas(box()) == {
        ("left", "right"): pytest.approx((Y * Z, X)),
        ("front", "back"): pytest.approx((X * Z, Y)),
        ("bottom", "top"): pytest.approx((X * Y, Z)),
    }


def test_one_board_divides_what_it_covers():
    found = areas(one_board())
    covered, gap = 0.120 * 0.100, (Y - THICK) / 2
    assert found == {
        ("left", "right"): pytest.approx((Y * Z, X)),
        ("front", "board main, front side"): pytest.approx((covered, gap)),
        ("board main, back side", "back"): pytest.approx((covered, gap)),
        ("front", "back"): pytest.approx((X * Z - covered, Y)),
        ("bottom", "top"): pytest.approx((X * Y, Z)),
    }


def test_board_near_a_wall_leaves_its_distance():
    found = areas(one_board(from_walls_mm={"back": 7}))
    covered = 0.120 * 0.100
    assert found["board main, back side", "back"] == pytest.approx((covered, 0.007))
    assert found["front", "board main, front side"] == pytest.approx((covered, Y - 0.007 - THICK))


def two_boards(**second):
    first = board(thickness_mm=1.6, from_walls_mm={"front": 20, "left": 20, "bottom": 25})
    return box(
        boards={
            "one": first,
            "two": board(
                thickness_mm=1.6,
                **{"from_walls_mm": {"back": 30, "left": 20, "bottom": 25}, **second},
            ),
        }
    )


def test_facing_boards_look_at_each_other():
    covered = 0.120 * 0.100
    found = areas(two_boards())
    assert found["front", "board one, front side"] == pytest.approx((covered, 0.020))
    assert found["board one, back side", "board two, front side"] == pytest.approx(
        (covered, Y - 0.050 - 2 * THICK)
    )
    assert found["board two, back side", "back"] == pytest.approx((covered, 0.030))
    assert found["front", "back"] == pytest.approx((X * Z - covered, Y))
    assert len(found) == 6


def test_partly_facing_boards_share_what_overlaps():
    """The second board is 60 mm further right and 15 mm higher: 60 x 85 mm face each other."""
    covered, shared = 0.120 * 0.100, 0.060 * 0.085
    found = areas(two_boards(from_walls_mm={"back": 30, "left": 80, "bottom": 40}))
    between_boards = Y - 0.050 - 2 * THICK
    assert found["board one, back side", "board two, front side"] == pytest.approx(
        (shared, between_boards)
    )
    assert found["board one, back side", "back"] == pytest.approx(
        (covered - shared, Y - 0.020 - THICK)
    )
    assert found["front", "board two, front side"] == pytest.approx(
        (covered - shared, Y - 0.030 - THICK)
    )
    assert found["front", "board one, front side"] == pytest.approx((covered, 0.020))
    assert found["board two, back side", "back"] == pytest.approx((covered, 0.030))
    assert found["front", "back"] == pytest.approx((X * Z - 2 * covered + shared, Y))


def test_boards_edge_on_do_not_part_a_column():
    """Only faces across the same axis end a column."""
    upright = areas(one_board(parallel_to="left", length_mm=90, width_mm=100))
    assert upright["front", "back"] == pytest.approx((X * Z, Y))
    assert upright["left", "board main, left side"] == pytest.approx(
        (0.090 * 0.100, (X - THICK) / 2)
    )


def test_cells_across_a_column_look_at_each_other():
    site = site_of(one_board()).air_site
    for column in find_columns(site.faces):
        one, other, area = column.straight()
        lower, upper = column.lower, column.upper
        for cell_a, cell_b, shared in zip(one, other, area, strict=True):
            overlap = 1.0
            for place in (0, 1):
                ends = []
                for face, cell in ((lower, cell_a), (upper, cell_b)):
                    row = np.argwhere(face.cells == cell)[0][place]
                    edges = face.grid.edges[place]
                    ends.append((edges[row], edges[row + 1]))
                overlap *= max(min(ends[0][1], ends[1][1]) - max(ends[0][0], ends[1][0]), 0.0)
            # A column may hold less than what two cells share, never more.
            assert 0 < shared <= overlap + TINY


# Anything --------------------------------------------------------------------------------------


@pytest.fixture(scope="module", params=RANDOM_SEEDS)
def random_site(request) -> AirSite:
    return site_of(random_document(random.Random(request.param))).air_site


def test_columns_hold_every_face_once(random_site):
    columns = find_columns(random_site.faces)
    for face in random_site.faces:
        held = [column for column in columns if face in (column.lower, column.upper)]
        area = sum(column.area_on(face) for column in held)
        np.testing.assert_allclose(area, face.bare * face.grid.cell_area, atol=1e-9 * X)
        assert all(column.width > 0 for column in held)
        assert all(column.lower.sign > 0 > column.upper.sign for column in held)


def nearest_facing(faces: list[Face], face: Face, point: np.ndarray) -> Face:
    """The face that a line from a point of a face along its normal meets first."""
    ahead = []
    for other in faces:
        if other.axis != face.axis or other.sign == face.sign:
            continue
        distance = (other.at - face.at) * face.sign
        within = all(
            other.grid.low[axis] <= point[axis] <= other.grid.low[axis] + other.grid.size[axis]
            for axis in other.grid.axes
        )
        if distance >= 0 and within:
            ahead.append((distance, other))
    return min(ahead, key=lambda pair: pair[0])[1]


def test_columns_end_where_lines_from_a_face_do(random_site):
    rng = np.random.default_rng(7)
    columns = find_columns(random_site.faces)
    for face in random_site.faces:
        for _ in range(20):
            point = np.zeros(3)
            for axis in face.grid.axes:
                point[axis] = face.grid.low[axis] + rng.uniform() * face.grid.size[axis]
            holding = [
                column
                for column in columns
                if face in (column.lower, column.upper)
                and any(
                    all(low[k] <= point[k] <= low[k] + size[k] for k in face.grid.axes)
                    for low, size in column.rectangles
                )
            ]
            assert len(holding) == 1
            ends = (holding[0].lower, holding[0].upper)
            assert nearest_facing(random_site.faces, face, point) in ends


def test_film_areas_are_those_of_the_surfaces(random_site):
    nodes = np.arange(8)
    air = random_site.build(nodes, 300.0, 101_325.0, {"lift": 0, "mixing": 1})
    by_surface = np.bincount(
        air.side_surface[air.side], air.area[:, 0], minlength=len(random_site.films)
    )
    expected = [film.area.sum() for film in random_site.films]
    np.testing.assert_allclose(by_surface, expected, rtol=1e-9, atol=CRUMB)
    assert (air.area > 0).all()
    np.testing.assert_allclose(air.hat.sum(axis=1), 1.0, rtol=1e-12)


# Tops of parts ----------------------------------------------------------------------------------


def test_top_of_a_part_looks_across_its_gap():
    document = one_board()
    document["parts"] = {"U1": part(power_w=1.0, height_mm=9)}
    air = inside_air(network_of(document, COARSE))
    pair = len(air.pairs.width) - 1
    gap = (Y - THICK) / 2 - 0.009
    assert air.pairs.width[pair, 0] == pytest.approx(gap)
    assert air.surfaces.names[air.pairs.first[pair]] == "part U1"
    assert air.surfaces.names[air.pairs.second[pair]] == "wall front inside"
    own = air.pair == pair
    assert air.straight_area[own].sum() == pytest.approx(0.014 * 0.010)
    # Shared by the cells it looks at as it covers them.
    assert len(set(air.cell_b[own].tolist())) == own.sum()
    # Its sides stay outside any gap: its films hold its free surface, the top in the gap.
    sides = np.flatnonzero(air.side_surface == air.pairs.first[pair])
    total = {int(air.side_pair[side]): float(air.area[air.side == side].sum()) for side in sides}
    assert total == {
        pair: pytest.approx(0.014 * 0.010),
        -1: pytest.approx(2 * 0.009 * (0.014 + 0.010)),
    }
    # What it covers is missing from the board's own column.
    board_side = air.surfaces.names.index("board main, front side")
    own = np.isin(air.side, np.flatnonzero(air.side_surface == board_side))
    assert air.area[own].sum() == pytest.approx(0.120 * 0.100 - 0.014 * 0.010)


def test_top_looks_at_the_nearest_face_over_its_middle():
    site = site_of(two_boards()).air_site
    by_name = {site.films[face.surface].name: face for face in site.faces}
    middle = (0.08, 0.03, 0.07)
    found = facing_at(site.faces, 1, 1, 0.03, middle)
    assert found is by_name["board two, front side"]
    assert facing_at(site.faces, 1, -1, 0.015, middle) is by_name["wall front inside"]
    # Beside the boards it looks at the far wall; past everything at nothing.
    assert facing_at(site.faces, 1, 1, 0.03, (0.19, 0.03, 0.07)) is by_name["wall back inside"]
    assert facing_at(site.faces, 1, 1, 0.11, middle) is None
