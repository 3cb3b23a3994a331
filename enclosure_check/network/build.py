"""From a case to its network: sets up the surroundings and the air, then runs the builders."""

from enclosure_check.description.case import Case
from enclosure_check.network.boards import build_boards
from enclosure_check.network.grid import GridOptions
from enclosure_check.network.inside import build_inside_radiation
from enclosure_check.network.network import Network, Places
from enclosure_check.network.parts import build_parts
from enclosure_check.network.site import Site
from enclosure_check.network.walls import build_walls


def build_network(case: Case, options: GridOptions | None = None) -> Network:
    """Build the network of one case (one variant)."""
    site = Site.of(case, options or GridOptions())
    build_walls(case, site)
    build_boards(case, site)
    build_parts(case, site)
    build_inside_radiation(site)
    return site.builder.finish(
        Places(
            ambient=site.ambient,
            air=site.air,
            wall_outside=site.wall_outside,
            wall_inside=site.wall_inside,
            boards=site.boards,
            parts=site.parts,
        )
    )
