"""Where walls, boards, parts and pads end up in the frame of the box, by hand."""

import pytest
from support.cases import board, box, case_of, errors_of, part, patched

# `box`: 200 wide (x), 100 deep (y), 150 high (z) inside, walls 2 mm.


def body(document, name="U1"):
    made = case_of(document).parts[name]
    return made.low_mm, made.size_mm


# Sizes --------------------------------------------------------------------------------------


def test_inside_sizes_grow_by_the_walls():
    case = case_of(box(walls={"left": {"thickness_mm": 5}}))
    assert case.inside_mm == (200, 100, 150)
    assert case.outside_mm == (200 + 5 + 2, 100 + 4, 150 + 4)


def test_outside_sizes_shrink_by_the_walls():
    case = case_of(box(box={"dimensions": "outside"}, walls={"top": {"thickness_mm": 10}}))
    assert case.outside_mm == (200, 100, 150)
    assert case.inside_mm == (196, 96, 150 - 10 - 2)


# Boards -------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("parallel", "low", "size"),
    [
        # 60 long, 40 wide, 2 thick: in the middle of 200 x 100 x 150.
        ("back", (70, 49, 55), (60, 2, 40)),
        ("front", (70, 49, 55), (60, 2, 40)),
        ("left", (99, 20, 55), (2, 60, 40)),
        ("right", (99, 20, 55), (2, 60, 40)),
        ("bottom", (70, 30, 74), (60, 40, 2)),
        ("top", (70, 30, 74), (60, 40, 2)),
    ],
)
def test_board_stands_in_the_middle(parallel, low, size):
    row = {"parallel_to": parallel, "length_mm": 60, "width_mm": 40, "thickness_mm": 2}
    made = case_of(box(boards={"main": row})).boards["main"]
    assert (made.low_mm, made.size_mm) == (low, size)
    assert made.high_mm == tuple(a + b for a, b in zip(low, size, strict=True))
    assert size[made.axis] == 2


@pytest.mark.parametrize(
    ("walls", "low"),
    [
        ({"back": 9}, (40, 100 - 9 - 1.6, 25)),
        ({"front": 9}, (40, 9, 25)),
        ({"left": 3}, (3, 49.2, 25)),
        ({"right": 3}, (200 - 3 - 120, 49.2, 25)),
        ({"bottom": 0}, (40, 49.2, 0)),
        ({"top": 0}, (40, 49.2, 50)),
        ({"top": 4, "back": 9, "right": 80}, (0, 89.4, 46)),
    ],
)
def test_board_off_walls_by_the_clear_distance(walls, low):
    made = case_of(box(boards={"main": board(from_walls_mm=walls)})).boards["main"]
    assert made.low_mm == pytest.approx(low, abs=1e-12)


def test_board_as_large_as_the_inside_fits():
    made = case_of(box(boards={"main": board(length_mm=200, width_mm=150)})).boards["main"]
    assert (made.low_mm, made.size_mm) == ((0, 49.2, 0), (200, 1.6, 150))


# Parts on walls -----------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("place", "side", "low", "size"),
    [
        # 14 to the right, 10 up, 2 high; centre 30 right of and 20 above the lower left corner.
        ("back", "front", (23, 98, 15), (14, 2, 10)),
        ("front", "back", (200 - 30 - 7, 0, 15), (14, 2, 10)),
        ("left", "right", (0, 23, 15), (2, 14, 10)),
        ("right", "left", (198, 100 - 30 - 7, 15), (2, 14, 10)),
        ("bottom", "top", (23, 15, 0), (14, 10, 2)),
        ("top", "bottom", (200 - 30 - 7, 15, 148), (14, 10, 2)),
    ],
)
def test_part_on_each_wall(place, side, low, size):
    row = part(place=place, side=None, at_mm=[30, 20])
    made = case_of(box(parts={"U1": row})).parts["U1"]
    assert (made.low_mm, made.size_mm) == (low, size)
    assert (made.place, made.host, made.side) == ("wall", place, side)


@pytest.mark.parametrize(
    ("corner", "low"),
    [
        ("lower_left", (23, 98, 15)),
        ("lower_right", (200 - 30 - 7, 98, 15)),
        ("upper_left", (23, 98, 150 - 20 - 5)),
        ("upper_right", (200 - 30 - 7, 98, 150 - 20 - 5)),
    ],
)
def test_part_counted_from_each_corner(corner, low):
    row = part(place="back", side=None, at_mm=[30, 20], at_from=corner)
    assert body(box(parts={"U1": row})) == (low, (14, 2, 10))


@pytest.mark.parametrize(
    ("turn", "size"),
    [(0, (14, 2, 10)), (90, (10, 2, 14)), (180, (14, 2, 10)), (270, (10, 2, 14))],
)
def test_part_turned_keeps_its_centre(turn, size):
    row = part(place="back", side=None, at_mm=[30, 20], rotation_deg=turn)
    low, found = body(box(parts={"U1": row}))
    assert found == size
    assert (low[0] + size[0] / 2, low[2] + size[2] / 2) == (30, 20)


# Parts on boards ----------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("parallel", "side", "low", "size"),
    [
        # Board 60 x 40 x 2 in the middle; centre 20 right of and 10 above its lower left corner.
        ("back", "front", (70 + 20 - 7, 49 - 3, 55 + 10 - 5), (14, 3, 10)),
        ("back", "back", (130 - 20 - 7, 51, 55 + 10 - 5), (14, 3, 10)),
        ("front", "front", (70 + 20 - 7, 49 - 3, 55 + 10 - 5), (14, 3, 10)),
        ("left", "left", (99 - 3, 80 - 20 - 7, 55 + 10 - 5), (3, 14, 10)),
        ("left", "right", (101, 20 + 20 - 7, 55 + 10 - 5), (3, 14, 10)),
        ("bottom", "top", (70 + 20 - 7, 30 + 10 - 5, 76), (14, 10, 3)),
        ("bottom", "bottom", (130 - 20 - 7, 30 + 10 - 5, 74 - 3), (14, 10, 3)),
    ],
)
def test_part_on_both_sides_of_boards_in_three_planes(parallel, side, low, size):
    row = {"parallel_to": parallel, "length_mm": 60, "width_mm": 40, "thickness_mm": 2}
    on_it = part(side=side, at_mm=[20, 10], height_mm=3)
    made = case_of(box(boards={"main": row}, parts={"U1": on_it})).parts["U1"]
    assert (made.low_mm, made.size_mm) == (low, size)
    assert (made.place, made.host, made.side) == ("board", "main", side)


def test_part_counted_from_the_far_corner_of_its_board():
    on_it = part(at_mm=[20, 10], at_from="upper_right", rotation_deg=90)
    document = box(boards={"main": board()}, parts={"U1": on_it})
    # Board 120 x 100 from (40, 49.2, 25); the part is 10 wide and 14 high once turned.
    low, size = body(document)
    assert low == pytest.approx((160 - 20 - 5, 49.2 - 2, 125 - 10 - 7), abs=1e-12)
    assert size == (10, 2, 14)


def test_part_may_reach_exactly_to_the_edge_of_its_board_and_no_further():
    document = box(boards={"main": board()}, parts={"U1": part(at_mm=[7, 5])})
    assert body(document)[0] == pytest.approx((40, 47.2, 25), abs=1e-12)
    further = patched(document, {"parts": {"U1": {"at_mm": [6.9, 5]}}})
    assert errors_of(further) == {"parts.U1.at_mm": "reaches 0.1 mm over the edge of 'main'"}


# Parts in the air ---------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("walls", "low"),
    [
        ({}, (75, 42.5, 72.5)),
        ({"left": 8}, (8, 42.5, 72.5)),
        ({"right": 8, "top": 30, "front": 12}, (200 - 8 - 50, 12, 150 - 30 - 5)),
        ({"back": 0, "bottom": 1}, (75, 85, 1)),
    ],
)
def test_body_in_the_air(walls, low):
    row = {"place": "air", "length_mm": 50, "width_mm": 15, "height_mm": 5, "from_walls_mm": walls}
    made = case_of(box(parts={"B1": row})).parts["B1"]
    assert (made.low_mm, made.size_mm) == (low, (50, 15, 5))
    assert (made.place, made.host, made.side) == ("air", "air", "top")
    assert made.centre_mm == tuple(a + b / 2 for a, b in zip(low, (50, 15, 5), strict=True))


def test_body_in_the_air_turned_about_the_upright_axis():
    row = {"place": "air", "length_mm": 50, "width_mm": 15, "height_mm": 5, "rotation_deg": 90}
    assert body(box(parts={"B1": row}), "B1") == ((92.5, 25, 72.5), (15, 50, 5))


# Pads ---------------------------------------------------------------------------------------


def pad(**changes):
    return patched({"to": "front", "thickness_mm": 12, "conductivity_w_per_mk": 3}, changes)


def board_near_front(**part_changes):
    """A board 12 mm off the front wall; a part 2 high on it leaves 10 mm."""
    return box(
        boards={"main": board(from_walls_mm={"front": 12})},
        parts={"U1": part(pad=pad(), **part_changes)},
    )


def test_pad_is_squeezed_to_the_room_there_is():
    made = case_of(board_near_front()).parts["U1"].pad
    assert made.distance_mm == pytest.approx(10, abs=1e-12)
    assert made.wall == "front"
    # As large as the part, centred on it: the board's lower left corner is at (40, 25).
    assert made.low_mm == pytest.approx((93, 0, 70), abs=1e-12)
    assert made.size_mm == (14, 0, 10)
    assert made.area_mm2 == 140


@pytest.mark.parametrize(
    ("place", "side", "distance"),
    [("back", "back", 100 - 49.2 - 1.6 - 2), ("front", "front", 49.2 - 2)],
)
def test_pad_room_on_both_sides_of_a_board(place, side, distance):
    row = part(side=side, pad=pad(to=side, thickness_mm=60))
    document = box(boards={"main": board()}, parts={"U1": row})
    made = case_of(document).parts["U1"].pad
    assert made.wall == place
    assert made.distance_mm == pytest.approx(distance, abs=1e-12)


@pytest.mark.parametrize("parallel", ["left", "bottom"])
def test_pad_room_across_the_other_axes(parallel):
    row = board(parallel_to=parallel, length_mm=60, width_mm=60, from_walls_mm={parallel: 5})
    on_it = part(side=parallel, at_mm=[30, 30], pad=pad(to=parallel, thickness_mm=3.5))
    made = case_of(box(boards={"main": row}, parts={"U1": on_it})).parts["U1"].pad
    assert (made.wall, made.distance_mm) == (parallel, 3)


def test_pad_that_just_touches():
    just = {"parts": {"U1": {"pad": {"thickness_mm": 10.0}}}}
    assert errors_of(patched(board_near_front(), just)) == {}


def test_pad_too_thin_does_not_touch():
    thin = {"parts": {"U1": {"pad": {"thickness_mm": 9.9}}}}
    assert errors_of(patched(board_near_front(), thin)) == {
        "parts.U1.pad.thickness_mm": "given 9.9; thinner than the 10 mm between the part 'main' "
        "carries here and the front wall, so it does not touch"
    }


def test_pad_squeezed_to_half_passes_and_below_that_warns():
    at_half = patched(board_near_front(), {"parts": {"U1": {"pad": {"thickness_mm": 20}}}})
    assert case_of(at_half).warnings == ()
    below = patched(board_near_front(), {"parts": {"U1": {"pad": {"thickness_mm": 20.1}}}})
    (note,) = case_of(below).warnings
    assert note.path == ("parts", "U1", "pad", "thickness_mm")
    assert note.message.startswith("squeezed from 20.1 to 10 mm")


def test_pad_of_its_own_size_is_centred_and_follows_the_turn():
    small = {"parts": {"U1": {"rotation_deg": 90, "pad": {"length_mm": 4, "width_mm": 6}}}}
    made = case_of(patched(board_near_front(), small)).parts["U1"].pad
    # Sizes of a pad run to the right and up; they do not turn with the part.
    assert made.size_mm == (4, 0, 6)
    assert made.low_mm == pytest.approx((100 - 2, 0, 75 - 3), abs=1e-12)


def test_pad_under_a_part_on_a_wall_keeps_its_thickness():
    row = part(place="bottom", side=None, pad={"thickness_mm": 0.5, "conductivity_w_per_mk": 1.5})
    made = case_of(box(parts={"U1": row})).parts["U1"].pad
    assert (made.wall, made.distance_mm, made.area_mm2) == ("bottom", 0.5, 140)


# Overlaps -----------------------------------------------------------------------------------


def two_parts(first_at, second_at, **second):
    return box(
        boards={"main": board()},
        parts={"U1": part(at_mm=first_at), "U2": part(at_mm=second_at, **second)},
    )


def test_parts_side_by_side_do_not_overlap():
    assert case_of(two_parts([20, 50], [34, 50])).warnings == ()
    assert case_of(two_parts([20, 50], [20, 60])).warnings == ()


@pytest.mark.parametrize("second_at", [[33.9, 50], [20, 59.9], [20, 50], [10, 41]])
def test_overlapping_outlines_warn(second_at):
    notes = case_of(two_parts([20, 50], second_at)).warnings
    assert len(notes) == 1
    assert "outline overlaps that of" in notes[0].message


def test_parts_on_two_sides_of_a_board_do_not_overlap():
    assert case_of(two_parts([20, 50], [100, 50], side="back")).warnings == ()


def test_bodies_in_the_air_overlap_only_where_they_meet_in_space():
    row = {"place": "air", "length_mm": 50, "width_mm": 15, "height_mm": 5}
    above = {**row, "from_walls_mm": {"top": 10}}
    assert case_of(box(parts={"B1": row, "B2": above})).warnings == ()
    (note,) = case_of(box(parts={"B1": row, "B2": row})).warnings
    assert note.path == ("parts", "B2")
