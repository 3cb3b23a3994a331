"""The coordinate convention: axes of the box, faces, and how positions on a face are counted.

The box frame has its origin at the inside corner left-front-bottom; x runs to the right seen
from the front, y to the rear, z up. A face (the inside of a wall, or a side of a board) is
looked at against its normal. Seen so, *up* is z on upright faces and y (the rear) on level
ones, and *right* follows from it.
"""

import math

from enclosure_check.description.names import WallName
from enclosure_check.records import dataclass

Vector = tuple[float, float, float]

AXIS: dict[WallName, int] = {"left": 0, "right": 0, "front": 1, "back": 1, "bottom": 2, "top": 2}
SIGN: dict[WallName, int] = {
    "left": -1,
    "right": 1,
    "front": -1,
    "back": 1,
    "bottom": -1,
    "top": 1,
}
OPPOSITE: dict[WallName, WallName] = {
    "left": "right",
    "right": "left",
    "front": "back",
    "back": "front",
    "bottom": "top",
    "top": "bottom",
}
_PAIRS: tuple[tuple[WallName, WallName], ...] = (
    ("left", "right"),
    ("front", "back"),
    ("bottom", "top"),
)


def wall_pair(axis: int) -> tuple[WallName, WallName]:
    """Give the two walls across a box axis, the one at the origin first."""
    return _PAIRS[axis]


@dataclass(frozen=True)
class FaceFrame:
    """How a face is read: the box axis and direction of its normal, right and up."""

    normal_axis: int
    normal_sign: int
    right_axis: int
    right_sign: int
    up_axis: int


def face_frame(axis: int, sign: int) -> FaceFrame:
    """Give the frame of a face whose normal, pointing at the viewer, is ``sign`` times ``axis``.

    Right is (view direction) x (up), the view direction being the normal reversed.
    """
    up_axis = 2 if axis != 2 else 1
    right_axis = 3 - axis - up_axis
    # e_axis x e_up = +e_right for an even permutation (axis, up, right), else -e_right.
    even = (axis, up_axis, right_axis) in ((0, 1, 2), (1, 2, 0), (2, 0, 1))
    return FaceFrame(axis, sign, right_axis, -sign if even else sign, up_axis)


def point_on_face(
    frame: FaceFrame, low: Vector, high: Vector, at: tuple[float, float], corner: str
) -> tuple[float, float]:
    """Give the box coordinates along the right and up axes of a point counted from a corner.

    Parameters
    ----------
    frame
        Frame of the face.
    low, high
        Box coordinates of the face's extent [mm].
    at
        Distances inward from the corner, along right/left and up/down [mm].
    corner
        ``lower_left``, ``lower_right``, ``upper_left`` or ``upper_right`` as seen by the viewer.
    """
    vertical, horizontal = corner.split("_")
    from_low_right = (horizontal == "left") == (frame.right_sign > 0)
    right = low[frame.right_axis] + at[0] if from_low_right else high[frame.right_axis] - at[0]
    up = low[frame.up_axis] + at[1] if vertical == "lower" else high[frame.up_axis] - at[1]
    return right, up


def turned_rectangle(length: float, width: float, turn_deg: float) -> tuple[float, float]:
    """Give the sides of a rectangle along the axes that stands for a turned one.

    Quarter turns are exact. In between it has the area of the rectangle, which is what conduction
    and films go by, and the proportions of the smallest rectangle along the axes that encloses
    it: it goes over into the exact ones without a jump and is a square at 45 deg.

    Parameters
    ----------
    length, width
        Sides of the rectangle, along right and up before the turn [mm].
    turn_deg
        Turn, either way round [deg].
    """
    quarters, rest = divmod(turn_deg, 90)
    if rest == 0:
        return (width, length) if quarters % 2 else (length, width)
    sine, cosine = abs(math.sin(math.radians(turn_deg))), abs(math.cos(math.radians(turn_deg)))
    right, up = length * cosine + width * sine, length * sine + width * cosine
    scale = math.sqrt(length * width / (right * up))
    return right * scale, up * scale
