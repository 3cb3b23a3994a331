"""Which faces inside a box look at each other, where, and how far apart: columns of air.

Every piece of a face lies in exactly one column, which ends at the face it looks at.
"""

from collections.abc import Sequence
from functools import lru_cache

import numpy as np

from enclosure_check.description.frames import Vector
from enclosure_check.network.grid import PlateGrid, kept
from enclosure_check.network.links import FloatArray, IntArray
from enclosure_check.records import dataclass

# Faces nearer than this are taken as so far apart. [m]
LEAST_GAP = 1e-5

# Of a face: axis, sign, position along the axis [m], cells.
_Outline = tuple[int, int, float, PlateGrid]


@dataclass(frozen=True, eq=False)
class Face:
    """A face of a wall or board that looks into the air.

    Attributes
    ----------
    surface
        Number of its film.
    axis, sign
        Direction of its normal into the air.
    at
        Its position along that axis [m].
    grid, cells
        Its cells.
    bare
        Share of each cell that nothing covers.
    """

    surface: int
    axis: int
    sign: int
    at: float
    grid: PlateGrid
    cells: IntArray
    bare: FloatArray

    def holds(self, point: Sequence[float] | FloatArray) -> bool:
        """Whether a point, seen along the axis, lies on the face."""
        return all(
            self.grid.low[axis] < point[axis] < self.grid.low[axis] + self.grid.size[axis]
            for axis in self.grid.axes
        )


@dataclass(frozen=True, eq=False)
class Place:
    """Where a column lies between which faces, whatever covers them."""

    lower: int
    upper: int
    """Its faces, by their places among all."""
    rectangles: list[tuple[Vector, Vector]]
    """Low corners and sizes [m]."""
    on_lower: FloatArray
    on_upper: FloatArray
    """Area of each cell of the faces inside the column [m2]."""
    facing: FloatArray
    """Area over which each cell of the lower face looks at each of the upper [m2]."""
    extent: tuple[FloatArray, FloatArray]
    """Low and high corner of all rectangles together [m]."""


@dataclass(frozen=True, eq=False)
class Column:
    """Air between two facing faces: from ``lower`` up the axis to ``upper``, over rectangles."""

    lower: Face
    upper: Face
    place: Place

    @property
    def rectangles(self) -> list[tuple[Vector, Vector]]:
        """Low corners and sizes [m]."""
        return self.place.rectangles

    @property
    def width(self) -> float:
        """Distance of the faces [m]."""
        return max(self.upper.at - self.lower.at, LEAST_GAP)

    def area_on(self, face: Face) -> FloatArray:
        """Bare area of each cell of one of the faces inside the column [m2]."""
        area = self.place.on_lower if face is self.lower else self.place.on_upper
        return np.asarray(area * face.bare)

    def extent(self) -> tuple[FloatArray, FloatArray]:
        """Low and high corner of all rectangles together [m]."""
        return self.place.extent

    def straight(self) -> tuple[IntArray, IntArray, FloatArray]:
        """Give cells of the lower and upper face that look at each other, and over what area."""
        bare = self.lower.bare[:, :, None, None] * self.upper.bare[None, None]
        areas = (self.place.facing * bare).reshape(self.lower.cells.size, self.upper.cells.size)
        one, other = np.nonzero(areas > 0)
        return self.lower.cells.ravel()[one], self.upper.cells.ravel()[other], areas[one, other]


def _common(a: FloatArray, b: FloatArray, low: float, high: float) -> FloatArray:
    """Lengths that cells of two rows have in common inside an interval, shape (a, b)."""
    start = np.maximum(np.maximum(a[:-1, None], b[None, :-1]), low)
    end = np.minimum(np.minimum(a[1:, None], b[None, 1:]), high)
    return np.asarray(np.maximum(end - start, 0.0))


def find_columns(faces: Sequence[Face]) -> list[Column]:
    """Find the columns of air between faces."""
    return [Column(faces[each.lower], faces[each.upper], each) for each in places_of(faces)]


def places_of(faces: Sequence[Face]) -> tuple[Place, ...]:
    """Give where columns lie between faces, whatever covers them."""
    return _places(tuple((face.axis, face.sign, face.at, face.grid) for face in faces))


@lru_cache(maxsize=8)
def _places(outlines: tuple[_Outline, ...]) -> tuple[Place, ...]:
    """See `places_of`; kept, as the same faces come again with other parts on them."""
    none = np.zeros(0)
    faces = [
        Face(index, *outline, none.astype(np.intp), none) for index, outline in enumerate(outlines)
    ]
    found: dict[tuple[int, int], list[tuple[Vector, Vector]]] = {}
    for axis in range(3):
        same = [face for face in faces if face.axis == axis]
        first, second = (other for other in range(3) if other != axis)
        edges = [_edges(same, along) for along in (first, second)]
        for a_low, a_high in zip(edges[0], edges[0][1:], strict=False):
            for b_low, b_high in zip(edges[1], edges[1][1:], strict=False):
                point = [0.0, 0.0, 0.0]
                point[first], point[second] = (a_low + a_high) / 2, (b_low + b_high) / 2
                here = [face for face in same if face.holds(point)]
                low, size = [0.0, 0.0, 0.0], [0.0, 0.0, 0.0]
                low[first], low[second] = a_low, b_low
                size[first], size[second] = a_high - a_low, b_high - b_low
                rectangle = (low[0], low[1], low[2]), (size[0], size[1], size[2])
                for lower, upper in _facing(here):
                    found.setdefault((lower.surface, upper.surface), []).append(rectangle)
    return tuple(
        _place(lower, upper, faces[lower].grid, faces[upper].grid, rectangles)
        for (lower, upper), rectangles in found.items()
    )


def _place(
    lower: int, upper: int, a: PlateGrid, b: PlateGrid, rectangles: list[tuple[Vector, Vector]]
) -> Place:
    on_lower, on_upper = np.zeros(a.counts), np.zeros(b.counts)
    facing = np.zeros((*a.counts, *b.counts))
    for low, size in rectangles:
        on_lower += a.overlap(low, size)
        on_upper += b.overlap(low, size)
        first, second = (
            _common(a.edges[place], b.edges[place], low[axis], low[axis] + size[axis])
            for place, axis in enumerate(a.axes)
        )
        facing += np.einsum("ac,bd->abcd", first, second)
    lows = np.array([low for low, _ in rectangles])
    highs = np.array([np.add(low, size) for low, size in rectangles])
    extent = kept(lows.min(axis=0)), kept(highs.max(axis=0))
    return Place(lower, upper, rectangles, kept(on_lower), kept(on_upper), kept(facing), extent)


def facing_at(faces: list[Face], axis: int, sign: int, top: float, point: Vector) -> Face | None:
    """Give the face that a part's top looks at: the nearest beyond it over its middle."""
    beyond = [
        face
        for face in faces
        if face.axis == axis
        and face.sign == -sign
        and (face.at - top) * sign >= 0
        and face.holds(np.asarray(point))
    ]
    return min(beyond, key=lambda face: abs(face.at - top), default=None)


def _edges(faces: list[Face], axis: int) -> list[float]:
    ends = {
        round(end, 9)
        for face in faces
        for end in (face.grid.low[axis], face.grid.low[axis] + face.grid.size[axis])
    }
    return sorted(ends)


def _facing(here: list[Face]) -> list[tuple[Face, Face]]:
    """Pair the faces met along a line: each that looks up the axis with the next looking down."""
    up = [face for face in here if face.sign > 0]
    down = [face for face in here if face.sign < 0]
    pairs = []
    for lower in up:
        above = [face for face in down if face.at >= lower.at]
        if above:
            pairs.append((lower, min(above, key=lambda face: face.at)))
    return pairs
