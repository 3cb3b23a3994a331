"""Builds the parts: junction to case, board, wall and air."""

from enclosure_check.description.case import Case, PadCase, PartCase
from enclosure_check.description.frames import AXIS
from enclosure_check.network.links import LinkLabel
from enclosure_check.network.network import PartNodes
from enclosure_check.network.site import InsideSurface, Site, facing_wall, footprint
from enclosure_check.network.units import kelvin, metres, metres_3
from enclosure_check.physics.bodies import cuboid_gravity_function_tilted

# Resistances stated as zero are taken as this, far below what any part of a check can tell. [K/W]
LEAST_RESISTANCE = 1e-4
# Air under a body that stands on a board or wall without a stated joint.
# (common practice, no source) [m]
BODY_STAND_OFF = 1e-4


def build_parts(case: Case, site: Site) -> None:
    """Add the nodes of every part and join them."""
    for part in case.parts.values():
        _build_part(part, site)


def _build_part(part: PartCase, site: Site) -> None:
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
    board = None
    if part.place == "board":
        board = _join_board(part, junction, site)
    elif part.place == "wall":
        _join_wall(part, junction, site)
    _join_air(part, case, site)
    site.parts[part.name] = PartNodes(junction, case, board, site.air)


def _join_board(part: PartCase, junction: int, site: Site) -> int:
    """Join a part to its board; gives the node of the board under it."""
    owner = f"part:{part.name}"
    plate_node = site.board_sides[part.host, part.side]
    spot = site.spot(part.host, plate_node, metres_3(part.low_mm), metres_3(part.size_mm), owner)
    if part.theta_jb_k_per_w is not None:
        resistance = part.theta_jb_k_per_w
    else:
        resistance = (part.theta_jc_bottom_k_per_w or 0.0) + _joint(part, site)
    _conduct(site, junction, spot, resistance, LinkLabel(owner, "to_board"))
    return spot


def _join_wall(part: PartCase, junction: int, site: Site) -> None:
    """Join a part that sits on a wall to it."""
    owner, wall = f"part:{part.name}", facing_wall(part)
    # What touches the wall: the pad where there is one.
    foot = part if part.pad is None else part.pad
    spot = site.spot(
        wall, site.wall_inside[wall], metres_3(foot.low_mm), metres_3(foot.size_mm), owner
    )
    joint = _pad_resistance(part.pad) if part.pad is not None else _joint(part, site)
    resistance = (part.theta_jc_bottom_k_per_w or 0.0) + joint
    _conduct(site, junction, spot, resistance, LinkLabel(owner, "to_wall"))


def _join_air(part: PartCase, case: int, site: Site) -> None:
    """Join a part's free surface to the air, to radiation, and through its pad to a wall."""
    builder, owner = site.builder, f"part:{part.name}"
    size = metres_3(part.size_mm)
    whole = 2 * (size[0] * size[1] + size[1] * size[2] + size[2] * size[0])
    convection = LinkLabel(owner, "convection_inside")
    if part.place == "air":
        free = whole
        gravity = float(cuboid_gravity_function_tilted(size, site.up))
        builder.body_film(case, site.air, free, whole, gravity, convection)
    elif part.place == "wall":
        free = whole - footprint(part)
        mirrored = list(size)
        mirrored[AXIS[part.side]] *= 2
        gravity = float(cuboid_gravity_function_tilted(mirrored, site.up))
        builder.body_film(case, site.air, free, 2 * free, gravity, convection)
    else:
        free = whole - footprint(part)
        if part.pad is not None:
            free -= part.pad.area_mm2 * 1e-6
            _join_pad(part, part.pad, case, site)
        face = site.board_faces[part.host, part.side]
        builder.plate_film(case, site.air, free, face, convection)
    site.surfaces.append(
        InsideSurface(case, free, part.finish.emissivity, LinkLabel(owner, "radiation_inside"))
    )


def _join_pad(part: PartCase, pad: PadCase, case: int, site: Site) -> None:
    owner = f"part:{part.name}"
    wall_node = site.wall_inside[pad.wall]
    spot = site.spot(pad.wall, wall_node, metres_3(pad.low_mm), metres_3(pad.size_mm), owner)
    _conduct(site, case, spot, _pad_resistance(pad), LinkLabel(owner, "pad"))


def _pad_resistance(pad: PadCase) -> float:
    """Give the resistance of a pad and its contact faces [K/W]."""
    area_mm2 = pad.area_mm2
    bulk = metres(pad.distance_mm) / (pad.conductivity_w_per_mk * area_mm2 * 1e-6)
    return bulk + pad.contact_mm2k_per_w / area_mm2


def _joint(part: PartCase, site: Site) -> float:
    """Give the resistance from the bottom of a body to what it stands on [K/W]."""
    if part.bottom_contact_k_per_w is not None:
        return part.bottom_contact_k_per_w
    if part.theta_jc_bottom_k_per_w is not None and part.place == "board":
        return 0.0
    return BODY_STAND_OFF / (site.air_conductivity * footprint(part))


def _conduct(site: Site, a: int, b: int, resistance: float, label: LinkLabel) -> None:
    """Join two nodes by a resistance, one of nothing by the least there is."""
    site.builder.conduct(a, b, 1.0 / max(resistance, LEAST_RESISTANCE), label)
