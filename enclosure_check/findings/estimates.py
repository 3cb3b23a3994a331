"""What numbers that are shape do to a temperature, about or at most, for less than the derivative.

Who wants only the numbers that do most need not know exactly what the others do. How far these
can be trusted was found by numerical experiments made for this project: over the samples and 40
random documents the numbers that do most were those that are found with nothing left out.
"""

from typing import TYPE_CHECKING

import numpy as np

from enclosure_check.description.case import BoardCase, Case, PartCase
from enclosure_check.description.frames import OPPOSITE
from enclosure_check.findings.rebuilt import (
    PLACE_STEP_MM,
    STEP,
    Key,
    Rebuilding,
    is_place,
    moves_cells,
    step_of,
)
from enclosure_check.network.boards import board_conductivity
from enclosure_check.network.grid import PlateGrid
from enclosure_check.network.links import FloatArray
from enclosure_check.network.network import PlateNodes
from enclosure_check.network.units import metres, metres_3
from enclosure_check.records import replace

if TYPE_CHECKING:
    from enclosure_check.description.document import Document

# An estimate is hardly ever less than the derivative over this; with 2 the first ten numbers of two
# in 45 documents missed one.
LARGEST_MISS = 3.0
# Over the samples and random documents places and footprints of parts do half at most of what is
# reckoned as the most, heights, which may close a gap, three times as much.
MOST_OF_PART, MOST_OF_HEIGHT = 2.0, 10.0
_SIZES = ("length_mm", "width_mm", "height_mm")
# Roles of what a part or plate gives off inside.
_GIVEN_OFF = ("convection_inside", "radiation_inside")


class Estimates:
    """Estimates for one temperature, by the networks that numbers make.

    Parameters
    ----------
    rebuilding
        The case, and weights of that temperature alone.
    document
        The document of the case.
    part
        The part whose temperature it is.
    """

    def __init__(self, rebuilding: Rebuilding, document: "Document", part: str) -> None:
        self._rebuilding, self._document, self._part = rebuilding, document, part
        self._case, self._places = rebuilding.solved.case, rebuilding.solved.network.places
        self._weight: FloatArray = rebuilding.adjoint.weight[:, 0]
        self._by_sheet: dict[Key, float | None] = {}

    def about(self, path: Key, value: float) -> float | None:
        """Give about the derivative by a number.

        Places and sizes that move cells are not solved for, and all else is moved up only. Copper
        is told by what the conductivity of its board or zone does.

        Returns
        -------
        float or None
            By the number's own unit, None where no like network can be built; see `Rebuilding`.
        """
        rebuilding = self._rebuilding
        if not is_place(path) and not moves_cells(path):
            step = step_of(path, value)
            case = rebuilding.case_with(path, value + step)
            if case is not None:
                high = self._by_copper(path, case)
                if high is None:
                    high = _first(rebuilding.moved(case, solves=False))
                if high is not None:
                    return high / step
        return _first(rebuilding.difference(path, value, solves=False))

    # Copper ------------------------------------------------------------------------------

    def _by_copper(self, path: Key, case: Case) -> float | None:
        """Change of the temperature by copper alone [K]; None where anything else is different."""
        if path[0] != "boards" or "copper" not in path:
            return None
        name, zone = path[1], path[3] if path[2] == "zones" else None
        own, other = self._case.boards[name], case.boards[name]
        alike = replace(case, boards={**case.boards, name: _with_copper(other, own, zone)})
        if not self._rebuilding.is_same(alike):
            return None
        before, after = _conductivity(own, zone), _conductivity(other, zone)
        by_whole = self._by_conductivity(name, zone)
        return None if by_whole is None else by_whole * (after / before - 1.0)

    def _by_conductivity(self, name: str, zone: str | None) -> float | None:
        """Derivative by the relative conductivity of a board or zone [K]."""
        key = (name, zone or "")
        if key not in self._by_sheet:
            own = self._case.boards[name]
            other = _conducting(own, zone, _conductivity(own, zone) * (1.0 + STEP))
            case = replace(self._case, boards={**self._case.boards, name: other})
            high = _first(self._rebuilding.moved(case, solves=False))
            self._by_sheet[key] = None if high is None else high / STEP
        return self._by_sheet[key]

    # Places and sizes of parts -----------------------------------------------------------

    def most(self, path: Key) -> float | None:
        """Give about the most that a place or size of parts does; None for any other number.

        Not of the part whose temperature it is, those beside it, and those with a pad or something
        over them. See `_by_moving` and `_by_growing`.

        Returns
        -------
        float or None
            By the number's own unit, some times more than what it does as a rule.
        """
        most = 0.0
        for name in self._parts_of(path):
            part = self._case.parts.get(name)
            own = None if part is None or name == self._part else self._plate_of(part)
            if part is None or own is None or self._is_beside(part, own[0]):
                return None
            if path[2] == "at_mm":
                most += self._by_moving(part, *own, step_of(path, 0.0))
            most += self._by_growing(part, *own)
        if most == 0.0:
            return None
        return (MOST_OF_HEIGHT if path[2] == "height_mm" else MOST_OF_PART) * most

    def _parts_of(self, path: Key) -> tuple[str, ...]:
        """Give the parts whose place or size a number is."""
        if path[0] == "parts" and (path[2] == "at_mm" or (len(path) == 3 and path[2] in _SIZES)):
            return (path[1],)
        if path[0] == "part_types" and len(path) == 3 and path[2] in _SIZES:
            parts = self._document.parts.items()
            return tuple(name for name, each in parts if each.type == path[1])
        return ()

    def _by_moving(
        self, part: PartCase, grid: PlateGrid, plate: PlateNodes, per_area: float, step_mm: float
    ) -> float:
        """Give what it does at most where the heat of a part goes in [K/mm].

        ``Q |W(x + dx) - W(x)| / dx``: its power and what the area under it would give off, W the
        mean weight of the cells under it; the most over both directions and ways.
        """
        low, size = metres_3(part.low_mm), metres_3(part.size_mm)
        weight = self._weight[plate.cells]
        here = float(np.sum(grid.shares(low, size) * weight))
        most = 0.0
        for axis in grid.axes:
            start, end = grid.low[axis], grid.low[axis] + grid.size[axis] - size[axis]
            for way in (-1.0, 1.0):
                moved = list(low)
                moved[axis] = min(max(low[axis] + way * metres(step_mm), start), end)
                shares = grid.shares((moved[0], moved[1], moved[2]), size)
                most = max(most, abs(float(np.sum(shares * weight)) - here))
        return (abs(part.power_w) + per_area * _area(part, grid)) * most / step_mm

    def _by_growing(
        self, part: PartCase, grid: PlateGrid, plate: PlateNodes, per_area: float
    ) -> float:
        """Give what the share does of a part's heat that its size can lead elsewhere [K/mm].

        ``Q w / s``: what it and the area under it give off to the air and by radiation, w the
        weight of heat in the part, s its least size.
        """
        solved, nodes = self._rebuilding.solved, self._places.parts[part.name]
        weight = max(abs(float(self._weight[node])) for node in (nodes.junction, nodes.case))
        heat = sum(abs(solved.flow(f"part:{part.name}", role)) for role in _GIVEN_OFF)
        return (heat + per_area * _area(part, grid)) * weight / min(part.size_mm)

    def _plate_of(self, part: PartCase) -> tuple[PlateGrid, PlateNodes, float] | None:
        """Give what a part stands on alone: cells, nodes, heat given off inside [W/m2]."""
        places, host = self._places, part.host
        if part.pad is not None or part.place == "air":
            return None
        owner, plates = f"board:{host}", places.boards
        if part.place == "wall":
            host = OPPOSITE[part.side]
            owner, plates = f"wall:{host}", places.wall_inside
        else:
            board = self._case.boards[host]
            if board.fillers or board.shield_cans:
                return None
        grid, solved = places.grids[host], self._rebuilding.solved
        heat = sum(abs(solved.flow(owner, role)) for role in _GIVEN_OFF)
        return grid, plates[host], heat / (grid.cell_area * plates[host].cells.size)

    def _is_beside(self, part: PartCase, grid: PlateGrid) -> bool:
        """Whether a part is near the one whose temperature it is, on the same plate.

        Within a cell, or where it may come to share a patch of radiation, one of two halves along
        either axis.
        """
        own = self._case.parts[self._part]
        if (own.place, own.host) != (part.place, part.host):
            return False
        near, shares = [], []
        for axis, step in zip(grid.axes, grid.steps, strict=True):
            ends = [
                (metres(each.low_mm[axis]), metres(each.low_mm[axis] + each.size_mm[axis]))
                for each in (own, part)
            ]
            near.append(max(ends[0][0] - ends[1][1], ends[1][0] - ends[0][1]) < step)
            middle = grid.low[axis] + 0.5 * grid.size[axis]
            (low, high), (start, end) = ends
            reach = metres(PLACE_STEP_MM)
            before = low < middle and start - reach < middle
            shares.append(before or (high > middle and end + reach > middle))
        return all(near) or (own.side == part.side and all(shares))


def _area(part: PartCase, grid: PlateGrid) -> float:
    """Area that a part covers of a plate [m2]."""
    size = metres_3(part.size_mm)
    return size[grid.axes[0]] * size[grid.axes[1]]


def _first(values: FloatArray | None) -> float | None:
    return None if values is None else float(values[0])


def _conductivity(board: BoardCase, zone: str | None) -> float:
    zones = {each.name: each for each in board.zones}
    return board_conductivity(board, None if zone is None else zones[zone])


def _with_copper(board: BoardCase, other: BoardCase, zone: str | None) -> BoardCase:
    """Give a board with the copper of another one like it, or that of a zone of it."""
    if zone is None:
        return replace(board, copper=other.copper)
    copper = {each.name: each.copper for each in other.zones}
    zones = tuple(
        replace(each, copper=copper.get(zone, each.copper)) if each.name == zone else each
        for each in board.zones
    )
    return replace(board, zones=zones)


def _conducting(board: BoardCase, zone: str | None, conductivity: float) -> BoardCase:
    """Give a board of another conductivity along it, or with such a zone [W/mK]."""
    if zone is None:
        return replace(board, conductivity_in_plane_w_per_mk=conductivity)
    zones = tuple(
        replace(each, conductivity_in_plane_w_per_mk=conductivity) if each.name == zone else each
        for each in board.zones
    )
    return replace(board, zones=zones)
