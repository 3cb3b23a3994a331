"""Builds the parts: junction to case, board, wall and air."""

from functools import partial

import numpy as np

from enclosure_check.description.case import Case, PadCase, PartCase
from enclosure_check.description.frames import AXIS, OPPOSITE, SIGN
from enclosure_check.network.features import Covers
from enclosure_check.network.links import LinkLabel
from enclosure_check.network.network import PartNodes
from enclosure_check.network.site import InsideSurface, Site, footprint
from enclosure_check.network.spots import Spot
from enclosure_check.network.units import kelvin, metres, metres_3
from enclosure_check.physics.bodies import cuboid_gravity_function_tilted

# Air under a body that stands on a board or wall without a stated joint.
# (common practice, no source) [m]
BODY_STAND_OFF = 1e-4


def build_parts(case: Case, site: Site, covers: Covers) -> None:
    """Add the nodes of every part and join them, to what lies over them too."""
    for part in case.parts.values():
        site.piece(("part", part.name), partial(_build_part, part, site, covers))


def _build_part(part: PartCase, site: Site, covers: Covers) -> None:
    builder, owner = site.builder, f"part:{part.name}"
    junction = builder.node(f"{part.name} junction")
    doubling = part.power_doubling_k
    builder.heat(
        junction,
        part.power_w,
        LinkLabel(owner, "power"),
        stated_at_k=kelvin(part.power_at_c),
        slope=part.power_slope_pct_per_k / 100,
        doublings=0.0 if doubling is None else 1.0 / doubling,
    )
    case = builder.behind(
        junction,
        part.theta_jc_top_k_per_w or 0.0,
        f"{part.name} case",
        LinkLabel(owner, "junction_to_case"),
    )
    board: Spot | None = None
    if part.place == "board":
        board = _join_board(part, junction, site)
    elif part.place == "wall":
        _join_wall(part, junction, site)
    _join_air(part, case, site, covers)
    under = covers.can_over(part)
    site.parts[part.name] = PartNodes(
        junction,
        case,
        None if board is None else board.node,
        site.air_at(metres_3(part.centre_mm), f"air at {part.name}") if under is None else under[1],
        0.0 if board is None else board.peak_k_per_w,
    )


def _join_board(part: PartCase, junction: int, site: Site) -> Spot:
    """Join a part to its board; gives the spot of the board under it."""
    resistance = sum(resistances(part, site.air_conductivity).values())
    low, size = metres_3(part.low_mm), metres_3(part.size_mm)
    label = LinkLabel(f"part:{part.name}", "to_board")
    return site.join(junction, resistance, part.host, site.boards[part.host], low, size, label)


def _join_wall(part: PartCase, junction: int, site: Site) -> None:
    """Join a part that sits on a wall to it."""
    wall = OPPOSITE[part.side]
    resistance = sum(resistances(part, site.air_conductivity).values())
    # What touches the wall: the pad where there is one.
    foot = part if part.pad is None else part.pad
    low, size = metres_3(foot.low_mm), metres_3(foot.size_mm)
    label = LinkLabel(f"part:{part.name}", "to_wall")
    site.join(junction, resistance, wall, site.wall_inside[wall], low, size, label)


def resistances(part: PartCase, air_conductivity: float) -> dict[str, float]:
    """Give what lies in series between a junction and its board or wall, by name [K/W].

    The names are the keys that state them; ``joint`` is the air under a body where none does,
    ``pad`` and ``pad_contact`` are the pad of a part on a wall.
    """
    if part.place == "board" and part.theta_jb_k_per_w is not None:
        return {"theta_jb_k_per_w": part.theta_jb_k_per_w}
    series = {"theta_jc_bottom_k_per_w": part.theta_jc_bottom_k_per_w or 0.0}
    if part.place == "wall" and part.pad is not None:
        return series | pad_resistances(part.pad)
    if part.bottom_contact_k_per_w is not None:
        series["bottom_contact_k_per_w"] = part.bottom_contact_k_per_w
    elif part.theta_jc_bottom_k_per_w is None or part.place != "board":
        series["joint"] = BODY_STAND_OFF / (air_conductivity * footprint(part))
    return series


def pad_resistances(pad: PadCase) -> dict[str, float]:
    """Give the resistance of a pad and that of its contact faces [K/W]."""
    area_mm2 = pad.area_mm2
    bulk = metres(pad.distance_mm) / (pad.conductivity_w_per_mk * area_mm2 * 1e-6)
    return {"pad": bulk, "pad_contact": pad.contact_mm2k_per_w / area_mm2}


def _join_air(part: PartCase, case: int, site: Site, covers: Covers) -> None:
    """Join a part's free surface to the air and to radiation, the rest to what covers it."""
    owner, size = f"part:{part.name}", metres_3(part.size_mm)
    whole = 2 * (size[0] * size[1] + size[1] * size[2] + size[2] * size[0])
    convection = LinkLabel(owner, "convection_inside")
    if part.place == "air":
        free = whole
        patch, shares = np.array([site.patches.add_body(metres_3(part.low_mm), size)]), np.ones(1)
        gravity = float(cuboid_gravity_function_tilted(size, site.up))
        face = site.plane_face(size, 2, 1)
        low = metres_3(part.low_mm)
        site.convect_body(case, free, low, size, face, convection, (whole, gravity))
    elif part.place == "wall":
        free = whole - footprint(part)
        wall = OPPOSITE[part.side]
        patch, shares = site.patches.under(wall, wall, metres_3(part.low_mm), size)
        mirrored = list(size)
        mirrored[AXIS[part.side]] *= 2
        gravity = float(cuboid_gravity_function_tilted(mirrored, site.up))
        face, low = site.plane_face(size, AXIS[part.side], SIGN[part.side]), metres_3(part.low_mm)
        surface = site.convect_body(case, free, low, size, face, convection, (2 * free, gravity))
        top = footprint(part)
        site.add_top(surface, case, top, AXIS[part.side], SIGN[part.side], low, size)
    else:
        free = whole - footprint(part)
        if part.pad is not None:
            free -= part.pad.area_mm2 * 1e-6
            _join_pad(part, part.pad, case, site)
        left = covers.join(part, case)
        free *= left
        if free == 0.0:
            return
        patch, shares = site.patches.under(part.host, part.side, metres_3(part.low_mm), size)
        face = site.board_faces[part.host, part.side]
        low = metres_3(part.low_mm)
        surface = site.convect_body(case, free, low, size, face, convection)
        if part.pad is None:
            top = left * footprint(part)
            site.add_top(surface, case, top, AXIS[part.side], SIGN[part.side], low, size)
    site.surfaces.append(
        InsideSurface(
            np.full(len(patch), case),
            patch,
            free * shares,
            part.finish.emissivity,
            LinkLabel(owner, "radiation_inside"),
        )
    )


def _join_pad(part: PartCase, pad: PadCase, case: int, site: Site) -> None:
    owner = f"part:{part.name}"
    resistance = sum(pad_resistances(pad).values())
    low, size = metres_3(pad.low_mm), metres_3(pad.size_mm)
    label = LinkLabel(owner, "pad")
    site.join(case, resistance, pad.wall, site.wall_inside[pad.wall], low, size, label)
