"""Builds the walls: through and along them, outside to the surroundings, inside to the air."""

import math
from itertools import combinations

from enclosure_check.description.base import WALL_NAMES
from enclosure_check.description.case import Case, WallCase
from enclosure_check.description.frames import AXIS, SIGN, Vector
from enclosure_check.network.links import LinkLabel
from enclosure_check.network.site import InsideSurface, Plate, Site
from enclosure_check.network.units import kelvin, metres, metres_3
from enclosure_check.physics.box import box_geometry
from enclosure_check.physics.conduction import corner_joint
from enclosure_check.physics.radiation import sky_view_factor


def build_walls(case: Case, site: Site) -> None:
    """Add two nodes per wall, its outside and its inside, and everything that joins them."""
    inside, outside = metres_3(case.inside_mm), metres_3(case.outside_mm)
    for name in WALL_NAMES:
        _build_wall(case.walls[name], inside, outside, site)
    for one, other in combinations(WALL_NAMES, 2):
        if AXIS[one] != AXIS[other]:
            _join_corner(case.walls[one], case.walls[other], inside, site)
    open_faces = [case.walls[name].mounting.kind == "open_air" for name in WALL_NAMES]
    site.builder.box_film(
        [site.wall_outside[name] for name in WALL_NAMES],
        site.ambient,
        box_geometry(outside, case.up, open_faces),
        [LinkLabel(f"wall:{name}", "convection_outside") for name in WALL_NAMES],
    )


def _build_wall(wall: WallCase, inside: Vector, outside: Vector, site: Site) -> None:
    name, axis = wall.name, AXIS[wall.name]
    first, second = (other for other in range(3) if other != axis)
    inside_area = inside[first] * inside[second]
    outside_area = outside[first] * outside[second]
    owner = f"wall:{name}"
    builder = site.builder
    outer = builder.node(f"{name} wall outside")
    inner = builder.node(f"{name} wall inside")
    site.wall_outside[name], site.wall_inside[name] = outer, inner
    thickness = metres(wall.thickness_mm)
    through = wall.material.conductivity_w_per_mk * math.sqrt(inside_area * outside_area)
    builder.conduct(inner, outer, through / thickness, LinkLabel(owner, "through"))
    site.plates[name] = Plate(
        axes=(first, second),
        low=(0.0, 0.0, 0.0),
        size=inside,
        sheet_conductance=wall.material.in_plane_conductivity_w_per_mk * thickness,
    )
    _build_outside(wall, outer, outside_area, site)
    free = max(inside_area - site.covered.get(name, 0.0), 0.0)
    face = site.plane_face(inside, axis, -SIGN[name])
    builder.plate_film(inner, site.air, free, face, LinkLabel(owner, "convection_inside"))
    site.surfaces.append(
        InsideSurface(
            inner, free, wall.finish_inside.emissivity, LinkLabel(owner, "radiation_inside")
        )
    )


def _build_outside(wall: WallCase, outer: int, area: float, site: Site) -> None:
    """Join the outside of a wall to what it faces; its convection is that of the whole box."""
    owner = f"wall:{wall.name}"
    builder, mounting = site.builder, wall.mounting
    emissivity = wall.finish_outside.emissivity
    if mounting.kind == "open_air":
        up_cosine = SIGN[wall.name] * site.up[AXIS[wall.name]]
        to_sky = 0.0 if site.sky is None else float(sky_view_factor(up_cosine))
        label = LinkLabel(owner, "radiation_outside")
        builder.radiate(outer, site.radiant, area, area, emissivity, label, 1.0 - to_sky)
        if site.sky is not None:
            builder.radiate(outer, site.sky, area, area, emissivity, label, to_sky)
        absorbed = wall.finish_outside.solar_absorptivity * area * wall.sun_w_per_m2
        builder.heat(outer, absorbed, LinkLabel(owner, "sun"))
        return
    if mounting.kind == "insulated":
        return
    surface = builder.node(f"surface behind the {wall.name} wall", kelvin(mounting.surface_c))
    label = LinkLabel(owner, "mounting")
    if mounting.kind == "against_surface":
        gap = site.air_conductivity * area / metres(mounting.gap_mm)
        builder.conduct(outer, surface, gap, label)
        # Two parallel surfaces: the far one's own resistance stands for the space between.
        far = mounting.surface_emissivity * area
        builder.radiate(outer, surface, area, far, emissivity, label)
    else:
        builder.conduct(outer, surface, mounting.contact_w_per_m2k * area, label)


def _join_corner(one: WallCase, other: WallCase, inside: Vector, site: Site) -> None:
    """Join two walls along their common edge, half their thickness at each face."""
    edge_axis = 3 - AXIS[one.name] - AXIS[other.name]
    # A wall's length away from the edge runs along the other wall's normal.
    length_one, length_other = inside[AXIS[other.name]], inside[AXIS[one.name]]
    half_one, half_other = (
        wall.material.in_plane_conductivity_w_per_mk * metres(wall.thickness_mm) / 2
        for wall in (one, other)
    )
    conductance = float(
        corner_joint(length_one, length_other, half_one, half_other, inside[edge_axis])
    )
    label = LinkLabel(f"corner:{one.name}-{other.name}", "corner")
    for nodes in (site.wall_outside, site.wall_inside):
        site.builder.conduct(nodes[one.name], nodes[other.name], conductance, label)
