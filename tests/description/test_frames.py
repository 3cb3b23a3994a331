"""The coordinate convention, face by face, against what one sees standing in front of it."""

import itertools
import math

import numpy as np
import pytest

from enclosure_check.description.box import Tilt
from enclosure_check.description.frames import (
    AXIS,
    OPPOSITE,
    SIGN,
    face_frame,
    point_on_face,
    turned_rectangle,
    wall_pair,
)
from enclosure_check.description.names import WALL_NAMES
from enclosure_check.description.resolve_box import up_vector

X, Y, Z = 0, 1, 2
# A box 200 wide, 100 deep, 150 high.
LOW, HIGH = (0.0, 0.0, 0.0), (200.0, 100.0, 150.0)

# Standing inside and looking at a wall: which way the box's axes run to the right and up.
# (axis of right, its sign, axis of up, its sign)
SEEN_FROM_INSIDE = {
    "back": (X, 1, Z, 1),  # facing the rear, left and right are those of the front view
    "front": (X, -1, Z, 1),  # turned round
    "left": (Y, 1, Z, 1),  # the rear is at the right hand
    "right": (Y, -1, Z, 1),  # the rear is at the left hand
    "bottom": (X, 1, Y, 1),  # looking down, the rear at the top of the page
    "top": (X, -1, Y, 1),  # looking up, the rear still at the top of the page
}


def test_walls_lie_on_the_axes_as_the_convention_says():
    assert (AXIS["left"], SIGN["left"]) == (X, -1)
    assert (AXIS["right"], SIGN["right"]) == (X, 1)
    assert (AXIS["front"], SIGN["front"]) == (Y, -1)
    assert (AXIS["back"], SIGN["back"]) == (Y, 1)
    assert (AXIS["bottom"], SIGN["bottom"]) == (Z, -1)
    assert (AXIS["top"], SIGN["top"]) == (Z, 1)


def test_opposite_walls_share_their_axis_and_nothing_else():
    for name in WALL_NAMES:
        other = OPPOSITE[name]
        assert other != name
        assert OPPOSITE[other] == name
        assert AXIS[other] == AXIS[name]
        assert SIGN[other] == -SIGN[name]


def test_pairs_name_the_wall_at_the_origin_first():
    assert [wall_pair(axis) for axis in (X, Y, Z)] == [
        ("left", "right"),
        ("front", "back"),
        ("bottom", "top"),
    ]


@pytest.mark.parametrize("wall", WALL_NAMES)
def test_wall_as_seen_from_inside(wall):
    # The normal of the inside points away from the wall.
    frame = face_frame(AXIS[wall], -SIGN[wall])
    right_axis, right_sign, up_axis, _ = SEEN_FROM_INSIDE[wall]
    assert (frame.normal_axis, frame.normal_sign) == (AXIS[wall], -SIGN[wall])
    assert (frame.right_axis, frame.right_sign, frame.up_axis) == (right_axis, right_sign, up_axis)


@pytest.mark.parametrize("sign", [-1, 1])
@pytest.mark.parametrize("axis", [X, Y, Z])
def test_right_up_and_normal_are_right_handed(axis, sign):
    frame = face_frame(axis, sign)
    unit = np.eye(3)
    right = frame.right_sign * unit[frame.right_axis]
    normal = sign * unit[axis]
    # Right cross up points at the viewer.
    assert np.cross(right, unit[frame.up_axis]).tolist() == normal.tolist()


@pytest.mark.parametrize(
    ("wall", "corner", "expected"),
    [
        # 30 along and 10 up or down from each corner of the back wall (200 wide, 150 high).
        ("back", "lower_left", (30, 10)),
        ("back", "lower_right", (170, 10)),
        ("back", "upper_left", (30, 140)),
        ("back", "upper_right", (170, 140)),
        # The front wall seen from inside: its left is the box's right.
        ("front", "lower_left", (170, 10)),
        ("front", "lower_right", (30, 10)),
        ("front", "upper_left", (170, 140)),
        ("front", "upper_right", (30, 140)),
        # The left wall (100 deep): its left is the front.
        ("left", "lower_left", (30, 10)),
        ("left", "lower_right", (70, 10)),
        ("left", "upper_left", (30, 140)),
        ("left", "upper_right", (70, 140)),
        ("right", "lower_left", (70, 10)),
        ("right", "lower_right", (30, 10)),
        ("right", "upper_left", (70, 140)),
        ("right", "upper_right", (30, 140)),
        # The floor, seen from above with the rear up: lower left is left front.
        ("bottom", "lower_left", (30, 10)),
        ("bottom", "lower_right", (170, 10)),
        ("bottom", "upper_left", (30, 90)),
        ("bottom", "upper_right", (170, 90)),
        # The ceiling, seen from below with the rear up: its left is the box's right.
        ("top", "lower_left", (170, 10)),
        ("top", "lower_right", (30, 10)),
        ("top", "upper_left", (170, 90)),
        ("top", "upper_right", (30, 90)),
    ],
)
def test_point_counted_from_a_corner(wall, corner, expected):
    frame = face_frame(AXIS[wall], -SIGN[wall])
    assert point_on_face(frame, LOW, HIGH, (30, 10), corner) == expected


def test_point_counts_from_the_face_and_not_from_the_box():
    frame = face_frame(Y, -1)
    low, high = (20.0, 50.0, 5.0), (120.0, 51.6, 85.0)
    assert point_on_face(frame, low, high, (30, 10), "lower_left") == (50, 15)
    assert point_on_face(frame, low, high, (30, 10), "upper_right") == (90, 75)


# Tilt ---------------------------------------------------------------------------------------


def up(lean: float, roll: float) -> tuple[float, float, float]:
    return up_vector(Tilt(lean_back_deg=lean, roll_right_deg=roll))


@pytest.mark.parametrize(
    ("lean", "roll", "expected"),
    [
        (0, 0, (0, 0, 1)),
        (90, 0, (0, -1, 0)),  # on its back: the front looks up
        (-90, 0, (0, 1, 0)),  # on its face: the back looks up
        (0, 90, (-1, 0, 0)),  # on its right side: the left looks up
        (0, -90, (1, 0, 0)),
        (180, 0, (0, 0, -1)),
        (0, 180, (0, 0, -1)),
        (-180, -180, (0, 0, 1)),
        (90, 90, (-1, 0, 0)),  # laid back, then rolled about the level axis: the left looks up
        (30, 0, (0, -0.5, math.sqrt(3) / 2)),
        (0, 30, (-0.5, 0, math.sqrt(3) / 2)),
    ],
)
def test_up_in_the_frame_of_the_box(lean, roll, expected):
    assert up(lean, roll) == pytest.approx(expected, abs=1e-15)


@pytest.mark.parametrize(
    ("lean", "roll"), list(itertools.product((-180, -101, -90, -33, 0, 12, 75, 180), repeat=2))
)
def test_up_is_what_two_turns_of_the_box_make_of_it(lean, roll):
    a, b = math.radians(lean), math.radians(roll)
    # Turns of the box in the room: the top towards the rear, then towards the right.
    lean_back = np.array([[1, 0, 0], [0, math.cos(a), math.sin(a)], [0, -math.sin(a), math.cos(a)]])
    roll_right = np.array(
        [[math.cos(b), 0, math.sin(b)], [0, 1, 0], [-math.sin(b), 0, math.cos(b)]]
    )
    turned = roll_right @ lean_back
    assert (lean_back @ [0, 0, 1]) == pytest.approx([0, math.sin(a), math.cos(a)], abs=1e-15)
    assert (roll_right @ [0, 0, 1]) == pytest.approx([math.sin(b), 0, math.cos(b)], abs=1e-15)
    # The room's up, seen in the frame of the turned box.
    assert up(lean, roll) == pytest.approx(tuple(turned.T @ [0, 0, 1]), abs=1e-15)
    assert math.hypot(*up(lean, roll)) == pytest.approx(1, abs=1e-15)


# Parts turned between quarter turns --------------------------------------------------------


@pytest.mark.parametrize(
    ("turn", "sides"),
    [(0, (8, 2)), (90, (2, 8)), (180, (8, 2)), (270, (2, 8)), (-90, (2, 8)), (360, (8, 2))],
)
def test_quarter_turns_are_exact(turn, sides):
    assert turned_rectangle(8, 2, turn) == sides


def test_a_turned_rectangle_keeps_its_area_and_is_a_square_halfway():
    for turn in range(-360, 361, 5):
        right, up = turned_rectangle(8, 2, turn)
        assert right * up == pytest.approx(16)
    assert turned_rectangle(8, 2, 45) == pytest.approx((4, 4))


def test_a_turned_rectangle_goes_over_into_quarter_turns_without_a_jump():
    for turn in (0, 90, 180, 270):
        near = turned_rectangle(8, 2, turn + 1e-6)
        assert near == pytest.approx(turned_rectangle(8, 2, turn), rel=1e-6)
        assert turned_rectangle(8, 2, turn - 1e-6) == pytest.approx(near, rel=1e-6)


def test_a_turned_rectangle_has_the_proportions_of_what_encloses_it():
    # 3, 4, 5: a square of 10 turned by the angle whose sine is 0.6 is enclosed by one of 14.
    right, up = turned_rectangle(10, 10, 36.86989764584402)
    assert (right, up) == pytest.approx((10, 10))
    right, up = turned_rectangle(10, 5, 36.86989764584402)
    assert right / up == pytest.approx((10 * 0.8 + 5 * 0.6) / (10 * 0.6 + 5 * 0.8))
