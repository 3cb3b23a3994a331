"""What parts and pads take away from the bare area of walls and boards, cell by cell."""

import numpy as np

from enclosure_check.description.case import Case
from enclosure_check.network.grid import PlateGrid
from enclosure_check.network.links import FloatArray
from enclosure_check.network.units import metres_3


def bare_wall(case: Case, wall: str, grid: PlateGrid) -> FloatArray:
    """Give the area of each cell of a wall's inside that no part or pad covers [m2]."""
    bare = np.full(grid.counts, grid.cell_area)
    for part in case.parts.values():
        if part.place == "wall" and part.host == wall:
            bare -= grid.overlap(metres_3(part.low_mm), metres_3(part.size_mm))
        elif part.place == "board" and part.pad is not None and part.pad.wall == wall:
            bare -= grid.overlap(metres_3(part.pad.low_mm), metres_3(part.pad.size_mm))
    return np.asarray(np.maximum(bare, 0.0))


def bare_board(case: Case, board: str, side: str, grid: PlateGrid) -> FloatArray:
    """Give the area of each cell of a board's side that no part covers [m2]."""
    bare = np.full(grid.counts, grid.cell_area)
    for part in case.parts.values():
        if part.host == board and part.side == side:
            bare -= grid.overlap(metres_3(part.low_mm), metres_3(part.size_mm))
    return np.asarray(np.maximum(bare, 0.0))
