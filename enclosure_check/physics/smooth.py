"""Functions that take the corners out of laws, so that a Newton iteration can pass over them."""

from __future__ import annotations

import numpy as np
import numpy.typing as npt
from numpy.typing import ArrayLike

FloatArray = npt.NDArray[np.float64]

#: Temperature difference below which a film law is deliberately altered [K].
#: At ten times this width the film coefficient is changed by less than 1 %, at a hundred times
#: by less than 0.01 %.
RISE_WIDTH_K = 0.01


def soft_abs(x: ArrayLike, width: float) -> FloatArray:
    """Absolute value with a rounded corner that stays above zero.

    ``sqrt(x**2 + width**2)``: even, smooth everywhere, equal to ``width`` at zero and larger than
    ``|x|`` by at most ``width**2 / (2 |x|)``.

    Parameters
    ----------
    x : array_like
        Any quantity.
    width : float
        Half-width of the rounding [unit of x], above zero.

    Returns
    -------
    ndarray
        Same shape as ``x`` [unit of x].
    """
    x = np.asarray(x, dtype=np.float64)
    return np.asarray(np.sqrt(x * x + width * width))


def soft_sign(x: ArrayLike, width: float) -> FloatArray:
    """Sign with a finite slope at zero.

    ``x / sqrt(x**2 + width**2)``: odd, smooth, zero at zero, within ``width**2 / (2 x**2)`` of the
    true sign.

    Parameters
    ----------
    x : array_like
        Any quantity.
    width : float
        Half-width of the transition [unit of x], above zero.

    Returns
    -------
    ndarray
        Same shape as ``x`` [-], between -1 and 1.
    """
    x = np.asarray(x, dtype=np.float64)
    return np.asarray(x / np.sqrt(x * x + width * width))


def soft_rise(rise: ArrayLike, width: float = RISE_WIDTH_K) -> FloatArray:
    """Size of a temperature difference, regularised for laws that go with its fourth root.

    ``|x| * (x**2 / (x**2 + width**2))**3.5``. It is zero at zero and grows there with the eighth
    power, so that its fourth root (the laminar film coefficient) grows with the square and has a
    finite derivative, and pure conduction is left at zero difference. Below ``|x|`` by a share of
    at most ``3.5 * (width / x)**2``; the fourth root by a quarter of that.

    Parameters
    ----------
    rise : array_like
        Temperature difference, either sign [K].
    width : float
        Half-width of the altered zone [K], above zero.

    Returns
    -------
    ndarray
        Same shape as ``rise`` [K], zero or above.
    """
    x = np.asarray(rise, dtype=np.float64)
    square = x * x
    ratio = square / (square + width * width)
    return np.abs(x) * (ratio * ratio * ratio * np.sqrt(ratio))


def smoothstep(x: ArrayLike) -> FloatArray:
    """Step from 0 at ``x <= 0`` to 1 at ``x >= 1`` with zero slope at both ends.

    ``3 x**2 - 2 x**3`` in between.

    Parameters
    ----------
    x : array_like
        Position in the step [-].

    Returns
    -------
    ndarray
        Same shape as ``x`` [-].
    """
    t = np.minimum(np.maximum(np.asarray(x, dtype=np.float64), 0.0), 1.0)
    return t * t * (3.0 - 2.0 * t)
