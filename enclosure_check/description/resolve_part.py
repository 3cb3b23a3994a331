"""Fill in the parts: type, place, power, thermal resistances, pad and limits."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from enclosure_check.description.case import (
    BoardCase,
    Finish,
    LimitCase,
    PadCase,
    PartCase,
    WallCase,
)
from enclosure_check.description.frames import (
    AXIS,
    OPPOSITE,
    SIGN,
    Vector,
    face_frame,
    point_on_face,
    turned_rectangle,
    wall_pair,
)
from enclosure_check.description.names import AIR, WALL_NAMES, LimitKind, WallName
from enclosure_check.description.remarks import MOST_WARNINGS, ROUNDING_MM, Path, Remarks
from enclosure_check.description.resolve_board import (
    check_mode_names,
    mode_power,
    place_between_walls,
)
from enclosure_check.description.resolve_box import Rows, reserved_names
from enclosure_check.description.resolve_limit import resolve_limit
from enclosure_check.description.resolve_power import stated_power

if TYPE_CHECKING:
    from enclosure_check.description.document import Document
    from enclosure_check.description.part import Limit, Pad, Part

PART_FINISH = "epoxy_package"
POWER_AT_C = 25.0
# A pad squeezed to less than this share of its thickness is beyond what data sheets allow.
# (common practice, no source)
LEAST_PAD_SHARE = 0.5


class PartResolver:
    """Resolves the parts of one document, given its resolved walls and boards."""

    def __init__(
        self,
        document: Document,
        inside: Vector,
        walls: dict[WallName, WallCase],
        boards: dict[str, BoardCase],
        rows: Rows,
        remarks: Remarks,
    ) -> None:
        self.document = document
        self.inside = inside
        self.walls = walls
        self.boards = boards
        self.rows = rows
        self.remarks = remarks

    def resolve(self) -> dict[str, PartCase]:
        """Fill in the parts; parts with an error in them are left out."""
        parts: dict[str, PartCase] = {}
        for name, part in self.document.parts.items():
            before = len(self.remarks.errors)
            resolved = self._part(name, part)
            if resolved is not None and len(self.remarks.errors) == before:
                parts[name] = resolved
        _warn_overlaps(parts, self.remarks)
        return parts

    def _part(self, name: str, part: Part) -> PartCase | None:
        path: Path = ("parts", name)
        remarks = self.remarks
        if name in reserved_names() or name in self.document.boards:
            remarks.error(path, f"the name {name!r} stands for a wall, a board or the air already")
        types = self.document.part_types
        if part.type is not None and part.type not in types:
            remarks.unknown((*path, "type"), "part type", part.type, list(types))
            return None
        kind = types.get(part.type) if part.type is not None else None

        def pick(key: str) -> Any:
            own = getattr(part, key)
            return getattr(kind, key) if own is None and kind is not None else own

        def where(key: str) -> Path:
            if getattr(part, key) is None and kind is not None and getattr(kind, key) is not None:
                assert part.type is not None
                return ("part_types", part.type, key)
            return (*path, key)

        sizes = [pick(key) for key in ("length_mm", "width_mm", "height_mm")]
        for key, value in zip(("length_mm", "width_mm", "height_mm"), sizes, strict=True):
            if value is None:
                remarks.error((*path, key), f"missing; give `{key}` for this part or its type")
        finish_name = pick("finish")
        if finish_name is None:
            remarks.assume(f"part finish {PART_FINISH}", name)
        finish: Finish | None = self.rows.finish(finish_name or PART_FINISH, where("finish"))
        if None in sizes or finish is None:
            return None
        placed = self._place(name, part, (sizes[0], sizes[1], sizes[2]))
        limits = {**(kind.limits if kind is not None else {}), **part.limits}
        checked = tuple(
            limit
            for point, value in limits.items()
            if (limit := self._limit(part, path, point, value)) is not None
        )
        of_type = kind.power_by_mode_w if kind is not None else {}
        by_mode = {**of_type, **part.power_by_mode_w}
        stated = stated_power(pick, where, remarks)
        if stated is None and not by_mode:
            remarks.assume("no power stated: taken as none", name)
        check_mode_names(
            [name for name in of_type if name not in part.power_by_mode_w],
            self.document,
            ("part_types", str(part.type), "power_by_mode_w"),
            remarks,
        )
        check_mode_names(part.power_by_mode_w, self.document, (*path, "power_by_mode_w"), remarks)
        power = mode_power(stated or 0.0, by_mode, self.document)
        slope, doubling = pick("power_slope_pct_per_k"), pick("power_doubling_k")
        if slope is not None and doubling is not None:
            remarks.error(
                where("power_doubling_k"),
                "given together with `power_slope_pct_per_k`; give one of them",
            )
        if placed is None:
            return None
        place, side, low, size = placed
        thetas = {
            key: pick(key)
            for key in (
                "theta_jc_top_k_per_w",
                "theta_jc_bottom_k_per_w",
                "theta_jb_k_per_w",
                "bottom_contact_k_per_w",
            )
        }
        pad: Pad | None = pick("pad")
        self._check_paths(name, place, thetas, pad is not None)
        pad_case = self._pad(where("pad"), pad, place, part.place, side, low, size) if pad else None
        if pad is None or place == "wall":
            lift = pad.thickness_mm if pad is not None else 0.0
            self._check_headroom(path, side, low, size, lift)
        return PartCase(
            name=name,
            place=place,
            host=part.place,
            side=side,
            low_mm=low,
            size_mm=size,
            power_w=power,
            power_at_c=POWER_AT_C if pick("power_at_c") is None else pick("power_at_c"),
            power_slope_pct_per_k=slope or 0.0,
            power_doubling_k=doubling,
            finish=finish,
            pad=pad_case,
            limits=checked,
            **thetas,
        )

    def _limit(self, part: Part, path: Path, point: LimitKind, limit: Limit) -> LimitCase | None:
        own = point in part.limits or part.type is None
        root: Path = path if own else ("part_types", str(part.type))
        on_board = part.place in self.document.boards
        return resolve_limit((*root, "limits", point), point, limit, on_board, self.remarks)

    # Place -------------------------------------------------------------------------------

    def _place(
        self, name: str, part: Part, sizes: Vector
    ) -> tuple[str, WallName, Vector, Vector] | None:
        """Give where the part sits, the wall its top faces, and its body in the box frame."""
        path: Path = ("parts", name)
        remarks = self.remarks
        if part.place == AIR:
            return self._place_in_air(path, part, sizes)
        if part.from_walls_mm:
            remarks.error((*path, "from_walls_mm"), "applies to parts in the air only; use `at_mm`")
        side: WallName
        if part.place in WALL_NAMES:
            wall = next(wall for wall in WALL_NAMES if wall == part.place)
            if part.side is not None:
                remarks.error((*path, "side"), "applies to parts on boards only")
            side = OPPOSITE[wall]
            low: Vector = (0.0, 0.0, 0.0)
            high = self.inside
            base = 0.0 if SIGN[wall] < 0 else self.inside[AXIS[wall]]
            place = "wall"
        elif part.place in self.boards:
            board = self.boards[part.place]
            pair = wall_pair(board.axis)
            if part.side not in pair:
                given = "missing" if part.side is None else f"given {part.side!r}"
                remarks.error(
                    (*path, "side"),
                    f"{given}; board {part.place!r} has the sides {pair[0]} and {pair[1]}",
                )
                return None
            side = part.side
            low, high = board.low_mm, board.high_mm
            base = low[board.axis] if SIGN[side] < 0 else high[board.axis]
            place = "board"
        else:
            if part.place not in self.document.boards:
                known = [*self.document.boards, *WALL_NAMES, AIR]
                remarks.unknown((*path, "place"), "board or wall", part.place, known)
            return None
        if part.at_mm is None:
            remarks.error((*path, "at_mm"), "missing; a part on a board or wall needs its centre")
            return None
        return self._on_face(path, part, sizes, place, side, low, high, base)

    def _on_face(
        self,
        path: Path,
        part: Part,
        sizes: Vector,
        place: str,
        side: WallName,
        low: Vector,
        high: Vector,
        base: float,
    ) -> tuple[str, WallName, Vector, Vector] | None:
        assert part.at_mm is not None
        axis, sign = AXIS[side], SIGN[side]
        frame = face_frame(axis, sign)
        right, up = point_on_face(frame, low, high, (part.at_mm[0], part.at_mm[1]), part.at_from)
        along_right, along_up = self._turned(path[-1], part, sizes)
        body_low, body_size = [0.0, 0.0, 0.0], [0.0, 0.0, 0.0]
        for body_axis, centre, extent in (
            (frame.right_axis, right, along_right),
            (frame.up_axis, up, along_up),
        ):
            body_low[body_axis], body_size[body_axis] = centre - extent / 2, extent
            if (
                body_low[body_axis] < low[body_axis] - ROUNDING_MM
                or centre + extent / 2 > high[body_axis] + ROUNDING_MM
            ):
                over = max(
                    low[body_axis] - body_low[body_axis], centre + extent / 2 - high[body_axis]
                )
                self.remarks.error(
                    (*path, "at_mm"), f"reaches {over:g} mm over the edge of {part.place!r}"
                )
                return None
        body_size[axis] = sizes[2]
        body_low[axis] = base if sign > 0 else base - sizes[2]
        return (
            place,
            side,
            (body_low[0], body_low[1], body_low[2]),
            (body_size[0], body_size[1], body_size[2]),
        )

    def _place_in_air(
        self, path: Path, part: Part, sizes: Vector
    ) -> tuple[str, WallName, Vector, Vector] | None:
        for key in ("side", "at_mm"):
            if getattr(part, key) is not None:
                self.remarks.error(
                    (*path, key), "applies to parts on boards and walls; use `from_walls_mm`"
                )
        size = (*self._turned(path[-1], part, sizes), sizes[2])
        low = place_between_walls(size, part.from_walls_mm, self.inside, path, self.remarks)
        return None if low is None else ("air", "top", low, size)

    def _turned(self, name: str | int, part: Part, sizes: Vector) -> tuple[float, float]:
        if part.rotation_deg % 90:
            self.remarks.assume(
                "turned between quarter turns: taken as a rectangle along the edges of the same "
                "area, with the proportions of the rectangle that encloses it",
                str(name),
            )
        return turned_rectangle(sizes[0], sizes[1], part.rotation_deg)

    def _distance_to_wall(self, side: WallName, low: Vector, size: Vector) -> float:
        """Give the room between a part's top and the wall it faces [mm]."""
        axis = AXIS[side]
        if SIGN[side] < 0:
            return low[axis]
        return self.inside[axis] - low[axis] - size[axis]

    def _check_headroom(
        self, path: Path, side: WallName, low: Vector, size: Vector, lift: float
    ) -> None:
        room = self._distance_to_wall(side, low, size) - lift
        if room < -ROUNDING_MM:
            self.remarks.error(
                (*path, "place"), f"its top reaches {-room:g} mm into the {side} wall"
            )

    # Paths and pad -----------------------------------------------------------------------

    def _check_paths(
        self, name: str, place: str, thetas: dict[str, float | None], has_pad: bool
    ) -> None:
        if thetas["theta_jc_top_k_per_w"] is None:
            self.remarks.assume("no theta_jc_top: the case top is as warm as the junction", name)
        to_board = thetas["theta_jb_k_per_w"]
        bottom = thetas["theta_jc_bottom_k_per_w"]
        if place == "board" and to_board is not None and bottom is not None:
            self.remarks.assume(
                "theta_jb given: it is the whole path to the board, theta_jc_bottom left out", name
            )
        joint = thetas["bottom_contact_k_per_w"]
        if place == "board" and to_board is not None and joint is not None:
            self.remarks.assume(
                "theta_jb given: it is the whole path to the board, bottom_contact left out", name
            )
        if place == "board" and to_board is None and bottom is None and joint is None:
            self.remarks.assume("no path to the board given: 0.1 mm of air under the body", name)
        if place == "wall" and joint is None and not has_pad:
            self.remarks.assume("no joint to the wall given: 0.1 mm of air", name)
        if place == "wall" and joint is not None and has_pad:
            self.remarks.assume(
                "pad given: it is the joint to the wall, bottom_contact left out", name
            )
        if place != "board" and to_board is not None:
            self.remarks.assume("not on a board: theta_jb left out", name)
        if place == "air" and (bottom is not None or joint is not None):
            self.remarks.assume("air all round: theta_jc_bottom and bottom_contact left out", name)

    def _pad(
        self,
        path: Path,
        pad: Pad,
        place: str,
        host: str,
        side: WallName,
        low: Vector,
        size: Vector,
    ) -> PadCase | None:
        remarks = self.remarks
        if place == "air":
            remarks.error(path, "a part in the air cannot have a pad; set it on the wall")
            return None
        axis = AXIS[side]
        frame = face_frame(axis, SIGN[side])
        wall: WallName = OPPOSITE[side] if place == "wall" else side
        if pad.to != wall and not (place == "wall" and pad.to is None):
            given = "missing" if pad.to is None else f"given {pad.to!r}"
            remarks.error(
                (*path, "to"), f"{given}; this part can only have a pad to the {wall} wall"
            )
            return None
        pad_low, pad_size = [0.0, 0.0, 0.0], [0.0, 0.0, 0.0]
        for own, body_axis, key in (
            (pad.length_mm, frame.right_axis, "length_mm"),
            (pad.width_mm, frame.up_axis, "width_mm"),
        ):
            if own is not None and own > size[body_axis] + ROUNDING_MM:
                remarks.error(
                    (*path, key),
                    f"given {own:g}; the pad is larger than the {size[body_axis]:g} mm of the part",
                )
            extent = size[body_axis] if own is None else own
            pad_low[body_axis] = low[body_axis] + (size[body_axis] - extent) / 2
            pad_size[body_axis] = extent
        if place == "wall":
            distance = pad.thickness_mm
        else:
            distance = self._distance_to_wall(side, low, size)
            if distance < ROUNDING_MM:
                remarks.error(path, f"no room for a pad: {distance:g} mm to the {side} wall")
                return None
            if pad.thickness_mm < distance - ROUNDING_MM:
                remarks.error(
                    (*path, "thickness_mm"),
                    f"given {pad.thickness_mm:g}; thinner than the {distance:g} mm between the "
                    f"part {host!r} carries here and the {side} wall, so it does not touch",
                )
                return None
            if distance < LEAST_PAD_SHARE * pad.thickness_mm:
                remarks.warn(
                    (*path, "thickness_mm"),
                    f"squeezed from {pad.thickness_mm:g} to {distance:g} mm, more than half; check "
                    "the force on the part",
                )
        return PadCase(
            wall,
            distance,
            pad.conductivity_w_per_mk,
            pad.contact_mm2k_per_w,
            (pad_low[0], pad_low[1], pad_low[2]),
            (pad_size[0], pad_size[1], pad_size[2]),
        )


def _warn_overlaps(parts: dict[str, PartCase], remarks: Remarks) -> None:
    """Warn of parts on the same face whose outlines overlap, and of bodies that do in the air."""
    groups: dict[tuple[str, str], list[PartCase]] = {}
    for part in parts.values():
        groups.setdefault((part.host, part.side), []).append(part)
    for members in groups.values():
        members.sort(key=lambda part: part.low_mm[0])
        for index, first in enumerate(members):
            for second in members[index + 1 :]:
                if second.low_mm[0] > first.low_mm[0] + first.size_mm[0]:
                    break
                if _overlap(first, second):
                    if len(remarks.warnings) >= MOST_WARNINGS:
                        return
                    remarks.warn(
                        ("parts", second.name), f"its outline overlaps that of {first.name}"
                    )


def _overlap(first: PartCase, second: PartCase) -> bool:
    return all(
        a_low < b_low + b_size - ROUNDING_MM and b_low < a_low + a_size - ROUNDING_MM
        for a_low, a_size, b_low, b_size in zip(
            first.low_mm, first.size_mm, second.low_mm, second.size_mm, strict=True
        )
    )
