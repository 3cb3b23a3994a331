"""Fill in the boards: their place in the box, laminate, copper and other power."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from typing import TYPE_CHECKING

from enclosure_check.description.case import BoardCase
from enclosure_check.description.frames import AXIS, Vector, wall_pair
from enclosure_check.description.names import WallName
from enclosure_check.description.remarks import ROUNDING_MM, Path, Remarks
from enclosure_check.description.resolve_box import Rows, reserved_names
from enclosure_check.description.resolve_features import resolve_copper, with_features

if TYPE_CHECKING:
    from enclosure_check.description.board import Board
    from enclosure_check.description.document import Document

BOARD_THICKNESS_MM = 1.6
LAMINATE = "fr4"
BOARD_FINISH = "solder_mask"


def resolve_boards(
    document: Document, inside: Vector, rows: Rows, remarks: Remarks
) -> dict[str, BoardCase]:
    """Fill in the boards; boards with an error in them are left out."""
    boards: dict[str, BoardCase] = {}
    for name, board in document.boards.items():
        before = len(remarks.errors)
        resolved = _resolve_board(name, board, document, inside, rows, remarks)
        if resolved is not None and len(remarks.errors) == before:
            boards[name] = resolved
    return boards


def _resolve_board(
    name: str, board: Board, document: Document, inside: Vector, rows: Rows, remarks: Remarks
) -> BoardCase | None:
    path: Path = ("boards", name)
    if name in reserved_names():
        remarks.error(path, f"the name {name!r} stands for a wall or the air; choose another")
    default = document.defaults.board
    thickness = board.thickness_mm or default.thickness_mm
    if thickness is None:
        thickness = BOARD_THICKNESS_MM
        remarks.assume(f"board thickness {thickness:g} mm", name)
    material_name = board.material or default.material or LAMINATE
    material_path = (*path, "material") if board.material else ("defaults", "board", "material")
    laminate = rows.material(material_name, material_path)
    finish_name = board.finish or default.finish
    finish_path = (*path, "finish") if board.finish else ("defaults", "board", "finish")
    if finish_name is None:
        remarks.assume(f"board finish {BOARD_FINISH}", name)
    finish = rows.finish(finish_name or BOARD_FINISH, finish_path)
    axis = AXIS[board.parallel_to]
    sizes = [board.length_mm, board.length_mm, board.width_mm]
    if axis == 2:
        sizes[1] = board.width_mm
    sizes[axis] = thickness
    size = (sizes[0], sizes[1], sizes[2])
    low = place_between_walls(size, board.from_walls_mm, inside, path, remarks)
    copper = resolve_copper(board, thickness, path, remarks)
    if board.conductivity_in_plane_w_per_mk is None and not copper:
        remarks.assume("no copper layers given: the board is bare laminate", name)
    by_mode = board.other_power_by_mode_w
    check_mode_names(by_mode, document, (*path, "other_power_by_mode_w"), remarks)
    power = mode_power(board.other_power_w, by_mode, document)
    if laminate is None or finish is None or low is None:
        return None
    bare = BoardCase(
        name,
        axis,
        low,
        size,
        laminate,
        copper,
        board.conductivity_in_plane_w_per_mk,
        finish,
        power,
    )
    return with_features(bare, board, inside, rows, remarks)


def place_between_walls(
    size: Vector,
    from_walls: dict[WallName, float],
    inside: Vector,
    path: Path,
    remarks: Remarks,
) -> Vector | None:
    """Give the low corner of a body set off from walls, in the middle where none is named [mm]."""
    low: list[float] = []
    labels = ("left to right", "front to back", "bottom to top")
    for axis in range(3):
        first, second = wall_pair(axis)
        room = inside[axis] - size[axis]
        if first in from_walls and second in from_walls:
            remarks.error(
                (*path, "from_walls_mm", second),
                f"given together with {first}; give one of them",
            )
        if room < -ROUNDING_MM:
            remarks.error(
                path,
                f"reaches outside the box: {size[axis]:g} mm {labels[axis]}, the inside has "
                f"{inside[axis]:g} mm",
            )
            return None
        if first in from_walls:
            at, key = from_walls[first], first
        elif second in from_walls:
            at, key = room - from_walls[second], second
        else:
            at, key = room / 2, None
        if key is not None and not -ROUNDING_MM <= at <= room + ROUNDING_MM:
            remarks.error(
                (*path, "from_walls_mm", key),
                f"reaches outside the box: at most {max(room, 0):g} mm fits",
            )
            return None
        low.append(min(max(at, 0.0), max(room, 0.0)))
    return (low[0], low[1], low[2])


def check_mode_names(
    names: Iterable[str], document: Document, path: Path, remarks: Remarks
) -> None:
    """Refuse powers by mode whose mode does not exist."""
    for name in names:
        if name not in document.modes:
            remarks.unknown((*path, name), "mode", name, list(document.modes))


def mode_power(power: float, by_mode: Mapping[str, float], document: Document) -> float:
    """Give the power in the mode that applies [W]."""
    mode = document.mode
    if mode is None:
        return power
    if mode in by_mode:
        return by_mode[mode]
    share = document.modes[mode].power_pct / 100 if mode in document.modes else 1.0
    return power * share
