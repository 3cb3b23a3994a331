"""Fill in what boards carry besides parts: zones, stand-offs, clamps, fillers and shield cans."""

from __future__ import annotations

import math
from collections.abc import Iterable, Iterator, Sequence
from dataclasses import replace
from typing import TYPE_CHECKING

from enclosure_check.description.case import (
    BoardCase,
    CopperCase,
    EdgeClampCase,
    FillerCase,
    PartCase,
    ShieldCanCase,
    StandOffCase,
    ZoneCase,
)
from enclosure_check.description.frames import AXIS, SIGN, Vector, wall_pair
from enclosure_check.description.names import WallName
from enclosure_check.description.remarks import ROUNDING_MM, Path, Remarks
from enclosure_check.description.resolve_box import Rows

if TYPE_CHECKING:
    from enclosure_check.description.board import Board, StandOff, Zone

# Foot of a stand-off that is stated by its resistance: M3 hardware. [mm]
# (common practice, no source)
FOOT_MM = 5.0

_Extent = tuple[Vector, Vector]


def resolve_copper(
    row: Board | Zone, thickness: float, path: Path, remarks: Remarks
) -> tuple[CopperCase, ...]:
    """Give the copper layers of a board or zone; they and a stated conductivity exclude each other.

    Parameters
    ----------
    row
        The board or zone as written.
    thickness
        Thickness of the board [mm].
    path, remarks
        Where it stands, and where errors go.
    """
    copper = tuple(
        CopperCase(layer, given.thickness_um, given.coverage_pct)
        for layer, given in row.copper.items()
    )
    copper_mm = sum(layer.thickness_um for layer in copper) / 1000
    if copper_mm >= thickness:
        remarks.error((*path, "copper"), f"{copper_mm:g} mm of copper in a {thickness:g} mm board")
    if row.conductivity_in_plane_w_per_mk is not None and copper:
        remarks.error(
            (*path, "conductivity_in_plane_w_per_mk"),
            "given together with `copper`; give one of them",
        )
    return copper


def with_features(
    bare: BoardCase, board: Board, inside: Vector, rows: Rows, remarks: Remarks
) -> BoardCase:
    """Give a placed board with everything that belongs to it."""
    resolver = _Features(bare, inside, rows, remarks)
    return replace(
        bare,
        zones=tuple(resolver.zones(board)),
        stand_offs=tuple(resolver.stand_offs(board)),
        edge_clamps=tuple(resolver.edge_clamps(board)),
        fillers=tuple(resolver.fillers(board)),
        shield_cans=tuple(resolver.shield_cans(board)),
    )


class _Features:
    """Resolves what one board carries; things with an error in them are left out."""

    def __init__(self, board: BoardCase, inside: Vector, rows: Rows, remarks: Remarks) -> None:
        self.board = board
        self.inside = inside
        self.rows = rows
        self.remarks = remarks
        self.path: Path = ("boards", board.name)
        self.sides = wall_pair(board.axis)
        first, second = (axis for axis in range(3) if axis != board.axis)
        self.along = (first, second)

    # Each kind ---------------------------------------------------------------------------

    def zones(self, board: Board) -> Iterator[ZoneCase]:
        """Give the zones in the order in which they cover each other."""
        thickness = self.board.size_mm[self.board.axis]
        for name, zone in board.zones.items():
            path = (*self.path, "zones", name)
            copper = resolve_copper(zone, thickness, path, self.remarks)
            extent = self._rectangle(path, zone.at_mm, zone.length_mm, zone.width_mm)
            if extent is not None:
                yield ZoneCase(name, copper, zone.conductivity_in_plane_w_per_mk, *extent)

    def stand_offs(self, board: Board) -> Iterator[StandOffCase]:
        """Give the stand-offs."""
        for name, row in board.stand_offs.items():
            path = (*self.path, "stand_offs", name)
            facing = self._is_side(row.to, (*path, "to"))
            if not self._column_is_stated(row, path) or not facing:
                continue
            material = None
            diameter = FOOT_MM if row.diameter_mm is None else row.diameter_mm
            if row.diameter_mm is None:
                self.remarks.assume(
                    f"stand-off stated by its resistance: a foot of {FOOT_MM:g} mm",
                    f"{self.board.name}/{name}",
                )
            else:
                material = self.rows.material(str(row.material), (*path, "material"))
                if material is None:
                    continue
            whole = self._rectangle(path, row.at_mm, diameter, diameter)
            if whole is None:
                continue
            square = math.sqrt(math.pi) / 2 * diameter
            low, size = self._around(row.at_mm, square, square)
            yield StandOffCase(
                name=name,
                wall=row.to,
                length_mm=self._clear_distance(row.to),
                section_mm2=math.pi / 4 * (diameter**2 - row.bore_mm**2),
                conductivity_w_per_mk=None if material is None else material.conductivity_w_per_mk,
                resistance_k_per_w=row.resistance_k_per_w,
                contact_k_per_w=row.contact_k_per_w,
                low_mm=low,
                size_mm=size,
            )

    def _column_is_stated(self, row: StandOff, path: Path) -> bool:
        """Whether a column has either a resistance, or a diameter and a material."""
        before = len(self.remarks.errors)
        parts = {"diameter_mm": row.diameter_mm, "material": row.material}
        if row.resistance_k_per_w is not None:
            for key, value in {**parts, "bore_mm": row.bore_mm or None}.items():
                if value is not None:
                    self.remarks.error(
                        (*path, key), "given together with `resistance_k_per_w`; give one of them"
                    )
        elif row.diameter_mm is None and row.material is None:
            self.remarks.error(
                path,
                "says nothing of its column; give `diameter_mm` and `material`, or "
                "`resistance_k_per_w`",
            )
        else:
            for key, value in parts.items():
                if value is None:
                    self.remarks.error(
                        (*path, key), "missing; a column has a diameter and a material"
                    )
            if row.diameter_mm is not None and row.bore_mm >= row.diameter_mm:
                self.remarks.error(
                    (*path, "bore_mm"),
                    f"given {row.bore_mm:g}; leaves nothing of a diameter of {row.diameter_mm:g}",
                )
        return len(self.remarks.errors) == before

    def edge_clamps(self, board: Board) -> Iterator[EdgeClampCase]:
        """Give the clamped edges."""
        for wall, row in board.edge_clamps.items():
            path = (*self.path, "edge_clamps", wall)
            if wall in self.sides:
                faced = [name for axis in self.along for name in wall_pair(axis)]
                self.remarks.error(
                    path,
                    f"board {self.board.name!r} lies parallel to the {wall} wall; its edges face "
                    f"{', '.join(faced)}",
                )
                continue
            across = AXIS[wall]
            edge = next(axis for axis in self.along if axis != across)
            whole = self.board.size_mm[edge]
            length = whole if row.length_mm is None else row.length_mm
            if length > whole + ROUNDING_MM:
                self.remarks.error(
                    (*path, "length_mm"),
                    f"given {length:g}; the edge is {whole:g} mm long",
                )
                continue
            low, size = list(self.board.low_mm), list(self.board.size_mm)
            low[edge] += (whole - length) / 2
            size[edge] = length
            low[across] = (self.board.low_mm if SIGN[wall] < 0 else self.board.high_mm)[across]
            size[across] = 0.0
            yield EdgeClampCase(wall, row.conductance_w_per_mk, _vector(low), _vector(size))

    def fillers(self, board: Board) -> Iterator[FillerCase]:
        """Give the fillers; no two of them share a place."""
        found: list[FillerCase] = []
        size = [self.board.size_mm[axis] for axis in self.along]
        for name, row in board.fillers.items():
            path = (*self.path, "fillers", name)
            if not self._is_side(row.side, (*path, "side")):
                continue
            at = [size[0] / 2, size[1] / 2] if row.at_mm is None else row.at_mm
            length = size[0] if row.length_mm is None else row.length_mm
            width = size[1] if row.width_mm is None else row.width_mm
            flat = self._rectangle(path, at, length, width)
            distance = self._clear_distance(row.side)
            if distance < ROUNDING_MM:
                self.remarks.error(
                    (*path, "side"), f"no room for it: the board lies on the {row.side} wall"
                )
            elif flat is not None:
                made = FillerCase(
                    name,
                    row.side,
                    distance,
                    row.conductivity_w_per_mk,
                    row.contact_mm2k_per_w,
                    *self._raised(flat, row.side, distance),
                )
                self._check_apart(path, made, found, "filler")
                found.append(made)
        yield from found

    def shield_cans(self, board: Board) -> Iterator[ShieldCanCase]:
        """Give the shield cans; no two of them share a place."""
        found: list[ShieldCanCase] = []
        for name, row in board.shield_cans.items():
            path = (*self.path, "shield_cans", name)
            for key in ("finish", "frame_conductance_w_per_mk"):
                if key not in row.model_fields_set:
                    value = getattr(row, key)
                    self.remarks.assume(
                        f"shield can finish {value}"
                        if key == "finish"
                        else f"shield can joined to the board by {value:g} W/mK of its outline",
                        f"{self.board.name}/{name}",
                    )
            finish = self.rows.finish(row.finish, (*path, "finish"))
            if not self._is_side(row.side, (*path, "side")):
                continue
            flat = self._rectangle(path, row.at_mm, row.length_mm, row.width_mm)
            room = self._clear_distance(row.side)
            if row.height_mm > room + ROUNDING_MM:
                self.remarks.error(
                    (*path, "height_mm"),
                    f"reaches {row.height_mm - room:g} mm into the {row.side} wall",
                )
            elif flat is not None and finish is not None:
                made = ShieldCanCase(
                    name,
                    row.side,
                    row.height_mm,
                    finish,
                    row.frame_conductance_w_per_mk,
                    *self._raised(flat, row.side, row.height_mm),
                )
                self._check_apart(path, made, found, "can")
                found.append(made)
        yield from found

    # Places ------------------------------------------------------------------------------

    def _is_side(self, wall: WallName, path: Path) -> bool:
        """Whether a wall is one the board lies parallel to; an error if it is not."""
        if wall in self.sides:
            return True
        self.remarks.error(
            path,
            f"given {wall!r}; board {self.board.name!r} has the sides {self.sides[0]} and "
            f"{self.sides[1]}",
        )
        return False

    def _clear_distance(self, wall: WallName) -> float:
        """Give the room between a side of the board and the wall it faces [mm]."""
        axis = self.board.axis
        if SIGN[wall] < 0:
            return self.board.low_mm[axis]
        return self.inside[axis] - self.board.high_mm[axis]

    def _around(self, at: Sequence[float], length: float, width: float) -> _Extent:
        """Give a rectangle by its centre, counted from the board's low corner, and its size."""
        low, size = list(self.board.low_mm), list(self.board.size_mm)
        for axis, centre, extent in zip(self.along, at, (length, width), strict=True):
            low[axis] += centre - extent / 2
            size[axis] = extent
        return _vector(low), _vector(size)

    def _rectangle(
        self, path: Path, at: Sequence[float], length: float, width: float
    ) -> _Extent | None:
        """Give such a rectangle, as thick as the board; an error if it leaves the board."""
        low, size = self._around(at, length, width)
        over = max(
            max(
                self.board.low_mm[axis] - low[axis],
                low[axis] + size[axis] - self.board.high_mm[axis],
            )
            for axis in self.along
        )
        if over > ROUNDING_MM:
            self.remarks.error(path, f"reaches {over:g} mm over the edge of {self.board.name!r}")
            return None
        return low, size

    def _raised(self, flat: _Extent, side: WallName, height: float) -> _Extent:
        """Give the body over a rectangle of a side."""
        axis = self.board.axis
        low, size = list(flat[0]), list(flat[1])
        low[axis] = self.board.high_mm[axis] if SIGN[side] > 0 else self.board.low_mm[axis] - height
        size[axis] = height
        return _vector(low), _vector(size)

    def _check_apart(
        self,
        path: Path,
        made: FillerCase | ShieldCanCase,
        others: Iterable[FillerCase | ShieldCanCase],
        kind: str,
    ) -> None:
        for other in others:
            if meet(made, other):
                self.remarks.error(path, f"shares its place with the {kind} {other.name!r}")


_Body = BoardCase | PartCase | FillerCase | ShieldCanCase


def check_covered(
    boards: dict[str, BoardCase], parts: dict[str, PartCase], remarks: Remarks
) -> None:
    """Check what lies under cans and in fillers: wholly, low enough, and nothing strange."""
    for board in boards.values():
        path: Path = ("boards", board.name)
        own = [part for part in parts.values() if part.host == board.name]
        for can in board.shield_cans:
            here = (*path, "shield_cans", can.name)
            _check_can(here, can, [part for part in own if part.side == can.side], remarks)
        for filler in board.fillers:
            here = (*path, "fillers", filler.name)
            strangers: list[tuple[str, _Body]] = [
                (f"board {other.name!r}", other)
                for other in boards.values()
                if other.name != board.name
            ]
            for part in parts.values():
                if part not in own or part.side != filler.side:
                    strangers.append((f"part {part.name!r}", part))
                elif part.pad is not None and meet(part, filler):
                    remarks.error(
                        here, f"part {part.name!r} in it has a pad; leave one of them out"
                    )
            strangers += [(f"can {can.name!r}", can) for can in board.shield_cans]
            for name, body in strangers:
                if meet(body, filler):
                    remarks.error(here, f"{name} reaches into it, which is not computed")


def _check_can(path: Path, can: ShieldCanCase, parts: list[PartCase], remarks: Remarks) -> None:
    axis = AXIS[can.side]
    for part in parts:
        if not meet(part, can):
            continue
        name = f"part {part.name!r}"
        if not _within(part, can):
            remarks.error(path, f"{name} lies partly under its edge")
        if part.size_mm[axis] > can.height_mm + ROUNDING_MM:
            remarks.error(
                (*path, "height_mm"),
                f"given {can.height_mm:g}; {name} under it is {part.size_mm[axis]:g} mm high",
            )
        if part.pad is not None:
            remarks.error(path, f"{name} under it has a pad to the wall")


def meet(first: _Body, second: _Body) -> bool:
    """Whether two bodies share a place, more than by rounding."""
    return all(
        a_low < b_low + b_size - ROUNDING_MM and b_low < a_low + a_size - ROUNDING_MM
        for a_low, a_size, b_low, b_size in zip(
            first.low_mm, first.size_mm, second.low_mm, second.size_mm, strict=True
        )
    )


def _within(part: PartCase, can: ShieldCanCase) -> bool:
    """Whether the outline of a part lies in that of a can."""
    return all(
        can.low_mm[axis] <= part.low_mm[axis] + ROUNDING_MM
        and part.low_mm[axis] + part.size_mm[axis]
        <= can.low_mm[axis] + can.size_mm[axis] + ROUNDING_MM
        for axis in range(3)
        if axis != AXIS[can.side]
    )


def _vector(values: Sequence[float]) -> Vector:
    return (values[0], values[1], values[2])
