"""Fill in the box: walls, what they are made of, how they are mounted, and the surroundings."""

from __future__ import annotations

import math
from collections.abc import Mapping
from typing import TYPE_CHECKING

from enclosure_check.description.case import (
    CableCase,
    Finish,
    Material,
    MountingCase,
    SurroundingsCase,
    WallCase,
)
from enclosure_check.description.frames import AXIS, Vector
from enclosure_check.description.names import AIR, WALL_NAMES, WallName
from enclosure_check.description.quick import mounting_by_default
from enclosure_check.description.remarks import Path, Remarks
from enclosure_check.library.rows import load_finishes, load_materials

if TYPE_CHECKING:
    from enclosure_check.description.box import Mounting, Tilt, Wall
    from enclosure_check.description.document import Document

# A surface lying flush is never perfectly so. [mm] (common practice, no source)
FLUSH_GAP_MM = 0.1
# Share by which a rounded diameter may fall short of a bare conductor. [-]
CONDUCTOR_ROUNDING = 0.01
# Emissivity of the surface behind a wall-mounted box: painted or papered walls, wood, concrete.
SURFACE_EMISSIVITY = 0.9


def up_vector(tilt: Tilt) -> Vector:
    """Give the unit vector that points up, in the box frame.

    The box is first leaned back (about its left-right axis), then rolled to the right (about the
    level front-rear axis); the components are the heights gained along the box's own axes.
    """
    lean, roll = math.radians(tilt.lean_back_deg), math.radians(tilt.roll_right_deg)
    return (
        -math.sin(roll),
        -math.sin(lean) * math.cos(roll),
        math.cos(lean) * math.cos(roll),
    )


class Rows:
    """The document's own materials and finishes before the library's."""

    def __init__(self, document: Document, remarks: Remarks) -> None:
        self._remarks = remarks
        self._materials: dict[str, Material] = {
            name: Material(
                name,
                row.conductivity_w_per_mk,
                row.conductivity_w_per_mk,
                row.density_kg_per_m3,
                row.heat_capacity_j_per_kgk,
            )
            for name, row in document.materials.items()
        }
        self._finishes: dict[str, Finish] = {
            name: Finish(name, row.emissivity, row.solar_absorptivity)
            for name, row in document.finishes.items()
        }

    def material(self, name: str, path: Path) -> Material | None:
        """Look a material up; an unknown name is an error at ``path``."""
        if name in self._materials:
            return self._materials[name]
        library = load_materials()
        if name not in library:
            self._remarks.unknown(path, "material", name, [*self._materials, *library])
            return None
        row = library[name]
        in_plane = row.in_plane_conductivity_w_per_mk
        return Material(
            name,
            row.conductivity_w_per_mk,
            row.conductivity_w_per_mk if in_plane is None else in_plane,
            row.density_kg_per_m3,
            row.heat_capacity_j_per_kgk,
        )

    def finish(self, name: str, path: Path) -> Finish | None:
        """Look a finish up; an unknown name is an error at ``path``."""
        if name in self._finishes:
            return self._finishes[name]
        library = load_finishes()
        if name not in library:
            self._remarks.unknown(path, "finish", name, [*self._finishes, *library])
            return None
        return Finish(name, library[name].emissivity, library[name].solar_absorptivity)


def resolve_walls(document: Document, rows: Rows, remarks: Remarks) -> dict[WallName, WallCase]:
    """Fill in the six walls; walls with an error in them are left out."""
    walls: dict[WallName, WallCase] = {}
    for name in WALL_NAMES:
        wall = _resolve_wall(name, document, rows, remarks)
        if wall is not None:
            walls[name] = wall
    if len(walls) == len(WALL_NAMES) and all(
        wall.mounting.kind != "open_air" for wall in walls.values()
    ):
        remarks.error(("walls",), "no wall is in open air; at least one must be")
    return walls


def _resolve_wall(
    name: WallName, document: Document, rows: Rows, remarks: Remarks
) -> WallCase | None:
    written = document.walls.get(name)
    default = document.defaults.wall
    here: Path = ("walls", name) if written is not None else ("defaults", "wall")

    def pick(key: str) -> tuple[object, Path]:
        own = getattr(written, key) if written is not None else None
        if own is not None:
            return own, ("walls", name, key)
        return getattr(default, key), ("defaults", "wall", key)

    material_name, material_path = pick("material")
    thickness, _ = pick("thickness_mm")
    outside_name, outside_path = pick("finish_outside")
    inside_name, inside_path = pick("finish_inside")
    missing = [
        key
        for key, value in (
            ("material", material_name),
            ("thickness_mm", thickness),
            ("finish_outside", outside_name),
        )
        if value is None
    ]
    for key in missing:
        remarks.error(
            (*here, key), f"missing; give `{key}` for this wall or for all under `defaults.wall`"
        )
    material = rows.material(str(material_name), material_path) if material_name else None
    outside = rows.finish(str(outside_name), outside_path) if outside_name else None
    inside = rows.finish(str(inside_name), inside_path) if inside_name else outside
    mounting = _resolve_mounting(
        name, written.mounting if written is not None else mounting_by_default(), document, remarks
    )
    sun = document.surroundings.sun_w_per_m2.get(name, 0.0)
    if sun > 0 and mounting.kind != "open_air":
        remarks.warn(
            ("surroundings", "sun_w_per_m2", name),
            f"the {name} wall is not in open air; the sun on it is left out",
        )
        sun = 0.0
    touch = written.touch_max_c if written is not None else None
    if touch is None and mounting.kind == "open_air":
        touch = document.requirements.touch_max_c
    cables = _resolve_cables(name, written, remarks) if written is not None else ()
    if missing or material is None or outside is None or inside is None:
        return None
    assert isinstance(thickness, float | int)
    return WallCase(name, material, thickness, outside, inside, mounting, touch, sun, cables)


def _resolve_cables(name: WallName, wall: Wall, remarks: Remarks) -> tuple[CableCase, ...]:
    for cable, row in wall.cables.items():
        room = math.pi / 4 * row.outer_mm**2
        if row.conductor_mm2 > room * (1 + CONDUCTOR_ROUNDING):
            remarks.error(
                ("walls", name, "cables", cable, "conductor_mm2"),
                f"given {row.conductor_mm2:g}; a diameter of {row.outer_mm:g} mm has room for "
                f"{room:.3g} mm2",
            )
        remarks.assume(
            "cables: copper, insulation without resistance, films as at 10 K over the air",
            f"{name}/{cable}",
        )
    return tuple(
        CableCase(cable, row.count, row.conductor_mm2, row.outer_mm, row.inside_mm, row.current_a)
        for cable, row in wall.cables.items()
    )


# Which keys each kind of mounting takes beside `kind`.
_MOUNTING_KEYS: Mapping[str, tuple[str, ...]] = {
    "open_air": (),
    "against_surface": ("gap_mm", "edges", "surface_c", "surface_emissivity"),
    "neighbour": ("gap_mm", "edges", "surface_c", "surface_emissivity"),
    "standing_on": ("contact_w_per_m2k", "surface_c"),
    "bolted_to": ("contact_w_per_m2k", "surface_c"),
    "insulated": (),
}


def _resolve_mounting(
    name: WallName, mounting: Mounting, document: Document, remarks: Remarks
) -> MountingCase:
    path: Path = ("walls", name, "mounting")
    takes = _MOUNTING_KEYS[mounting.kind]
    for key in ("gap_mm", "edges", "contact_w_per_m2k", "surface_c", "surface_emissivity"):
        if getattr(mounting, key) is not None and key not in takes:
            allowed = ", ".join(takes) if takes else "nothing else"
            remarks.error(
                (*path, key), f"does not apply to kind {mounting.kind}, which takes {allowed}"
            )
    gap = FLUSH_GAP_MM if mounting.gap_mm is None else max(mounting.gap_mm, FLUSH_GAP_MM)
    contact = mounting.contact_w_per_m2k or 0.0
    surface = mounting.surface_c
    emissivity = mounting.surface_emissivity
    gapped = mounting.kind in ("against_surface", "neighbour")
    if gapped:
        if mounting.gap_mm is None:
            remarks.assume(f"a surface lying flush leaves {FLUSH_GAP_MM:g} mm of air", name)
        if mounting.edges is None and mounting.gap_mm is not None:
            remarks.assume("air passes by the edges of the gap to what is behind a wall", name)
        if emissivity is None:
            remarks.assume(f"surface behind a wall: emissivity {SURFACE_EMISSIVITY:g}", name)
    elif mounting.kind == "bolted_to" and not contact:
        remarks.error((*path, "contact_w_per_m2k"), "missing; kind bolted_to needs it")
    elif mounting.kind == "standing_on" and not contact:
        remarks.assume("no heat passes to what the box stands on: no contact given", name)
    if mounting.kind == "neighbour" and surface is None:
        remarks.assume("neighbouring box is as warm as this one", name)
    elif "surface_c" in takes and surface is None:
        surface = document.surroundings.air_c
        if contact or gapped:
            remarks.assume("mounting surface is as warm as the surrounding air", name)
    return MountingCase(
        mounting.kind,
        gap,
        mounting.edges == "closed",
        contact,
        surface,
        SURFACE_EMISSIVITY if emissivity is None else emissivity,
    )


def resolve_surroundings(document: Document, remarks: Remarks) -> SurroundingsCase:
    """Fill in the surroundings."""
    given = document.surroundings
    if given.sky == "given" and given.sky_c is None:
        remarks.error(("surroundings", "sky_c"), "missing; sky: given needs it")
    if given.sky != "given" and given.sky_c is not None:
        remarks.error(
            ("surroundings", "sky_c"), f"applies to sky: given only, here the sky is {given.sky}"
        )
    if given.radiant_c is None:
        remarks.assume("radiant surroundings are as warm as the air")
    return SurroundingsCase(
        given.air_c,
        given.air_c if given.radiant_c is None else given.radiant_c,
        given.altitude_m,
        given.sky,
        given.sky_c,
        given.wind_m_per_s,
        None if given.wind_from == "any" else given.wind_from,
    )


def resolve_sizes(
    document: Document, walls: dict[WallName, WallCase], remarks: Remarks
) -> tuple[Vector, Vector]:
    """Give the inside and outside sizes of the box along x, y and z [mm]."""
    box = document.box
    given = (box.width_mm, box.depth_mm, box.height_mm)
    keys = ("width_mm", "depth_mm", "height_mm")
    thick = [0.0, 0.0, 0.0]
    for name, wall in walls.items():
        thick[AXIS[name]] += wall.thickness_mm
    outside_given = box.dimensions == "outside"
    inside = [size - t if outside_given else size for size, t in zip(given, thick, strict=True)]
    for size, key in zip(inside, keys, strict=True):
        if size <= 0:
            remarks.error(("box", key), "given outside sizes leave no room inside the walls")
    outside = [size + t for size, t in zip(inside, thick, strict=True)]
    return (inside[0], inside[1], inside[2]), (outside[0], outside[1], outside[2])


def reserved_names() -> tuple[str, ...]:
    """Names no board or part may take: they stand for the walls and the air."""
    return (*WALL_NAMES, AIR)
