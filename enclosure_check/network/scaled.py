"""What becomes of the heat of links when the conductance of some of them is scaled."""

import numpy as np
import numpy.typing as npt

from enclosure_check.network.inside_air import InsideAir
from enclosure_check.network.links import FloatArray, LinkKind
from enclosure_check.records import replace


def heat_by_scale(
    kind: LinkKind, rise: FloatArray, reference_k: FloatArray, chosen: npt.NDArray[np.bool_]
) -> FloatArray:
    """Derivative of all heat rates of a kind by a common factor on the chosen links, at one.

    A link's heat goes with its factor. Of the inside air, the streams follow: they carry on what
    films put into them.

    Parameters
    ----------
    kind
        The links.
    rise
        Rises of all nodes [K], shape (n, 1).
    reference_k
        Temperature they count from [K], shape (1,).
    chosen
        Which links are scaled, shape (m,).

    Returns
    -------
    ndarray
        [W], shape (m,).
    """
    heat = kind.evaluate(rise, reference_k)[:, 0]
    if not isinstance(kind, InsideAir):
        return np.where(chosen, heat, 0.0)
    films, straights = len(kind.cell), len(kind.cell_a)
    scaled = replace(
        kind,
        area=kind.area * (1.0 + chosen[:films, None]),
        straight_area=kind.straight_area * (1.0 + chosen[2 * films : 2 * films + straights, None]),
    )
    # Every link is linear in the areas, those of streams too as no film changes its direction:
    # twice the area less once is the derivative itself.
    change = scaled.evaluate(rise, reference_k)[:, 0] - heat
    change[2 * films + straights :] += np.where(chosen, heat, 0.0)[2 * films + straights :]
    return np.asarray(change)
