"""Builds the boards: one layer of cells each, with the films of both sides."""

from functools import partial

import numpy as np

from enclosure_check.description.case import BoardCase, Case, ZoneCase
from enclosure_check.description.frames import SIGN, wall_pair
from enclosure_check.network.covering import bare_board
from enclosure_check.network.features import painted
from enclosure_check.network.grid import PlateGrid, cell_counts, shared_grid
from enclosure_check.network.links import FloatArray, LinkLabel
from enclosure_check.network.site import InsideSurface, Site
from enclosure_check.network.units import metres, metres_3
from enclosure_check.physics.conduction import effective_conductivity

# Copper foil of boards. (textbook tables: 386 for pure copper)
COPPER_W_PER_MK = 386.0


def build_boards(case: Case, site: Site) -> None:
    """Add the cells of every board, joined along it, and its films and power."""
    for board in case.boards.values():
        site.piece(("board", board.name), partial(_build_board, case, board, site))


def board_conductivity(board: BoardCase, zone: ZoneCase | None = None) -> float:
    """Give the effective in-plane conductivity of a board, or of a zone of it [W/mK]."""
    given = board if zone is None else zone
    if given.conductivity_in_plane_w_per_mk is not None:
        return given.conductivity_in_plane_w_per_mk
    laminate = board.laminate.in_plane_conductivity_w_per_mk
    copper = [layer.thickness_um * 1e-6 for layer in given.copper]
    coverage = [layer.coverage_pct / 100 for layer in given.copper]
    thickness = [*copper, metres(board.size_mm[board.axis]) - sum(copper)]
    conductivity = [*([COPPER_W_PER_MK] * len(copper)), laminate]
    layered = effective_conductivity(thickness, conductivity, [*coverage, 1.0], laminate)
    return float(layered.in_plane)


def _sheet(board: BoardCase, grid: PlateGrid) -> FloatArray:
    """Give the sheet conductance of each cell of a board, its zones laid over it [W/K]."""
    thickness = metres(board.size_mm[board.axis])
    zones = [
        (metres_3(zone.low_mm), metres_3(zone.size_mm), board_conductivity(board, zone) * thickness)
        for zone in board.zones
    ]
    return painted(grid, board_conductivity(board) * thickness, zones)


def _build_board(case: Case, board: BoardCase, site: Site) -> None:
    builder, owner = site.builder, f"board:{board.name}"
    size = metres_3(board.size_mm)
    first, second = (axis for axis in range(3) if axis != board.axis)
    options = site.options
    counts = cell_counts(size[first], size[second], options.board_cells)
    sheet = np.full((2, *counts), board_conductivity(board) * size[board.axis])
    grid = shared_grid((first, second), metres_3(board.low_mm), size, counts, sheet)
    if board.zones:
        zoned = _sheet(board, grid)
        grid = shared_grid(grid.axes, grid.low, size, counts, np.stack((zoned, zoned)))
    plate = site.plate(f"board {board.name}", grid)
    site.grids[board.name], site.boards[board.name] = grid, plate
    site.conduct_along(plate.cells, grid, 1.0, LinkLabel(owner, "along"))
    site.patches.add_obstacle(metres_3(board.low_mm), size)
    half_rim = _half_rim(grid, size[board.axis])
    for side in wall_pair(board.axis):
        face = site.plane_face(size, board.axis, SIGN[side])
        site.board_faces[board.name, side] = face
        bare = bare_board(case, board.name, side, grid) + half_rim
        convection = LinkLabel(owner, "convection_inside")
        at = grid.low[board.axis] + (size[board.axis] if SIGN[side] > 0 else 0.0)
        patch = site.patches.add_face(board.name, side, grid, board.axis, SIGN[side], at)
        site.air_site.add_plate(
            plate,
            grid,
            board.axis,
            SIGN[side],
            at,
            bare - half_rim,
            face,
            f"board {board.name}, {side} side",
            builder.label(convection),
            is_board=True,
            size=size,
        )
        site.surfaces.append(
            InsideSurface(
                plate.cells,
                patch,
                bare,
                board.finish.emissivity,
                LinkLabel(owner, "radiation_inside"),
            )
        )
    rim = builder.label(LinkLabel(owner, "convection_inside"))
    name = f"board {board.name}, rim"
    site.air_site.add_rim(plate, grid, board.axis, size, 2 * half_rim, name, rim)
    power = board.other_power_w / plate.cells.size
    builder.heat(plate.cells, power, LinkLabel(owner, "power"))


def _half_rim(grid: PlateGrid, thickness: float) -> FloatArray:
    """Give the rim's area by cell, which convects and radiates too; half goes to each side [m2]."""
    step_first, step_second = grid.steps
    rim = np.zeros(grid.counts)
    for index in (0, -1):
        rim[index, :] += step_second
        rim[:, index] += step_first
    return np.asarray(rim * thickness / 2)
