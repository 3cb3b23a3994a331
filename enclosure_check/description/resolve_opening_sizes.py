"""How large an opening is and what is open of it, from whichever sizes the document states."""

from __future__ import annotations

import math
from collections.abc import Mapping
from typing import TYPE_CHECKING

from enclosure_check.description.case import ScreenCase
from enclosure_check.description.names import OpeningKind
from enclosure_check.description.remarks import ROUNDING_MM, Path, Remarks
from enclosure_check.records import dataclass

if TYPE_CHECKING:
    from enclosure_check.description.opening import Opening

# Open share of alike round holes over (diameter / pitch)^2.
_OPEN_OF_PATTERN = {"staggered": math.pi / (2.0 * math.sqrt(3.0)), "square": math.pi / 4.0}
# Keys that only some kinds take.
_ROW = ("count", "pitch_mm", "run")
_RECTANGLE = ("width_mm", "height_mm")
_OUTLINE = ("diameter_mm", *_RECTANGLE)
TAKES: Mapping[OpeningKind, tuple[str, ...]] = {
    "hole": (*_OUTLINE, *_ROW),
    "cable_gland": ("diameter_mm", "cable_mm", *_ROW),
    "perforated": (*_OUTLINE, "hole_mm", "pitch_mm", "pattern", "count", "free_area_pct"),
    "slots": (*_RECTANGLE, "slot_width_mm", *_ROW, "free_area_pct"),
    "louvre": (*_RECTANGLE, "slot_width_mm", "free_area_pct", "louvre"),
    "mesh": _OUTLINE,
    "filter": _OUTLINE,
}
SOME_TAKE = tuple(dict.fromkeys(key for keys in TAKES.values() for key in keys))


@dataclass(frozen=True)
class Outline:
    """The whole outline, how much of it is area of the opening, and one cut-out of it."""

    width: float
    height: float
    area: float
    cut_out: float
    """Hydraulic diameter of one cut-out [mm]."""
    aspect: float | None


@dataclass(frozen=True)
class Holes:
    """What holes leave open of an area, and one of them."""

    share: float
    hole: float
    aspect: float | None


def outline_of(row: Opening, path: Path, remarks: Remarks) -> Outline | None:
    """Give the outline; an error when its size is not stated, or twice."""
    given = {key: getattr(row, key) for key in _OUTLINE}
    given = {key: value for key, value in given.items() if value is not None}
    if row.kind == "slots":
        derived = _rows_of_slots(row, path, remarks)
        if derived is not None:
            given.setdefault("width_mm" if row.run == "right" else "height_mm", derived)
    if row.diameter_mm is not None and len(given) > 1 and "diameter_mm" in TAKES[row.kind]:
        key = next(key for key in given if key != "diameter_mm")
        remarks.error((*path, key), "given together with `diameter_mm`; give one of them")
        return None
    if row.diameter_mm is not None:
        one = (row.diameter_mm, row.diameter_mm)
        area, cut_out, aspect = math.pi / 4 * row.diameter_mm**2, row.diameter_mm, None
        if row.cable_mm is not None:
            if row.cable_mm >= row.diameter_mm:
                remarks.error(
                    (*path, "cable_mm"),
                    f"given {row.cable_mm:g}; fills the bore of {row.diameter_mm:g}",
                )
                return None
            area -= math.pi / 4 * row.cable_mm**2
            cut_out = row.diameter_mm - row.cable_mm
            aspect = 0.0
        return _repeated(row, one, area, cut_out, aspect, path, remarks)
    missing = [key for key in _RECTANGLE if key not in given]
    if missing:
        if "diameter_mm" in TAKES[row.kind] and row.kind != "cable_gland":
            needs = "`diameter_mm`, or `width_mm` and `height_mm`"
        elif row.kind == "cable_gland":
            missing, needs = ["diameter_mm"], "`diameter_mm`"
        else:
            needs = "`width_mm` and `height_mm`"
        remarks.error((*path, missing[0]), f"missing; kind {row.kind} takes {needs}")
        return None
    width, height = given["width_mm"], given["height_mm"]
    narrow, wide = sorted((width, height))
    area, cut_out = width * height, 2 * width * height / (width + height)
    return _repeated(row, (width, height), area, cut_out, narrow / wide, path, remarks)


def _repeated(
    row: Opening,
    one: tuple[float, float],
    area: float,
    cut_out: float,
    aspect: float | None,
    path: Path,
    remarks: Remarks,
) -> Outline | None:
    """Give the outline of a row of alike cut-outs of one size, or of the one area."""
    if row.kind not in ("hole", "cable_gland"):
        return Outline(*one, area, cut_out, aspect)
    count = row.count or 1
    if (count > 1) != (row.pitch_mm is not None):
        remarks.error(
            (*path, "pitch_mm"),
            f"missing; {count} in a row have a pitch"
            if count > 1
            else f"given {row.pitch_mm:g}; a pitch goes with a `count` of more than one",
        )
        return None
    along = 0 if row.run == "right" else 1
    if row.pitch_mm is not None and row.pitch_mm < one[along] - ROUNDING_MM:
        remarks.error(
            (*path, "pitch_mm"),
            f"given {row.pitch_mm:g}; cut-outs of {one[along]:g} mm run into each other",
        )
        return None
    size = [*one]
    size[along] += (count - 1) * (row.pitch_mm or 0.0)
    return Outline(size[0], size[1], count * area, cut_out, aspect)


def _rows_of_slots(row: Opening, path: Path, remarks: Remarks) -> float | None:
    """Give the extent of slots of a count and pitch across them [mm]."""
    if row.count is None or row.pitch_mm is None or row.slot_width_mm is None:
        return None
    extent = (row.count - 1) * row.pitch_mm + row.slot_width_mm
    key = "width_mm" if row.run == "right" else "height_mm"
    stated = getattr(row, key)
    if stated is not None and stated < extent - ROUNDING_MM:
        remarks.error(
            (*path, key),
            f"given {stated:g}; {row.count} slots at that pitch take {extent:g} mm",
        )
    return extent


def holes_of(
    row: Opening, outline: Outline, screen: ScreenCase | None, path: Path, remarks: Remarks
) -> Holes | None:
    """Give what is open of the area; an error when it is not stated, or twice."""
    if row.kind == "mesh":
        return None if screen is None else Holes(screen.free_share, screen.aperture_mm, 1.0)
    if row.kind == "perforated":
        return _round_holes(row, outline, path, remarks)
    if row.kind in ("slots", "louvre"):
        return _slots(row, outline, path, remarks)
    return Holes(1.0, outline.cut_out, outline.aspect)


def _round_holes(row: Opening, outline: Outline, path: Path, remarks: Remarks) -> Holes | None:
    hole, pitch = row.hole_mm, row.pitch_mm
    if not _one_of(row, ("free_area_pct", "pitch_mm", "count"), path, remarks):
        return None
    if row.pattern is not None and pitch is None:
        remarks.error((*path, "pattern"), "applies with `pitch_mm` only")
        return None
    if hole is None:
        remarks.error((*path, "hole_mm"), "missing; kind perforated needs it")
        return None
    if hole > max(outline.width, outline.height) + ROUNDING_MM:
        remarks.error((*path, "hole_mm"), f"given {hole:g}; larger than the area it stands in")
        return None
    if pitch is not None:
        if hole >= pitch - ROUNDING_MM:
            remarks.error(
                (*path, "hole_mm"),
                f"given {hole:g}; holes at a pitch of {pitch:g} mm run into each other",
            )
            return None
        if row.pattern is None:
            remarks.assume("holes of a perforated area stand staggered", f"{path[1]}/{path[3]}")
        share = _OPEN_OF_PATTERN[row.pattern or "staggered"] * (hole / pitch) ** 2
    elif row.count is not None:
        share = row.count * math.pi / 4 * hole**2 / outline.area
        if share > 1.0:
            remarks.error(
                (*path, "count"),
                f"given {row.count}; holes of {hole:g} mm, more than the area holds",
            )
            return None
    else:
        share = (row.free_area_pct or 0.0) / 100.0
    return Holes(share, hole, None)


def _slots(row: Opening, outline: Outline, path: Path, remarks: Remarks) -> Holes | None:
    slot = row.slot_width_mm
    across = outline.width if row.run == "right" else outline.height
    along = outline.height if row.run == "right" else outline.width
    if row.kind == "louvre":
        across = min(outline.width, outline.height)
        along = max(outline.width, outline.height)
    if slot is None:
        remarks.error((*path, "slot_width_mm"), f"missing; kind {row.kind} needs the clear width")
        return None
    if slot > across + ROUNDING_MM:
        remarks.error((*path, "slot_width_mm"), f"given {slot:g}; the area is {across:g} mm across")
        return None
    hole, aspect = 2 * slot * along / (slot + along), min(slot, along) / max(slot, along)
    if row.kind == "louvre":
        if row.free_area_pct is None:
            remarks.error((*path, "free_area_pct"), "missing; kind louvre needs it")
            return None
        return Holes(row.free_area_pct / 100.0, hole, aspect)
    if row.count is not None and row.pitch_mm is not None and row.free_area_pct is None:
        share = row.count * slot / across
    elif not _one_of(row, ("free_area_pct", "pitch_mm", "count"), path, remarks):
        return None
    elif row.pitch_mm is not None:
        share = slot / row.pitch_mm
    elif row.count is not None:
        share = row.count * slot / across
    else:
        share = (row.free_area_pct or 0.0) / 100.0
    if row.pitch_mm is not None and slot > row.pitch_mm + ROUNDING_MM:
        remarks.error(
            (*path, "slot_width_mm"),
            f"given {slot:g}; slots at a pitch of {row.pitch_mm:g} mm run into each other",
        )
        return None
    if share > 1.0 + ROUNDING_MM:
        remarks.error(
            (*path, "count"),
            f"given {row.count}; slots of {slot:g} mm, more than the {across:g} mm hold",
        )
        return None
    return Holes(share, hole, aspect)


def _one_of(row: Opening, keys: tuple[str, ...], path: Path, remarks: Remarks) -> bool:
    """Whether exactly one of some keys is given; an error if not."""
    given = [key for key in keys if getattr(row, key) is not None]
    if len(given) == 1:
        return True
    listed = ", ".join(f"`{key}`" for key in keys)
    if given:
        others = " and ".join(f"`{key}`" for key in given if key != given[-1])
        remarks.error((*path, given[-1]), f"given together with {others}; give one of {listed}")
    else:
        remarks.error(path, f"does not say what is open; give one of {listed}")
    return False
