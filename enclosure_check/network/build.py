"""From a case to its network: sets up the surroundings and the air, then runs the builders."""

from functools import partial

import numpy as np

from enclosure_check.description.case import Case
from enclosure_check.network.boards import build_boards
from enclosure_check.network.cables import build_cables
from enclosure_check.network.features import build_features
from enclosure_check.network.grid import GridOptions
from enclosure_check.network.inside import build_inside_radiation
from enclosure_check.network.links import LinkLabel
from enclosure_check.network.network import Network, Places
from enclosure_check.network.parts import build_parts
from enclosure_check.network.site import Site
from enclosure_check.network.walls import build_walls

# Mixing of air that a fan stirs, over what its films carry: one temperature to a thousandth.
STIRRED = 1e4


def build_network(case: Case, options: GridOptions | None = None) -> Network:
    """Build the network of one case (one variant)."""
    return build_on(Site.of(case, options or GridOptions()), case)


def build_on(site: Site, case: Case) -> Network:
    """Build the network of a case on a site that has just been set up for it."""
    build_walls(case, site)
    build_boards(case, site)
    covers = build_features(case, site)
    build_parts(case, site, covers)
    site.piece(("cables", None), partial(build_cables, case, site))
    site.settle()
    site.spots.join(site.piece)
    site.settle()
    build_inside_radiation(site)
    build_inside_air(site)
    if case.vented:
        from enclosure_check.network.openings import build_openings

        site.piece(("openings", None), partial(build_openings, case, site))
    site.settle()
    network = site.builder.finish(
        Places(
            ambient=site.ambient,
            air=site.air,
            air_nodes=site.air_nodes,
            air_heights=np.linspace(0.0, site.air_site.height, len(site.air_nodes)),
            wall_outside=site.wall_outside,
            wall_inside=site.wall_inside,
            boards=site.boards,
            parts=site.parts,
            grids=site.grids,
            spots=site.spots,
        )
    )
    return network.stirred(STIRRED) if case.stirred else network


def build_inside_air(site: Site) -> None:
    """Join every film inside to the air, and the air to itself."""
    builder = site.builder
    labels = {role: builder.label(LinkLabel("inside", role)) for role in ("lift", "mixing")}
    builder.add(
        site.air_site.build(site.air_nodes, builder.reference_k, builder.pressure_pa, labels)
    )
