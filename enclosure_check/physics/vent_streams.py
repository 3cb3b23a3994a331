"""Outside air inside a box: how far it falls, and how much inside air it takes along."""

import numpy as np
from numpy.typing import ArrayLike

from enclosure_check.physics.smooth import FloatArray

# Inflow of a jet or plume over its velocity along it: Morton, Taylor & Turner (1956) give 0.093 for
# their even profile; 0.1 here (from memory).
ENTRAINMENT = 0.1
# Difference over which inflow decides between falling on and staying. [K]
SINKING_WIDTH_K = 0.2


def plume_growth(distance: ArrayLike, radius: ArrayLike) -> FloatArray:
    """Mass that a plume has taken up after a distance, over the mass it set out with.

    ``(1 + 6 e y / (5 b))^(5/3) - 1``: a round turbulent plume of entrainment coefficient e grows
    with the 5/3 power of the distance from its virtual origin, which lies 5 b / (6 e) behind an
    opening of radius b.

    Parameters
    ----------
    distance : array_like
        Distance y from the opening along gravity [m], zero or above.
    radius : array_like
        Radius b of the flow there [m], above zero.

    Returns
    -------
    ndarray
        Broadcast shape [-], zero at the opening.

    References
    ----------
    Morton, B. R., Taylor, G. & Turner, J. S. (1956), Proc. Roy. Soc. A 234, 1-23 (from memory).
    Turbulent and free of walls; in a small box neither holds fully. No accuracy is stated for that.
    """
    grown = 1.0 + 1.2 * ENTRAINMENT * np.asarray(distance) / np.asarray(radius)
    return np.asarray(np.cbrt(grown) ** 5 - 1.0)


def sinking_share(warmer: ArrayLike) -> FloatArray:
    """Share of a stream of outside air that falls on into air warmer than itself.

    ``x^2 / (x^2 + w^2)`` above zero, none below; w is 0.2 K, and the form is ours. It is one half
    at w, within 4 % of all at 1 K.

    Parameters
    ----------
    warmer : array_like
        Air below over the stream [K].

    Returns
    -------
    ndarray
        Same shape [-], 0 to 1.
    """
    square = np.maximum(np.asarray(warmer, dtype=np.float64), 0.0) ** 2
    return np.asarray(square / (square + SINKING_WIDTH_K**2))
