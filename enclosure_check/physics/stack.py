"""Hand formulas of flow by buoyancy through openings: what a thermal engineer checks against.

The network reckons its flows from the air it finds at every height; these closed forms are its
limits for air that is equally warm from bottom to top.
"""

from __future__ import annotations

import numpy as np
import numpy.typing as npt
from numpy.typing import ArrayLike

from enclosure_check.physics.air import GRAVITY

FloatArray = npt.NDArray[np.float64]


def area_in_series(first: ArrayLike, second: ArrayLike) -> FloatArray:
    """One opening that loses as much as two in series, ``1/A^2 = 1/A1^2 + 1/A2^2``.

    Parameters
    ----------
    first, second : array_like
        Areas of alike loss coefficient, or areas times discharge coefficient [m2].

    Returns
    -------
    ndarray
        Effective area [m2].
    """
    one, two = np.asarray(first, dtype=np.float64), np.asarray(second, dtype=np.float64)
    return np.asarray(one * two / np.sqrt(one * one + two * two))


def stack_flow(
    area: ArrayLike,
    discharge: ArrayLike,
    height: ArrayLike,
    difference: ArrayLike,
    temperature: ArrayLike,
) -> FloatArray:
    """Flow driven by a column of warm air, ``Q = C A sqrt(2 g h dT / T)``.

    Parameters
    ----------
    area : array_like
        Area of the opening, or `area_in_series` of two [m2].
    discharge : array_like
        Discharge coefficient; 0.60 to 0.70 in use [-].
    height : array_like
        Height between inlet and outlet [m].
    difference : array_like
        Air inside less air outside, zero or above [K].
    temperature : array_like
        Absolute temperature the densities are compared at: that inside, or the mean [K].

    Returns
    -------
    ndarray
        Volume flow [m3/s].

    References
    ----------
    BS 5925:1991, Code of practice for ventilation principles, for ``Q = Cd A (2 dp / rho)^0.5``.
    """
    drive = 2.0 * GRAVITY * np.asarray(height) * np.asarray(difference) / np.asarray(temperature)
    return np.asarray(np.asarray(discharge) * np.asarray(area) * np.sqrt(drive))


def one_opening_discharge(difference: ArrayLike) -> FloatArray:
    """Discharge coefficient of one opening through which air goes both ways.

    ``0.40 + 0.0045 |dT|``; it goes with `stack_flow` over the height from the middle of the opening
    to the level where pressures are equal.

    Parameters
    ----------
    difference : array_like
        Air inside less air outside, either sign [K].

    References
    ----------
    ASHRAE Handbook of Fundamentals, chapter on ventilation and infiltration (from memory); its
    range, from buildings, is some 20 K.
    """
    return np.asarray(0.40 + 0.0045 * np.abs(np.asarray(difference, dtype=np.float64)))
