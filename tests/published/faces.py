"""Heat that every face inside a solved box gives off by convection: which side of a board it leaves."""

import numpy as np

from enclosure_check.findings.solved import Solved
from enclosure_check.network.inside_air import InsideAir


def heat_by_face(solved: Solved) -> dict[str, float]:
    """Heat to the air and straight across gaps [W], by the name of the face."""
    network = solved.network
    kind = next(each for each in network.kinds if isinstance(each, InsideAir))
    heat = kind.evaluate(solved.solution.rise, network.reference_k)[:, 0]
    films, straights = len(kind.cell), len(kind.cell_a)
    surfaces = len(kind.surfaces.names)
    of_film = kind.side_surface[kind.side]
    to_air = heat[:films] + heat[films : 2 * films]
    across = heat[2 * films : 2 * films + straights]
    total = np.bincount(of_film, to_air, surfaces)
    if straights:
        total += np.bincount(kind.pairs.first[kind.pair], across, surfaces)
        total -= np.bincount(kind.pairs.second[kind.pair], across, surfaces)
    return dict(zip(kind.surfaces.names, total.tolist(), strict=True))
