"""Which faces inside a box look at each other, where, and how far apart: columns of air.

Every piece of a face lies in exactly one column, which ends at the face it looks at.
"""

import numpy as np

from enclosure_check.description.frames import Vector
from enclosure_check.network.grid import PlateGrid
from enclosure_check.network.links import FloatArray, IntArray
from enclosure_check.records import dataclass

# Faces nearer than this are taken as so far apart. [m]
LEAST_GAP = 1e-5


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

    def holds(self, point: FloatArray) -> bool:
        """Whether a point, seen along the axis, lies on the face."""
        return all(
            self.grid.low[axis] < point[axis] < self.grid.low[axis] + self.grid.size[axis]
            for axis in self.grid.axes
        )


@dataclass(frozen=True, eq=False)
class Column:
    """Air between two facing faces: from ``lower`` up the axis to ``upper``, over rectangles."""

    lower: Face
    upper: Face
    rectangles: list[tuple[Vector, Vector]]
    """Low corners and sizes [m]."""

    @property
    def width(self) -> float:
        """Distance of the faces [m]."""
        return max(self.upper.at - self.lower.at, LEAST_GAP)

    def area_on(self, face: Face) -> FloatArray:
        """Bare area of each cell of one of the faces inside the column [m2]."""
        total = np.zeros(face.grid.counts)
        for low, size in self.rectangles:
            total += face.grid.overlap(low, size)
        return np.asarray(total * face.bare)

    def extent(self) -> tuple[FloatArray, FloatArray]:
        """Low and high corner of all rectangles together [m]."""
        lows = np.array([low for low, _ in self.rectangles])
        highs = np.array([np.add(low, size) for low, size in self.rectangles])
        return lows.min(axis=0), highs.max(axis=0)

    def straight(self) -> tuple[IntArray, IntArray, FloatArray]:
        """Give cells of the lower and upper face that look at each other, and over what area."""
        a, b = self.lower.grid, self.upper.grid
        total = np.zeros((*a.counts, *b.counts))
        for low, size in self.rectangles:
            first, second = (
                _common(a.edges[place], b.edges[place], low[axis], low[axis] + size[axis])
                for place, axis in enumerate(a.axes)
            )
            total += np.einsum("ac,bd->abcd", first, second)
        total *= self.lower.bare[:, :, None, None] * self.upper.bare[None, None]
        areas = total.reshape(self.lower.cells.size, self.upper.cells.size)
        one, other = np.nonzero(areas > 0)
        return self.lower.cells.ravel()[one], self.upper.cells.ravel()[other], areas[one, other]


def _common(a: FloatArray, b: FloatArray, low: float, high: float) -> FloatArray:
    """Lengths that cells of two rows have in common inside an interval, shape (a, b)."""
    start = np.maximum(np.maximum(a[:-1, None], b[None, :-1]), low)
    end = np.minimum(np.minimum(a[1:, None], b[None, 1:]), high)
    return np.asarray(np.maximum(end - start, 0.0))


def find_columns(faces: list[Face]) -> list[Column]:
    """Find the columns of air between faces."""
    found: dict[tuple[int, int], Column] = {}
    for axis in range(3):
        same = [face for face in faces if face.axis == axis]
        first, second = (other for other in range(3) if other != axis)
        edges = [_edges(same, along) for along in (first, second)]
        for a_low, a_high in zip(edges[0], edges[0][1:], strict=False):
            for b_low, b_high in zip(edges[1], edges[1][1:], strict=False):
                point = np.zeros(3)
                point[first], point[second] = (a_low + a_high) / 2, (b_low + b_high) / 2
                here = [face for face in same if face.holds(point)]
                low, size = [0.0, 0.0, 0.0], [0.0, 0.0, 0.0]
                low[first], low[second] = a_low, b_low
                size[first], size[second] = a_high - a_low, b_high - b_low
                rectangle = (low[0], low[1], low[2]), (size[0], size[1], size[2])
                for lower, upper in _facing(here):
                    key = lower.surface, upper.surface
                    if key not in found:
                        found[key] = Column(lower, upper, [])
                    found[key].rectangles.append(rectangle)
    return list(found.values())


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
