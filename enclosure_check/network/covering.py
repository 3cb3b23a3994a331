"""What parts, pads, fillers and cans take away from the bare area of walls and boards."""

from collections.abc import Iterable, Iterator
from typing import Protocol

import numpy as np

from enclosure_check.description.case import Case, FillerCase, PartCase, ShieldCanCase
from enclosure_check.description.frames import Vector
from enclosure_check.network.grid import PlateGrid
from enclosure_check.network.links import FloatArray
from enclosure_check.network.units import metres_3


class Body(Protocol):
    """Anything with an extent in the box frame [mm]."""

    @property
    def low_mm(self) -> Vector:
        """Its low corner."""

    @property
    def size_mm(self) -> Vector:
        """Its size."""


def bare_wall(case: Case, wall: str, grid: PlateGrid) -> FloatArray:
    """Give the area of each cell of a wall's inside that nothing covers [m2]."""
    bare = np.full(grid.counts, grid.cell_area)
    for part in case.parts.values():
        if part.place == "wall" and part.host == wall:
            bare -= outline(grid, part)
        elif part.place == "board" and part.pad is not None and part.pad.wall == wall:
            bare -= outline(grid, part.pad)
    for board in case.boards.values():
        for filler in board.fillers:
            if filler.side == wall:
                bare -= outline(grid, filler)
    return np.asarray(np.maximum(bare, 0.0))


def bare_board(case: Case, board: str, side: str, grid: PlateGrid) -> FloatArray:
    """Give the area of each cell of a board's side that nothing covers [m2]."""
    bare = np.full(grid.counts, grid.cell_area)
    parts = list(parts_on(case, board, side))
    for part in parts:
        bare -= outline(grid, part)
    covers: list[FillerCase | ShieldCanCase] = list(case.boards[board].fillers)
    covers += case.boards[board].shield_cans
    for cover in covers:
        if cover.side == side:
            bare -= between_parts(grid, cover, parts)
    return np.asarray(np.maximum(bare, 0.0))


def parts_on(case: Case, board: str, side: str) -> Iterator[PartCase]:
    """Give the parts on one side of a board."""
    return (part for part in case.parts.values() if part.host == board and part.side == side)


def outline(grid: PlateGrid, body: Body) -> FloatArray:
    """Area of a body's outline on each cell of a plate [m2], shape ``counts``."""
    return grid.overlap(metres_3(body.low_mm), metres_3(body.size_mm))


def between_parts(grid: PlateGrid, cover: Body, parts: Iterable[PartCase]) -> FloatArray:
    """Area under a cover that no part stands on, by cell of its plate [m2], shape ``counts``."""
    area = outline(grid, cover)
    for part in parts:
        area = area - grid.overlap(*shared(part, cover))
    return np.asarray(np.maximum(area, 0.0))


def shared(first: Body, second: Body) -> tuple[Vector, Vector]:
    """Low corner and size of what two bodies share, no size where they do not meet [m]."""
    pairs = [
        (max(a, b), min(a + a_size, b + b_size))
        for a, a_size, b, b_size in zip(
            metres_3(first.low_mm),
            metres_3(first.size_mm),
            metres_3(second.low_mm),
            metres_3(second.size_mm),
            strict=True,
        )
    ]
    x, y, z = (max(high - low, 0.0) for low, high in pairs)
    return (pairs[0][0], pairs[1][0], pairs[2][0]), (x, y, z)
