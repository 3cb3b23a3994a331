"""Patches: the coarse pieces that the radiation inside a box is reckoned on.

Walls and boards are divided into blocks of cells, bodies in the air count whole. Everything that
lies on a patch (its cells, the parts standing on it) takes the same irradiation.
"""

from functools import lru_cache

import numpy as np

from enclosure_check.description.frames import Vector
from enclosure_check.network.grid import PlateGrid
from enclosure_check.network.links import FloatArray, IntArray
from enclosure_check.physics.view_factors import Boxes, Rectangles, exchange_areas
from enclosure_check.records import dataclass, field

# Blocks along each axis of a wall or board: fewer where it has fewer cells.
BLOCKS = 2

_Rectangle = tuple[int, int, float, tuple[float, float], tuple[float, float]]


@dataclass
class Patches:
    """Rectangles by patch, and what stands between them; all in the box frame [m]."""

    rectangles: list[_Rectangle] = field(default_factory=list)
    patch_of: list[int] = field(default_factory=list)
    obstacles: list[tuple[Vector, Vector]] = field(default_factory=list)
    faces: dict[tuple[str, str], IntArray] = field(default_factory=dict)
    grids: dict[tuple[str, str], PlateGrid] = field(default_factory=dict)

    @property
    def count(self) -> int:
        """How many patches there are."""
        return self.patch_of[-1] + 1 if self.patch_of else 0

    def add_face(
        self, name: str, side: str, grid: PlateGrid, axis: int, sign: int, at: float
    ) -> IntArray:
        """Divide a face of a wall or board; gives the patch of each of its cells.

        Parameters
        ----------
        name, side
            The wall or board, and the side of it that this face is.
        grid
            Its cells.
        axis, sign
            Direction of the normal that points into the air.
        at
            Position of the face along its axis [m].
        """
        bounds = [_blocks(count) for count in grid.counts]
        of_cell = np.zeros(grid.counts, dtype=np.intp)
        for first in range(len(bounds[0]) - 1):
            for second in range(len(bounds[1]) - 1):
                rows = slice(bounds[0][first], bounds[0][first + 1])
                columns = slice(bounds[1][second], bounds[1][second + 1])
                number = self.count
                of_cell[rows, columns] = number
                low = (grid.edges[0][rows.start], grid.edges[1][columns.start])
                high = (grid.edges[0][rows.stop], grid.edges[1][columns.stop])
                self._add(number, axis, sign, at, low, high)
        self.faces[name, side], self.grids[name, side] = of_cell, grid
        return of_cell

    def add_body(self, low: Vector, size: Vector) -> int:
        """Add a body in the air, all its faces one patch, which also stands in the way."""
        high = tuple(a + b for a, b in zip(low, size, strict=True))
        number = self.count
        for axis in range(3):
            first, second = (other for other in range(3) if other != axis)
            for sign, at in ((-1, low[axis]), (1, high[axis])):
                corners = (low[first], low[second]), (high[first], high[second])
                self._add(number, axis, sign, at, *corners)
        self.add_obstacle(low, size)
        return number

    def add_obstacle(self, low: Vector, size: Vector) -> None:
        """Add something that hides surfaces from each other."""
        x, y, z = (a + b for a, b in zip(low, size, strict=True))
        self.obstacles.append((low, (x, y, z)))

    def under(self, name: str, side: str, low: Vector, size: Vector) -> tuple[IntArray, FloatArray]:
        """Give the patches of a face that a body stands on, and its shares on them, summing to one.

        By its footprint: what stands across an edge between patches is seen as part of both.
        """
        of_cell, grid = self.faces[name, side], self.grids[name, side]
        on_cells = grid.shares(low, size).ravel()
        shares: FloatArray = np.bincount(of_cell.ravel(), on_cells).astype(np.float64)
        patches = np.flatnonzero(shares)
        return patches, shares[patches]

    def exchange(self) -> FloatArray:
        """Give the exchange areas between patches [m2], symmetric, rows summing to their areas."""
        between = _exchange(tuple(self.rectangles), tuple(self.obstacles))
        total = np.zeros((self.count, self.count))
        patch = np.array(self.patch_of)
        np.add.at(total, (patch[:, None], patch[None, :]), between)
        return total

    def _add(
        self,
        number: int,
        axis: int,
        sign: int,
        at: float,
        low: tuple[float, float],
        high: tuple[float, float],
    ) -> None:
        corners = (float(low[0]), float(low[1])), (float(high[0]), float(high[1]))
        self.rectangles.append((axis, sign, float(at), *corners))
        self.patch_of.append(number)


def _blocks(count: int) -> list[int]:
    """Bounds of as many blocks of cells as divide a row evenly, so that mirrored boxes match."""
    blocks = max(blocks for blocks in range(1, BLOCKS + 1) if count % blocks == 0)
    return [count * index // blocks for index in range(blocks + 1)]


@lru_cache(maxsize=32)
def _exchange(
    rectangles: tuple[_Rectangle, ...], obstacles: tuple[tuple[Vector, Vector], ...]
) -> FloatArray:
    """Exchange areas of rectangles; kept, as the same come again under every condition."""
    axis, sign, at, low, high = (np.array(column) for column in zip(*rectangles, strict=True))
    return exchange_areas(
        Rectangles(axis, sign, at.astype(float), low, high),
        Boxes(
            np.array([box[0] for box in obstacles], dtype=float).reshape(-1, 3),
            np.array([box[1] for box in obstacles], dtype=float).reshape(-1, 3),
        ),
    )
