"""What becomes of the heat of links when the conductance of some of them is scaled."""

import numpy as np
import numpy.typing as npt

from enclosure_check.network.inside_air import InsideAir
from enclosure_check.network.links import FloatArray, LinkKind
from enclosure_check.network.vents import Vents
from enclosure_check.records import replace

# Relative step of free areas for a derivative.
AREA_STEP = 1e-4


def heat_by_scale(
    kind: LinkKind, rise: FloatArray, reference_k: FloatArray, chosen: npt.NDArray[np.bool_]
) -> FloatArray:
    """Derivative of all heat rates of a kind by a common factor on the chosen links, at one.

    A link's heat goes with its factor. Of the inside air, the streams follow: they carry on what
    films put into them. Of openings the factor is that of their free area, and the flow through
    all of them follows from the balance of mass.

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
    if isinstance(kind, Vents):
        return _by_free_area(kind, rise, reference_k, chosen, heat)
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


def _by_free_area(
    kind: Vents,
    rise: FloatArray,
    reference_k: FloatArray,
    chosen: npt.NDArray[np.bool_],
    heat: FloatArray,
) -> FloatArray:
    nodes = len(kind.air)
    by_opening = np.any(chosen[nodes - 1 :].reshape(-1, nodes), axis=1)
    factor = np.where(by_opening, 1.0 + AREA_STEP, 1.0)[:, None]
    wider = with_free_areas(kind, factor)
    change: FloatArray = (wider.evaluate(rise, reference_k)[:, 0] - heat) / AREA_STEP
    return change


def with_free_areas(kind: Vents, factor: FloatArray) -> Vents:
    """Give the same openings with their free areas multiplied, shape (o, 1)."""
    return replace(
        kind,
        area=kind.area * factor[kind.opening],
        radius=kind.radius * np.sqrt(factor),
        exchange_count=kind.exchange_count * factor,
    )
