"""Builds the boards: one plate each, a node per side."""

from enclosure_check.description.case import BoardCase, Case
from enclosure_check.description.frames import SIGN, wall_pair
from enclosure_check.network.links import LinkLabel
from enclosure_check.network.site import InsideSurface, Plate, Site, side_key
from enclosure_check.network.units import metres, metres_3
from enclosure_check.physics.conduction import effective_conductivity

# Copper foil of boards. (textbook tables: 386 for pure copper)
COPPER_W_PER_MK = 386.0


def build_boards(case: Case, site: Site) -> None:
    """Add two nodes per board, one for each side, joined through its thickness."""
    for board in case.boards.values():
        _build_board(board, site)


def board_conductivities(board: BoardCase) -> tuple[float, float]:
    """Give the effective conductivities of a board along and through it [W/mK]."""
    laminate = board.laminate
    copper = [layer.thickness_um * 1e-6 for layer in board.copper]
    coverage = [layer.coverage_pct / 100 for layer in board.copper]
    thickness = [*copper, metres(board.size_mm[board.axis]) - sum(copper)]
    in_plane, through = (
        float(
            effective_conductivity(
                thickness,
                [*([COPPER_W_PER_MK] * len(copper)), fill],
                [*coverage, 1.0],
                fill,
            )[index]
        )
        for index, fill in enumerate(
            (laminate.in_plane_conductivity_w_per_mk, laminate.conductivity_w_per_mk)
        )
    )
    given = board.conductivity_in_plane_w_per_mk
    return (in_plane if given is None else given), through


def _build_board(board: BoardCase, site: Site) -> None:
    builder, owner = site.builder, f"board:{board.name}"
    size = metres_3(board.size_mm)
    first, second = (axis for axis in range(3) if axis != board.axis)
    area, thickness = size[first] * size[second], size[board.axis]
    # The rim convects and radiates too; half of it goes to each side.
    half_rim = (size[first] + size[second]) * thickness
    in_plane, through = board_conductivities(board)
    site.plates[board.name] = Plate(
        (first, second), metres_3(board.low_mm), size, in_plane * thickness
    )
    nodes = []
    for side in wall_pair(board.axis):
        node = builder.node(f"board {board.name}, {side} side")
        nodes.append(node)
        face = site.plane_face(size, board.axis, SIGN[side])
        site.board_sides[board.name, side] = node
        site.board_faces[board.name, side] = face
        bare = max(area - site.covered.get(side_key(board.name, side), 0.0), 0.0) + half_rim
        builder.plate_film(node, site.air, bare, face, LinkLabel(owner, "convection_inside"))
        site.surfaces.append(
            InsideSurface(node, bare, board.finish.emissivity, LinkLabel(owner, "radiation_inside"))
        )
        builder.heat(node, board.other_power_w / 2, LinkLabel(owner, "power"))
    builder.conduct(nodes[0], nodes[1], through * area / thickness, LinkLabel(owner, "through"))
