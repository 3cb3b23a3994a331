"""Builds the walls: through and along them, outside to the surroundings, inside to the air."""

import math
from functools import partial
from itertools import combinations
from typing import TYPE_CHECKING

import numpy as np

from enclosure_check.description.case import Case, WallCase
from enclosure_check.description.frames import AXIS, SIGN, Vector
from enclosure_check.description.names import WALL_NAMES, WallName
from enclosure_check.network.air import channel_shape
from enclosure_check.network.covering import bare_wall
from enclosure_check.network.grid import PlateGrid, cell_counts, shared_grid
from enclosure_check.network.links import IntArray, LinkLabel
from enclosure_check.network.network import PlateNodes
from enclosure_check.network.outer_gap import OuterGap
from enclosure_check.network.site import InsideSurface, Site
from enclosure_check.network.units import kelvin, metres, metres_3
from enclosure_check.physics.box import box_geometry
from enclosure_check.physics.radiation import sky_view_factor

if TYPE_CHECKING:
    from enclosure_check.physics.wind import Wind

# A wall that conducts better than this through its thickness is taken as even across it: films of
# 20 W/m2K leave a difference below 1 % of theirs.
EVEN_WALL_W_PER_M2K = 2000.0


def build_walls(case: Case, site: Site) -> None:
    """Add the cells of the walls, outside and inside, and everything that joins them."""
    inside, outside = metres_3(case.inside_mm), metres_3(case.outside_mm)
    for name in WALL_NAMES:
        site.piece(("wall", name), partial(_build_wall, case, name, inside, outside, site))
    site.piece(("corners", None), partial(_join_corners, site))
    site.piece(("outside", None), partial(_build_film, case, outside, site))


def _join_corners(site: Site) -> None:
    for one, other in combinations(WALL_NAMES, 2):
        if AXIS[one] != AXIS[other]:
            _join_corner(one, other, site)


def _build_film(case: Case, outside: Vector, site: Site) -> None:
    """Join all outer faces that are open to the air around."""
    open_faces = [case.walls[name].mounting.kind == "open_air" for name in WALL_NAMES]
    outer = [site.wall_outside[name] for name in WALL_NAMES]
    site.builder.box_film(
        [plate.cells for plate in outer],
        [plate.mean for plate in outer],
        site.ambient,
        box_geometry(outside, case.up, open_faces),
        [LinkLabel(f"wall:{name}", "convection_outside") for name in WALL_NAMES],
        _wind(case, outside),
    )


def _wind(case: Case, outside: Vector) -> "Wind | None":
    """Give the wind past the box; None in still air."""
    speed, side = case.surroundings.wind_m_per_s, case.surroundings.wind_from
    if speed <= 0:
        return None
    from enclosure_check.physics.wind import wind_past_box

    return wind_past_box(outside, speed, None if side is None else AXIS[side])


def _build_wall(case: Case, name: WallName, inside: Vector, outside: Vector, site: Site) -> None:
    wall, axis, builder = case.walls[name], AXIS[name], site.builder
    first, second = (other for other in range(3) if other != axis)
    inside_area = inside[first] * inside[second]
    outside_area = outside[first] * outside[second]
    owner = f"wall:{name}"
    thickness = metres(wall.thickness_mm)
    options = site.options
    counts = cell_counts(inside[first], inside[second], options.wall_cells)
    sheet = wall.material.in_plane_conductivity_w_per_mk * thickness
    sheets = np.full((2, *counts), sheet)
    grid = shared_grid((first, second), (0.0, 0.0, 0.0), inside, counts, sheets)
    through = wall.material.conductivity_w_per_mk * math.sqrt(inside_area * outside_area)
    outer = site.plate(f"{name} wall outside", grid)
    even = through / thickness / inside_area > EVEN_WALL_W_PER_M2K
    inner = outer if even else site.plate(f"{name} wall inside", grid)
    site.grids[name] = grid
    site.wall_outside[name], site.wall_inside[name] = outer, inner
    for plate in (outer, inner):
        site.conduct_along(plate.cells, grid, 0.5, LinkLabel(owner, "along"))
    if not even:
        each = through / thickness / inner.cells.size
        builder.conduct(inner.cells, outer.cells, each, LinkLabel(owner, "through"))
    _build_outside(wall, outer, outside_area, site)
    bare = bare_wall(case, name, grid)
    face = site.plane_face(inside, axis, -SIGN[name])
    at = 0.0 if SIGN[name] < 0 else inside[axis]
    patch = site.patches.add_face(name, name, grid, axis, -SIGN[name], at)
    site.air_site.add_plate(
        inner,
        grid,
        axis,
        -SIGN[name],
        at,
        bare,
        face,
        f"wall {name} inside",
        builder.label(LinkLabel(owner, "convection_inside")),
        is_board=False,
        size=inside,
    )
    site.surfaces.append(
        InsideSurface(
            inner.cells,
            patch,
            bare,
            wall.finish_inside.emissivity,
            LinkLabel(owner, "radiation_inside"),
        )
    )


def _build_outside(wall: WallCase, outer: PlateNodes, area: float, site: Site) -> None:
    """Join the outside of a wall to what it faces; its convection is that of the whole box."""
    owner = f"wall:{wall.name}"
    builder, mounting = site.builder, wall.mounting
    emissivity = wall.finish_outside.emissivity
    cells, cell = outer.cells, area / outer.cells.size
    if mounting.kind == "open_air":
        up_cosine = SIGN[wall.name] * site.up[AXIS[wall.name]]
        to_sky = 0.0 if site.sky is None else float(sky_view_factor(up_cosine))
        label = LinkLabel(owner, "radiation_outside")
        builder.radiate(cells, site.radiant, cell, cell, emissivity, label, 1.0 - to_sky)
        if site.sky is not None:
            builder.radiate(cells, site.sky, cell, cell, emissivity, label, to_sky)
        absorbed = wall.finish_outside.solar_absorptivity * cell * wall.sun_w_per_m2
        builder.heat(cells, absorbed, LinkLabel(owner, "sun"))
        return
    if mounting.kind == "insulated":
        return
    label = LinkLabel(owner, "mounting")
    if mounting.kind in ("against_surface", "neighbour"):
        _build_gap(wall, outer, area, site)
    elif mounting.contact_w_per_m2k > 0 and mounting.surface_c is not None:
        surface = builder.node(f"surface behind the {wall.name} wall", kelvin(mounting.surface_c))
        builder.conduct(cells, surface, mounting.contact_w_per_m2k * cell, label)


def _build_gap(wall: WallCase, outer: PlateNodes, area: float, site: Site) -> None:
    """Join the outside of a wall to a surface across a gap, and to the air around the gap."""
    builder, mounting = site.builder, wall.mounting
    cells, cell = outer.cells.ravel(), area / outer.cells.size
    if mounting.surface_c is None:
        # A neighbour as warm as the wall: nothing passes to it.
        surface = outer.mean
    else:
        surface = builder.node(f"surface behind the {wall.name} wall", kelvin(mounting.surface_c))
        # Two parallel surfaces: the far one's own resistance stands for the space between.
        far = mounting.surface_emissivity * cell
        label = LinkLabel(f"wall:{wall.name}", "mounting")
        builder.radiate(cells, surface, cell, far, wall.finish_outside.emissivity, label)
    axis, sign = AXIS[wall.name], SIGN[wall.name]
    grid, width = site.grids[wall.name], metres(mounting.gap_mm)
    face = site.plane_face(grid.size, axis, sign)
    length, gravity = channel_shape(grid.size, site.up, axis, width)
    owner = f"wall:{wall.name}"
    rows = [builder.label(LinkLabel(owner, role)) for role in ("convection_outside", "mounting")]
    ends = (site.ambient, surface)
    builder.add(
        OuterGap(
            a=np.tile(cells, 2),
            b=np.repeat(np.array(ends, dtype=np.intp), cells.size),
            label=np.repeat(np.array(rows, dtype=np.intp), cells.size),
            nodes=np.array([outer.mean, surface, site.ambient], dtype=np.intp),
            area=np.full((2 * cells.size, 1), cell),
            width=width,
            length=length,
            gravity=gravity,
            closed=float(mounting.closed),
            fall_length=face.fall_length,
            area_perimeter_length=face.area_perimeter_length,
            up_cosine=face.up_cosine,
            pressure_pa=builder.pressure_pa,
        )
    )


def _join_corner(one: WallName, other: WallName, site: Site) -> None:
    """Join two walls along their common edge, cell by cell, half their thickness at each face."""
    edge_axis = 3 - AXIS[one] - AXIS[other]
    label = LinkLabel(f"corner:{one}-{other}", "corner")
    grids = site.grids[one], site.grids[other]
    # Half a cell of either wall lies between a cell's node and the edge.
    half = [
        grid.steps[grid.axes.index(AXIS[beyond])] / 2
        for grid, beyond in zip(grids, (other, one), strict=True)
    ]
    edges = [grid.edges[grid.axes.index(edge_axis)] for grid in grids]
    shared = np.maximum(
        np.minimum(edges[0][1:, None], edges[1][None, 1:])
        - np.maximum(edges[0][:-1, None], edges[1][None, :-1]),
        0.0,
    )
    touching = np.nonzero(shared > 0)
    sheets = [float(grid.sheet[0, 0, 0]) / 2 for grid in grids]
    conductance = shared[touching] / (half[0] / sheets[0] + half[1] / sheets[1])
    for faces in (site.wall_outside, site.wall_inside):
        rows = [
            edge_cells(faces[wall].cells, grid, AXIS[beyond], SIGN[beyond])
            for wall, grid, beyond in (
                (one, grids[0], other),
                (other, grids[1], one),
            )
        ]
        site.builder.conduct(rows[0][touching[0]], rows[1][touching[1]], conductance, label)


def edge_cells(cells: IntArray, grid: PlateGrid, axis: int, sign: int) -> IntArray:
    """Give the row of cells along the edge that lies at one end of an axis."""
    along = np.moveaxis(cells, grid.axes.index(axis), 0)
    return np.asarray(along[0 if sign < 0 else -1])
