"""The inside of a box as its builders see it, and its convection alone.

Import it as ``from support.inside import air_site`` (``tests`` is on the path).
"""

from dataclasses import replace

import numpy as np
from support.cases import COARSE, Data, case_of

from enclosure_check.description.case import Case
from enclosure_check.network.boards import build_boards
from enclosure_check.network.features import build_features
from enclosure_check.network.grid import GridOptions
from enclosure_check.network.inside_air import InsideAir
from enclosure_check.network.network import Network
from enclosure_check.network.parts import build_parts
from enclosure_check.network.site import Site
from enclosure_check.network.walls import build_walls


def site_of(document: Data | Case, options: GridOptions = COARSE) -> Site:
    """Everything a network is built from, before radiation and air are joined."""
    case = document if isinstance(document, Case) else case_of(document)
    site = Site.of(case, options)
    build_walls(case, site)
    build_boards(case, site)
    build_parts(case, site, build_features(case, site))
    return site


def inside_air(network: Network) -> InsideAir:
    """The convection inside, the one link kind that all of it is."""
    (found,) = (kind for kind in network.kinds if isinstance(kind, InsideAir))
    return found


def roles(network: Network, kind: InsideAir) -> np.ndarray:
    """What each of its links does, by the name of its label."""
    return np.array([network.labels[label].role for label in kind.label])


def held(network: Network, free: np.ndarray, rise: np.ndarray) -> Network:
    """The network with all nodes but the free ones held at given rises [K]."""
    fixed = np.ones(network.size, dtype=bool)
    fixed[free] = False
    return replace(
        network, fixed=fixed, fixed_rise=np.where(fixed[:, None], rise, 0.0).astype(float)
    )
