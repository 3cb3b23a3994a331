"""Two-way exchange of air through a level opening with the lighter air below."""

from typing import NamedTuple

import numpy as np
from numpy.typing import ArrayLike

from enclosure_check.physics.air import GRAVITY
from enclosure_check.physics.smooth import FloatArray

# Density difference over density below which the root of the law is rounded [-]; 0.03 K of air.
ROUNDING = 1e-4
# Net flow that stops the exchange through a thin opening, over sqrt(g' D^5) (Epstein & Kenton 1989,
# from memory).
FLOODING = 0.55


class Exchange(NamedTuple):
    """Volume flows of one opening."""

    exchange: FloatArray
    """What goes up, and as much down [m3/s]."""
    flooding: FloatArray
    """Net flow at which only one way is left [m3/s]."""


def exchange_flow(diameter: ArrayLike, depth: ArrayLike, lightness: ArrayLike) -> Exchange:
    """Air that a level opening exchanges when the air below it is lighter.

    ``Q = q sqrt(g' D^5)``, ``g' = g (rho_above - rho_below) / rho``, with the whole range of
    ``l = L/D`` as ``q = 0.055 (1 + 400 l^3)^(1/6) / (1 + 0.00527 (1 + 400 l^3)^(1/2) (l^6 + 117
    l^2)^(3/4))^(1/3)``. Nothing where the air below is the heavier; the root is rounded.

    Parameters
    ----------
    diameter : array_like
        Diameter D of a round opening [m].
    depth : array_like
        Its length L along the flow [m].
    lightness : array_like
        Density of the air above less that below, over either [-].

    Returns
    -------
    Exchange
        Broadcast shape.

    References
    ----------
    Epstein, M. (1988), Buoyancy-driven exchange flow through small openings in horizontal
    partitions, J. Heat Transfer 110, 885-893: brine and water, 0.01 < L/D < 10, 10 % (form,
    constants and accuracy from memory). Epstein, M. & Kenton, M. A. (1989), J. Heat Transfer 111,
    980-987, for the flow that stops it (from memory).
    """
    size = np.asarray(diameter, dtype=np.float64)
    slender = np.asarray(depth, dtype=np.float64) / size
    cubed = 1.0 + 400.0 * slender**3
    factor = 0.055 * cubed ** (1 / 6)
    long = (slender**6 + 117.0 * slender**2) ** 0.75
    factor = factor / np.cbrt(1.0 + 0.00527 * np.sqrt(cubed) * long)
    light = np.maximum(np.asarray(lightness, dtype=np.float64), 0.0)
    root = light**2 / (light**2 + ROUNDING**2) ** 0.75
    whole = np.sqrt(GRAVITY * size**5) * root
    return Exchange(np.asarray(factor * whole), np.asarray(FLOODING * whole))
