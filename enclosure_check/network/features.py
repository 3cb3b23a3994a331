"""Builds what boards carry besides parts: zones, stand-offs, edge clamps, fillers, shield cans.

Zones are part of a board's sheet conductance; stand-offs, edge clamps and fillers join a board to
walls; a can is a surface of its own over parts.
"""

from collections.abc import Sequence
from functools import partial
from itertools import pairwise

import numpy as np
from numpy.typing import ArrayLike

from enclosure_check.description.case import (
    BoardCase,
    Case,
    EdgeClampCase,
    FillerCase,
    PartCase,
    ShieldCanCase,
    StandOffCase,
)
from enclosure_check.description.frames import AXIS, SIGN, Vector
from enclosure_check.network.covering import between_parts, parts_on, shared
from enclosure_check.network.grid import PlateGrid
from enclosure_check.network.lines import join_pieces, line_segments, outline_segments
from enclosure_check.network.links import FloatArray, LinkLabel
from enclosure_check.network.site import InsideSurface, Site, footprint
from enclosure_check.network.units import metres, metres_3
from enclosure_check.network.walls import edge_cells
from enclosure_check.records import dataclass

# Least air gap between a part and the can over it; a part as high as its can touches it nowhere
# well. (common practice, no source) [m]
LEAST_CAN_GAP = 1e-4


def build_features(case: Case, site: Site) -> "Covers":
    """Add everything that boards carry; gives what lies over parts."""
    for board in case.boards.values():
        if board.stand_offs or board.edge_clamps or board.fillers or board.shield_cans:
            site.piece(("features", board.name), partial(_build_features_of, case, board, site))
    return Covers(case, site)


def _build_features_of(case: Case, board: BoardCase, site: Site) -> None:
    """Add what one board carries."""
    for stand_off in board.stand_offs:
        _build_stand_off(board, stand_off, site)
    for clamp in board.edge_clamps:
        _build_edge_clamp(board, clamp, site)
    for filler in board.fillers:
        parts = list(parts_on(case, board.name, filler.side))
        _build_filler(board, filler, parts, site)
    for can in board.shield_cans:
        parts = list(parts_on(case, board.name, can.side))
        site.cans[board.name, can.name] = _build_can(board, can, parts, site)


@dataclass(frozen=True, eq=False)
class Covers:
    """What lies over parts on boards: cans and fillers."""

    case: Case
    site: Site

    def can_over(self, part: PartCase) -> tuple[ShieldCanCase, int] | None:
        """Give the can over a part, and its node."""
        if part.place == "board":
            for can in self.case.boards[part.host].shield_cans:
                # The description allows nothing between wholly under it and beside it.
                if can.side == part.side and _area(part, can) > footprint(part) / 2:
                    return can, self.site.cans[part.host, can.name]
        return None

    def join(self, part: PartCase, node: int) -> float:
        """Join a part on a board to what lies over it; gives the share of it left in the air.

        A can takes it all. A filler takes the share of the footprint that lies in it, of the sides
        as of the top; heat leaves through the top alone.
        """
        found = self.can_over(part)
        if found is not None:
            self._join_can(part, node, *found)
            return 0.0
        covered = 0.0
        for filler in self.case.boards[part.host].fillers:
            share = _area(part, filler) / footprint(part)
            if filler.side == part.side and share > _ROUNDING:
                self._join_filler(part, node, filler)
                covered += share
        return 0.0 if covered > 1.0 - _ROUNDING else 1.0 - covered

    def _join_can(self, part: PartCase, node: int, can: ShieldCanCase, can_node: int) -> None:
        """Join a part to the can over it: still air and radiation between parallel faces."""
        owner, height = f"part:{part.name}", part.size_mm[AXIS[part.side]]
        area = footprint(part)
        gap = max(metres(can.height_mm - height), LEAST_CAN_GAP)
        still = self.site.air_conductivity * area / gap
        self.site.builder.conduct(node, can_node, still, LinkLabel(owner, "still_air"))
        label = LinkLabel(owner, "radiation_inside")
        _radiate_to_can(self.site, can, can_node, node, area, part.finish.emissivity, label)

    def _join_filler(self, part: PartCase, node: int, filler: FillerCase) -> None:
        """Join a part to the wall through the filler left over its top."""
        resistance = filler_over(part, filler)
        wall = self.site.wall_inside[filler.side]
        label = LinkLabel(f"part:{part.name}", "filler")
        self.site.join(node, resistance, filler.side, wall, *shared(part, filler), label)


def filler_over(part: PartCase, filler: FillerCase) -> float:
    """Give the resistance of what is left of a filler over the top of a part [K/W]."""
    left = max(metres(filler.distance_mm - part.size_mm[AXIS[part.side]]), 0.0)
    return _filler_resistance(filler, left) / _area(part, filler)


# Share of a part that is told from none by nobody. [-]
_ROUNDING = 1e-9


def _area(part: PartCase, cover: FillerCase | ShieldCanCase) -> float:
    """Area of a part's outline under a cover [m2]."""
    _, size = shared(part, cover)
    first, second = (size[axis] for axis in range(3) if axis != AXIS[part.side])
    return first * second


# Zones ------------------------------------------------------------------------------------


def painted(
    grid: PlateGrid, base: float, rectangles: Sequence[tuple[Vector, Vector, float]]
) -> FloatArray:
    """Mean over each cell of a value that rectangles replace, a later one over an earlier.

    Parameters
    ----------
    grid
        The cells.
    base
        Value where no rectangle lies.
    rectangles
        Low corner and size in the box frame [m], and the value there.

    Returns
    -------
    ndarray
        Area-weighted means, shape ``counts``.
    """
    breaks, middles, widths, cells = [], [], [], []
    for axis, edges in zip(grid.axes, grid.edges, strict=True):
        ends = [end for low, size, _ in rectangles for end in (low[axis], low[axis] + size[axis])]
        # Not by `numpy.unique`, which loads masked arrays.
        clipped = np.clip(ends, edges[0], edges[-1])
        along = np.array(sorted({*edges.tolist(), *clipped.tolist()}))
        breaks.append(along)
        middles.append(0.5 * (along[1:] + along[:-1]))
        widths.append(np.diff(along))
        cells.append(np.clip(np.searchsorted(edges, middles[-1]) - 1, 0, len(edges) - 2))
    fine = np.full((middles[0].size, middles[1].size), base)
    for low, size, value in rectangles:
        inside = [
            np.flatnonzero((middle > low[axis]) & (middle < low[axis] + size[axis]))
            for axis, middle in zip(grid.axes, middles, strict=True)
        ]
        fine[np.ix_(*inside)] = value
    total = np.zeros(grid.counts)
    np.add.at(total, np.ix_(*cells), fine * np.outer(*widths))
    return np.asarray(total / grid.cell_area)


# Joints to walls --------------------------------------------------------------------------


def _build_stand_off(board: BoardCase, stand_off: StandOffCase, site: Site) -> None:
    """Join a board to a wall through a column, spreading at both its ends.

    Each end may give back half of the resistance where the cells tell a source too warm.
    """
    owner = f"stand_off:{board.name}/{stand_off.name}"
    if stand_off.resistance_k_per_w is not None:
        column = stand_off.resistance_k_per_w
    else:
        assert stand_off.conductivity_w_per_mk is not None
        section = stand_off.section_mm2 * 1e-6
        column = metres(stand_off.length_mm) / (stand_off.conductivity_w_per_mk * section)
    resistance = column + stand_off.contact_k_per_w
    foot = metres_3(stand_off.low_mm), metres_3(stand_off.size_mm)
    wall = stand_off.wall
    middle = site.builder.node(f"middle of {owner.split(':', 1)[1]}")
    for host, plate, role in (
        (board.name, site.boards[board.name], "to_board"),
        (wall, site.wall_inside[wall], "to_wall"),
    ):
        site.join(middle, resistance / 2, host, plate, *foot, LinkLabel(owner, role))


def _build_edge_clamp(board: BoardCase, clamp: EdgeClampCase, site: Site) -> None:
    """Join the cells along an edge of a board to the wall along the line they face.

    In series, per metre of edge: half a cell of the board, the clamp, and what the wall holds
    between its cells and a line (see `line_segments`).
    """
    wall, axis = clamp.wall, AXIS[clamp.wall]
    grid, wall_grid = site.grids[board.name], site.grids[wall]
    low, size = metres_3(clamp.low_mm), metres_3(clamp.size_mm)
    edge = next(other for other in grid.axes if other != axis)
    across = grid.axes.index(axis)
    sheet = np.moveaxis(grid.sheet[across], across, 0)[0 if SIGN[wall] < 0 else -1]
    series = 1.0 / clamp.conductance_w_per_mk + grid.steps[across] / 2 / sheet
    rim = edge_cells(site.boards[board.name].cells, grid, axis, SIGN[wall])
    # A piece for every cell of the edge and every cell of the wall that it faces.
    middle = low[board.axis] + size[board.axis] / 2
    facing = wall_grid.axes.index(board.axis)
    pieces, places = [], []
    for place, (start, end) in enumerate(pairwise(grid.edges[grid.axes.index(edge)].tolist())):
        inside = max(start, low[edge]), min(end, low[edge] + size[edge])
        for piece in line_segments(wall_grid, facing, middle, *inside):
            pieces.append(piece)
            places.append(place)
    join_pieces(
        site.builder,
        site.wall_inside[wall].cells,
        pieces,
        rim[places],
        1.0 / series[places],
        (LinkLabel(f"board:{board.name}", "edge_clamp"), LinkLabel(f"wall:{wall}", "along")),
        # The inside of a wall has half of its sheet conductance.
        share=0.5,
    )


def _build_filler(
    board: BoardCase, filler: FillerCase, parts: Sequence[PartCase], site: Site
) -> None:
    """Join board cells to the wall cells they face through what fills the space between."""
    grid, wall_grid = site.grids[board.name], site.grids[filler.side]
    area = _shared_area(grid, wall_grid, metres_3(filler.low_mm), metres_3(filler.size_mm))
    for part in parts:
        area -= _shared_area(grid, wall_grid, *shared(part, filler))
    area[area < _ROUNDING * grid.cell_area] = 0.0
    at = np.nonzero(area)
    conductance = area[at] / _filler_resistance(filler, metres(filler.distance_mm))
    site.builder.conduct(
        site.boards[board.name].cells[at[:2]],
        site.wall_inside[filler.side].cells[at[2:]],
        conductance,
        LinkLabel(f"board:{board.name}", "filler"),
    )


def _filler_resistance(filler: FillerCase, thickness: float) -> float:
    """Give the resistance of so thick a filler and its contact faces times area [m2 K/W]."""
    return thickness / filler.conductivity_w_per_mk + filler.contact_mm2k_per_w * 1e-6


def _shared_lengths(
    one: PlateGrid, other: PlateGrid, axis: int, low: Vector, size: Vector
) -> FloatArray:
    """Length along an axis that cells of two plates share within bounds [m], shape (n, m)."""
    first, second = (grid.edges[grid.axes.index(axis)] for grid in (one, other))
    end = low[axis] + size[axis]
    lower = np.maximum(np.maximum(first[:-1, None], second[None, :-1]), low[axis])
    upper = np.minimum(np.minimum(first[1:, None], second[None, 1:]), end)
    return np.asarray(np.maximum(upper - lower, 0.0))


def _shared_area(one: PlateGrid, other: PlateGrid, low: Vector, size: Vector) -> FloatArray:
    """Area that cells of two parallel plates share within bounds [m2], shape (n, m, k, l)."""
    first, second = (_shared_lengths(one, other, axis, low, size) for axis in one.axes)
    return np.asarray(first[:, None, :, None] * second[None, :, None, :])


# Cans -------------------------------------------------------------------------------------


def _build_can(board: BoardCase, can: ShieldCanCase, parts: Sequence[PartCase], site: Site) -> int:
    """Add a can, of one temperature; gives its node.

    Inside, to the board between the parts: still air as high as the can, and radiation between
    parallel faces. Outside: the film of the board's side at the can's own rise, and radiation.
    """
    builder, owner = site.builder, f"can:{board.name}/{can.name}"
    node = builder.node(f"{can.name} can on {board.name}")
    low, size = metres_3(can.low_mm), metres_3(can.size_mm)
    grid, cells = site.grids[board.name], site.boards[board.name].cells
    between = between_parts(grid, can, parts)
    between[between < _ROUNDING * grid.cell_area] = 0.0
    hit = between > 0
    if hit.any():
        still = site.air_conductivity * between[hit] / metres(can.height_mm)
        builder.conduct(cells[hit], node, still, LinkLabel(owner, "still_air"))
        label = LinkLabel(owner, "radiation_under")
        _radiate_to_can(site, can, node, cells[hit], between[hit], board.finish.emissivity, label)
    pieces = list(outline_segments(grid, low, size))
    labels = LinkLabel(owner, "frame"), LinkLabel(f"board:{board.name}", "along")
    join_pieces(builder, cells, pieces, node, can.frame_conductance_w_per_mk, labels)
    site.spots.add_line(
        node, can.frame_conductance_w_per_mk, grid, site.boards[board.name], pieces, labels[0]
    )
    first, second = (size[axis] for axis in grid.axes)
    outside = first * second + 2.0 * (first + second) * metres(can.height_mm)
    face = site.board_faces[board.name, can.side]
    convection = LinkLabel(owner, "convection_inside")
    surface = site.convect_body(node, outside, low, size, face, convection)
    top = first * second
    site.add_top(surface, node, top, AXIS[can.side], SIGN[can.side], low, size)
    patch, shares = site.patches.under(board.name, can.side, low, size)
    site.surfaces.append(
        InsideSurface(
            np.full(len(patch), node),
            patch,
            outside * shares,
            can.finish.emissivity,
            LinkLabel(owner, "radiation_inside"),
        )
    )
    return node


def _radiate_to_can(
    site: Site,
    can: ShieldCanCase,
    can_node: int,
    nodes: ArrayLike,
    area: ArrayLike,
    emissivity: float,
    label: LinkLabel,
) -> None:
    """Join nodes to the inside of a can as parallel faces: ``1 / (1/e + 1/e_can - 1)``."""
    if can.finish.emissivity > 0 and emissivity > 0:
        far = can.finish.emissivity * np.asarray(area)
        site.builder.radiate(nodes, can_node, area, far, emissivity, label)
