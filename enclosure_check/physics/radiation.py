"""Grey-diffuse thermal radiation: between surfaces of an enclosure, to surroundings, to the sky."""

from __future__ import annotations

import numpy as np
import numpy.typing as npt
from numpy.typing import ArrayLike

FloatArray = npt.NDArray[np.float64]

#: Stefan-Boltzmann constant [W/(m2 K4)] (CODATA 2018).
STEFAN_BOLTZMANN = 5.670374419e-8


def grey_exchange(area: ArrayLike, exchange_area: ArrayLike, emissivity: ArrayLike) -> FloatArray:
    """Conductance of a grey surface to what it exchanges with, as an area.

    ``1 / (1/x + (1 - eps) / (eps A))``: the exchange area in series with the surface's own grey
    resistance, written so that it is exactly zero at ``eps = 0``.

    Parameters
    ----------
    area : array_like
        Area of the surface [m2].
    exchange_area : array_like
        Exchange area; the area itself for surroundings that are black or large [m2].
    emissivity : array_like
        Hemispherical emissivity, 0 to 1 [-].

    Returns
    -------
    ndarray
        Grey exchange area [m2], of ``F sigma (T**4 - T_other**4)``; broadcast shape.
    """
    a = np.asarray(area, dtype=np.float64)
    x = np.asarray(exchange_area, dtype=np.float64)
    eps = np.asarray(emissivity, dtype=np.float64)
    return np.asarray(x * eps * a / (eps * a + x * (1.0 - eps)))


def grey_exchange_by_emissivity(
    area: ArrayLike, exchange_area: ArrayLike, emissivity: ArrayLike
) -> FloatArray:
    """Derivative of `grey_exchange` by the emissivity.

    ``x**2 A / (eps A + x (1 - eps))**2``.

    Parameters
    ----------
    area, exchange_area, emissivity : array_like
        As `grey_exchange`.

    Returns
    -------
    ndarray
        Derivative [m2], broadcast shape.
    """
    a = np.asarray(area, dtype=np.float64)
    x = np.asarray(exchange_area, dtype=np.float64)
    eps = np.asarray(emissivity, dtype=np.float64)
    ratio = x / (eps * a + x * (1.0 - eps))
    return np.asarray(ratio * ratio * a)


def radiation_coefficient(
    temperature_a: ArrayLike, temperature_b: ArrayLike, emissivity: ArrayLike = 1.0
) -> FloatArray:
    """Radiation coefficient between two temperatures.

    ``eps sigma (Ta**2 + Tb**2) (Ta + Tb)``, so that it times ``Ta - Tb`` is the exact exchange.

    Parameters
    ----------
    temperature_a, temperature_b : array_like
        Temperatures [K].
    emissivity : array_like
        Emissivity or grey exchange factor [-].

    Returns
    -------
    ndarray
        Coefficient [W/(m2 K)], broadcast shape.
    """
    a = np.asarray(temperature_a, dtype=np.float64)
    b = np.asarray(temperature_b, dtype=np.float64)
    eps = np.asarray(emissivity, dtype=np.float64)
    return np.asarray(STEFAN_BOLTZMANN * eps * (a * a + b * b) * (a + b))


def parallel_plates(
    temperature_a: ArrayLike,
    temperature_b: ArrayLike,
    emissivity_a: ArrayLike,
    emissivity_b: ArrayLike,
) -> FloatArray:
    """Heat flux between two large parallel grey plates.

    ``sigma (Ta**4 - Tb**4) / (1/eps_a + 1/eps_b - 1)``.

    Parameters
    ----------
    temperature_a, temperature_b : array_like
        Temperatures [K].
    emissivity_a, emissivity_b : array_like
        Emissivities, 0 to 1 [-].

    Returns
    -------
    ndarray
        Flux from a to b [W/m2], broadcast shape; zero if either emissivity is zero.
    """
    ea = np.asarray(emissivity_a, dtype=np.float64)
    eb = np.asarray(emissivity_b, dtype=np.float64)
    sum_ = ea + eb - ea * eb
    factor = ea * eb / np.where(sum_ > 0.0, sum_, 1.0)
    a = np.asarray(temperature_a, dtype=np.float64)
    b = np.asarray(temperature_b, dtype=np.float64)
    return np.asarray(radiation_coefficient(a, b, factor) * (a - b))


def sky_temperature_clear(air_temperature_k: ArrayLike) -> FloatArray:
    """Radiant temperature of a clear sky.

    ``0.0552 T**1.5``.

    Parameters
    ----------
    air_temperature_k : array_like
        Air temperature near the ground [K].

    Returns
    -------
    ndarray
        Sky temperature [K], same shape.

    Notes
    -----
    Clear nights, air of about 275 to 303 K; the humidity is not seen. Scatter about 5 K (from
    memory).

    References
    ----------
    W. C. Swinbank, "Long-wave radiation from clear skies", Quarterly Journal of the Royal
    Meteorological Society 89, 1963, 339-348 (from memory).
    """
    return np.asarray(0.0552 * np.asarray(air_temperature_k, dtype=np.float64) ** 1.5)


def sky_view_factor(up_cosine: ArrayLike) -> FloatArray:
    """View factor of a plane face to the sky above a level horizon.

    ``(1 + c) / 2``; the rest sees the ground.

    Parameters
    ----------
    up_cosine : array_like
        Cosine between the outward normal and up [-].

    Returns
    -------
    ndarray
        View factor [-], same shape: 1 looking up, 0.5 upright, 0 looking down.
    """
    return 0.5 + 0.5 * np.asarray(up_cosine, dtype=np.float64)
