"""Grey-diffuse thermal radiation: between surfaces of an enclosure, to surroundings, to the sky."""

from __future__ import annotations

import numpy as np
import numpy.typing as npt
from numpy.typing import ArrayLike

FloatArray = npt.NDArray[np.float64]

#: Stefan-Boltzmann constant [W/(m2 K4)] (CODATA 2018).
STEFAN_BOLTZMANN = 5.670374419e-8
#: Largest exchange area over the surface's own area: stands for "sees the mean radiant node
#: without any resistance" and costs at most 0.01 % [-].
EXCHANGE_LIMIT = 1e4
_BISECTIONS = 52
_ROUNDING = 1e-13


def mean_radiant_exchange_areas(areas: ArrayLike) -> FloatArray:
    """Exchange areas of flat or convex surfaces with their common mean radiant node.

    Solves ``x_i (1 - x_i / X) = A_i`` with ``X = sum x_i``. The star of the x_i is then equal to a
    mesh in which surface i sees surface j through ``x_i x_j / X``, no surface sees itself, and each
    one sees its own area in all. A surface sees the others in proportion to their x, whatever
    their arrangement.

    Parameters
    ----------
    areas : array_like, shape (n,)
        Areas, above zero [m2].

    Returns
    -------
    ndarray, shape (n,)
        Exchange areas x_i [m2], of ``x_i sigma (T_i**4 - T_mean**4)`` for black surfaces.

    Notes
    -----
    Solved by bisection in ``v = sqrt(1 - 4 A_max / X)`` of the largest surface, which takes the
    large root (v below zero) where it has nearly as much area as all the others together. From
    there on it cannot be flat or convex: it is taken as enclosing the others, with
    ``x_i = A_i`` for them and no resistance for itself (`EXCHANGE_LIMIT`), which is the limit of
    the solution and gives ``A eps sigma dT**4`` for a small body in a large enclosure. A single
    surface sees nothing: x = 0.

    Two parallel plates are exact; for a cube all view factors are 0.2 (exact: 0.1998 and 0.2000).
    What stands near or in front of what is not seen.

    References
    ----------
    J. A. Carroll, "An 'MRT method' of computing radiant energy exchange in rooms", 2nd Systems
    Simulation and Economics Analysis Conference, San Diego, 1980 (from memory).
    """
    area = np.asarray(areas, dtype=np.float64)
    if area.size < 2:
        return np.zeros_like(area)
    largest = int(np.argmax(area))
    share = np.delete(area, largest) / area[largest]
    exchange = np.empty_like(area)
    others = np.arange(area.size) != largest
    if share.sum() <= 1.0 + _ROUNDING and share.size > 1:
        exchange[others] = area[others]
        exchange[largest] = EXCHANGE_LIMIT * area[largest]
        return exchange

    low, high = -1.0, 1.0
    for _ in range(_BISECTIONS):
        v = 0.5 * (low + high)
        excess = (1.0 - v) + np.sum(1.0 - np.sqrt(1.0 - share * (1.0 - v * v))) - 2.0
        if excess >= -_ROUNDING:
            low = v
        else:
            high = v
    v = low
    total = 4.0 * area[largest] / max(1.0 - v * v, _ROUNDING)
    # x = X/2 (1 - sqrt(1 - s)) written without the cancellation of small s.
    root = np.sqrt(1.0 - share * (1.0 - v * v))
    exchange[others] = 2.0 * area[others] / (1.0 + root)
    exchange[largest] = min(0.5 * total * (1.0 - v), EXCHANGE_LIMIT * area[largest])
    return exchange


def grey_exchange(area: ArrayLike, exchange_area: ArrayLike, emissivity: ArrayLike) -> FloatArray:
    """Conductance of a grey surface to the mean radiant node, as an area.

    ``1 / (1/x + (1 - eps) / (eps A))``: the exchange area in series with the surface's own grey
    resistance, written so that it is exactly zero at ``eps = 0``.

    Parameters
    ----------
    area : array_like
        Area of the surface [m2].
    exchange_area : array_like
        Exchange area, `mean_radiant_exchange_areas`; the area itself for surroundings that are
        black or large [m2].
    emissivity : array_like
        Hemispherical emissivity, 0 to 1 [-].

    Returns
    -------
    ndarray
        Grey exchange area [m2], of ``F sigma (T**4 - T_mean**4)``; broadcast shape.
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
