"""Fill in the openings of the walls: what is open of them, where they lie, and what fits."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import replace
from itertools import combinations
from typing import TYPE_CHECKING

from enclosure_check.description.case import (
    BoardCase,
    FillerCase,
    OpeningCase,
    PadCase,
    PartCase,
    ScreenCase,
    WallCase,
)
from enclosure_check.description.frames import AXIS, SIGN, Vector, face_frame, point_on_face
from enclosure_check.description.names import WALL_NAMES, WallName
from enclosure_check.description.remarks import ROUNDING_MM, Path, Remarks
from enclosure_check.description.resolve_box import FLUSH_GAP_MM
from enclosure_check.description.resolve_opening_sizes import (
    SOME_TAKE,
    TAKES,
    Outline,
    holes_of,
    outline_of,
)
from enclosure_check.library.opening_rows import load_filters, load_louvres, load_screens

if TYPE_CHECKING:
    from enclosure_check.description.document import Document
    from enclosure_check.description.opening import Opening

DEFAULT_LOUVRE = "fixed_blades"
DEFAULT_SCREEN = "insect_mesh"
DEFAULT_FILTER = "coarse_mat"


def resolve_openings(
    document: Document, inside: Vector, walls: dict[WallName, WallCase], remarks: Remarks
) -> dict[WallName, WallCase]:
    """Give the walls with their openings; openings with an error in them are left out.

    Parameters
    ----------
    document
        The document.
    inside
        Inside size of the box [mm].
    walls
        Walls found so far.
    remarks
        Where errors, warnings and assumptions go.
    """
    made = dict(walls)
    for name in WALL_NAMES:
        written = document.walls.get(name)
        if written is None or name not in walls:
            continue
        resolver = _Openings(walls[name], inside, remarks)
        openings = tuple(resolver.resolve(written.openings))
        made[name] = replace(walls[name], openings=openings)
    return made


class _Openings:
    """Resolves the openings of one wall."""

    def __init__(self, wall: WallCase, inside: Vector, remarks: Remarks) -> None:
        self.wall = wall
        self.remarks = remarks
        self.frame = face_frame(AXIS[wall.name], -SIGN[wall.name])
        self.low: Vector = (0.0, 0.0, 0.0)
        self.high = inside

    def resolve(self, written: Mapping[str, Opening]) -> Iterator[OpeningCase]:
        """Give the openings in their order."""
        found: list[OpeningCase] = []
        for name, row in written.items():
            path: Path = ("walls", self.wall.name, "openings", name)
            before = len(self.remarks.errors)
            made = self._opening(name, row, path)
            if made is None or len(self.remarks.errors) > before:
                continue
            self._check_outside(made, path)
            found.append(made)
        for first, second in combinations(found, 2):
            if _overlap(first, second):
                self.remarks.warn(
                    ("walls", self.wall.name, "openings", second.name),
                    f"lies over the opening {first.name!r}; the area both share counts twice",
                )
        yield from found

    def _opening(self, name: str, row: Opening, path: Path) -> OpeningCase | None:
        takes = TAKES[row.kind]
        for key in SOME_TAKE:
            given = key in row.model_fields_set and getattr(row, key) is not None
            if given and key not in takes:
                self.remarks.error(
                    (*path, key),
                    f"does not apply to kind {row.kind}, which takes {', '.join(takes)}",
                )
        screen = self._screen(row, path)
        resistance = self._filter(row, path)
        outline = outline_of(row, path, self.remarks)
        if outline is None:
            return None
        holes = holes_of(row, outline, screen, path, self.remarks)
        place = self._place(row, outline, path)
        if holes is None or place is None:
            return None
        count = (row.count or 1) if row.kind in ("hole", "cable_gland") else 1
        share = min(holes.share, 1.0)
        return OpeningCase(
            name=name,
            wall=self.wall.name,
            kind=row.kind,
            low_mm=place[0],
            size_mm=place[1],
            free_area_mm2=outline.area * share * (1.0 - row.blocked_pct / 100.0),
            free_share=share,
            count=count,
            area_mm=outline.cut_out,
            hole_mm=holes.hole,
            hole_aspect=holes.aspect,
            thickness_mm=self.wall.thickness_mm if row.thickness_mm is None else row.thickness_mm,
            stated_loss=self._stated_loss(row, path),
            screen=screen,
            filter_pa_s_per_m=resistance * share,
            blocked_pct=row.blocked_pct,
        )

    # What lies over it --------------------------------------------------------------------

    def _screen(self, row: Opening, path: Path) -> ScreenCase | None:
        """Give the mesh; for kind mesh that of the library when nothing is said."""
        given = row.screen
        if given is None:
            return self._shipped_screen(None, path) if row.kind == "mesh" else None
        if (given.wire_mm is None) != (given.aperture_mm is None):
            key = "wire_mm" if given.wire_mm is None else "aperture_mm"
            self.remarks.error(
                (*path, "screen", key), "missing; a mesh has `wire_mm` and `aperture_mm`"
            )
            return None
        if given.wire_mm is None or given.aperture_mm is None:
            return self._shipped_screen(given.type, path)
        if given.type is not None:
            self.remarks.error(
                (*path, "screen", "type"), "given together with `wire_mm`; give one of them"
            )
        return ScreenCase("mesh", given.wire_mm, given.aperture_mm)

    def _shipped_screen(self, name: str | None, path: Path) -> ScreenCase | None:
        if name is None:
            name = DEFAULT_SCREEN
            self.remarks.assume(f"mesh over an opening: {name}", self._who(path))
        rows = load_screens()
        if name not in rows:
            self.remarks.unknown((*path, "screen", "type"), "mesh", name, list(rows))
            return None
        return ScreenCase(name, rows[name].wire_mm, rows[name].aperture_mm)

    def _filter(self, row: Opening, path: Path) -> float:
        """Give the loss of a filter per velocity in front of it [Pa s/m], 0 without one."""
        given = row.filter
        if given is None and row.kind != "filter":
            return 0.0
        self.remarks.assume("filters are clean", self._who(path))
        if given is None:
            return self._shipped_filter(None, path)
        if (given.loss_pa is None) != (given.at_m_per_s is None):
            key = "loss_pa" if given.loss_pa is None else "at_m_per_s"
            self.remarks.error((*path, "filter", key), "missing; a loss is stated at a velocity")
            return 0.0
        if given.loss_pa is None or given.at_m_per_s is None:
            return self._shipped_filter(given.type, path)
        if given.type is not None:
            self.remarks.error(
                (*path, "filter", "type"), "given together with `loss_pa`; give one of them"
            )
        return given.loss_pa / given.at_m_per_s

    def _shipped_filter(self, name: str | None, path: Path) -> float:
        if name is None:
            name = DEFAULT_FILTER
            self.remarks.assume(f"filter over an opening: {name}", self._who(path))
        rows = load_filters()
        if name not in rows:
            self.remarks.unknown((*path, "filter", "type"), "filter", name, list(rows))
            return 0.0
        return rows[name].resistance_pa_s_per_m

    def _stated_loss(self, row: Opening, path: Path) -> float | None:
        """Give the loss that does not follow from sizes: the user's, else that of a louvre."""
        if row.loss_coefficient is not None:
            if row.louvre is not None:
                self.remarks.error(
                    (*path, "louvre"), "given together with `loss_coefficient`; give one of them"
                )
            return row.loss_coefficient
        if row.kind != "louvre":
            return None
        name = row.louvre or DEFAULT_LOUVRE
        if row.louvre is None:
            self.remarks.assume(f"louvre: {name}", self._who(path))
        rows = load_louvres()
        if name not in rows:
            self.remarks.unknown((*path, "louvre"), "louvre", name, list(rows))
            return None
        return rows[name].loss

    def _who(self, path: Path) -> str:
        return f"{self.wall.name}/{path[3]}"

    # Place -------------------------------------------------------------------------------

    def _place(self, row: Opening, outline: Outline, path: Path) -> tuple[Vector, Vector] | None:
        """Give low corner and size of the outline; an error if it leaves the wall."""
        frame = self.frame
        middle = [size / 2 for size in self.high]
        right, up = middle[frame.right_axis], middle[frame.up_axis]
        if row.at_mm is not None:
            at = (row.at_mm[0], row.at_mm[1])
            right, up = point_on_face(frame, self.low, self.high, at, row.at_from)
        low, size = [0.0, 0.0, 0.0], [0.0, 0.0, 0.0]
        for axis, centre, extent in (
            (frame.right_axis, right, outline.width),
            (frame.up_axis, up, outline.height),
        ):
            low[axis], size[axis] = centre - extent / 2, extent
        wall_axis = AXIS[self.wall.name]
        low[wall_axis] = 0.0 if SIGN[self.wall.name] < 0 else self.high[wall_axis]
        over = max(
            max(-low[axis], low[axis] + size[axis] - self.high[axis])
            for axis in (frame.right_axis, frame.up_axis)
        )
        if over > ROUNDING_MM:
            self.remarks.error(
                (*path, "at_mm") if row.at_mm is not None else path,
                f"reaches {over:g} mm over the edge of the {self.wall.name} wall",
            )
            return None
        return (low[0], low[1], low[2]), (size[0], size[1], size[2])

    def _check_outside(self, made: OpeningCase, path: Path) -> None:
        """Check that there is air outside an opening that is not closed."""
        mounting = self.wall.mounting
        if made.closed or mounting.kind == "open_air":
            return
        wall, gap = self.wall.name, mounting.gap_mm
        gapped = mounting.kind in ("against_surface", "neighbour")
        if not gapped or gap <= FLUSH_GAP_MM:
            without = " without a gap" if gapped else ""
            self.remarks.error(
                path,
                f"no air outside: the {wall} wall is mounted {mounting.kind}{without}; leave a gap "
                "or close it with `blocked_pct: 100`",
            )
            return
        if mounting.closed:
            self.remarks.error(
                path,
                f"no air outside: the gap behind the {wall} wall has closed edges; open them or "
                "close it with `blocked_pct: 100`",
            )
            return
        message = f"opens into a gap of {gap:g} mm; reckoned as into open air"
        rim = 2 * sum(made.size_mm) * gap
        if rim < made.free_area_mm2:
            message += (
                f", but its outline has only {rim:.3g} mm2 towards the gap for "
                f"{made.free_area_mm2:.3g} mm2 that is open: less air will pass"
            )
        self.remarks.warn(path, message)


def check_uncovered(
    walls: Mapping[WallName, WallCase],
    boards: Mapping[str, BoardCase],
    parts: Mapping[str, PartCase],
    remarks: Remarks,
) -> None:
    """Warn of what stands on a wall over one of its openings."""
    for wall in walls.values():
        for opening in wall.openings:
            over = [
                f"part {part.name!r}"
                for part in parts.values()
                if (part.place == "wall" and part.host == wall.name and _overlap(opening, part))
                or (
                    part.pad is not None
                    and part.pad.wall == wall.name
                    and _overlap(opening, part.pad)
                )
            ]
            over += [
                f"filler {filler.name!r}"
                for board in boards.values()
                for filler in board.fillers
                if filler.side == wall.name and _overlap(opening, filler)
            ]
            if over and not opening.closed:
                remarks.warn(
                    ("walls", wall.name, "openings", opening.name),
                    f"{', '.join(over)} stands over it, which does not narrow it here; say so with "
                    "`blocked_pct`",
                )


def _overlap(first: OpeningCase, second: OpeningCase | PartCase | PadCase | FillerCase) -> bool:
    """Whether the outline of an opening and another thing share some of the wall."""
    low, size = second.low_mm, second.size_mm
    return all(
        first.low_mm[axis] < low[axis] + size[axis] - ROUNDING_MM
        and low[axis] < first.low_mm[axis] + first.size_mm[axis] - ROUNDING_MM
        for axis in range(3)
        if axis != AXIS[first.wall]
    )
