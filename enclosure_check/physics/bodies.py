"""Free convection from whole bodies with air all round: cuboids and horizontal cylinders."""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
import numpy.typing as npt
from numpy.typing import ArrayLike

from enclosure_check.physics.air import air, rayleigh_number
from enclosure_check.physics.smooth import soft_rise

FloatArray = npt.NDArray[np.float64]

#: Conduction of a cube into still air all round, ``S sqrt(A)`` with S the shape factor over the
#: area (Yovanovich 1987) [-].
CUBE_CONDUCTION = 3.388


class BodyFilm(NamedTuple):
    """Film of a whole body; every field has the broadcast shape of the inputs."""

    coefficient: FloatArray
    """Mean film coefficient over the whole area [W/(m2 K)]."""
    rayleigh: FloatArray
    """Rayleigh number with the square root of the area [-]."""
    nusselt: FloatArray
    """Nusselt number with the square root of the area [-]."""
    length: FloatArray
    """Square root of the area [m]."""


def cuboid_gravity_function(length: ArrayLike, width: ArrayLike, height: ArrayLike) -> FloatArray:
    """Gravity function of a cuboid standing on one face.

    ``G = 2**(1/8) ((0.625 L**(4/3) W + H (L + W)**(4/3)) / (H W + H L + L W)**(7/6))**(3/4)``, the
    mean of its values with L and W taken either way round (the law does not say which of the two
    is meant; they differ by a few per cent for oblong bodies).

    Parameters
    ----------
    length, width : array_like
        The two horizontal edges [m].
    height : array_like
        The vertical edge [m].

    Returns
    -------
    ndarray
        G [-], broadcast shape; 0.985 for a cube.

    References
    ----------
    M. M. Yovanovich, "On the effect of shape, aspect ratio and orientation upon natural convection
    from isothermal bodies of complex shape", ASME HTD-82, 1987, 121-129.
    """
    a = np.asarray(length, dtype=np.float64)
    b = np.asarray(width, dtype=np.float64)
    h = np.asarray(height, dtype=np.float64)
    half_area = (h * b + h * a + a * b) ** (7.0 / 6.0)
    sides = h * (a + b) ** (4.0 / 3.0)
    one = ((0.625 * a ** (4.0 / 3.0) * b + sides) / half_area) ** 0.75
    other = ((0.625 * b ** (4.0 / 3.0) * a + sides) / half_area) ** 0.75
    return np.asarray(0.5 * 2.0**0.125 * (one + other))


def cuboid_gravity_function_tilted(dimensions: ArrayLike, up: ArrayLike) -> FloatArray:
    """Gravity function of a cuboid at any tilt.

    ``sum up_i**2 G_i`` with G_i the value with axis i vertical. The interpolation is ours: exact
    where an edge is vertical, a guess in between (Yovanovich 1987 gives 0.951 to 0.990 over the
    orientations of a cube, so at most a few per cent are at stake).

    Parameters
    ----------
    dimensions : array_like, shape (3,)
        Edges [m].
    up : array_like, shape (3,)
        Unit vector pointing up, along those edges [-].

    Returns
    -------
    ndarray
        G [-], no dimensions.

    References
    ----------
    As `cuboid_gravity_function`.
    """
    d = np.asarray(dimensions, dtype=np.float64)
    u = np.asarray(up, dtype=np.float64)
    values = cuboid_gravity_function(d[[1, 2, 0]], d[[2, 0, 1]], d)
    return np.asarray(np.sum(u * u * values) / np.sum(u * u))


def cuboid_nusselt(ra_sqrt_area: ArrayLike, pr: ArrayLike, g: ArrayLike) -> FloatArray:
    """Nusselt number of an isothermal cuboid with air all round, laminar.

    ``3.388 + F G Ra**(1/4)`` with ``F = 0.670 / (1 + (0.5/Pr)**(9/16))**(4/9)``; all with the
    square root of the whole area as length.

    Parameters
    ----------
    ra_sqrt_area : array_like
        Rayleigh number [-].
    pr : array_like
        Prandtl number [-].
    g : array_like
        Gravity function, `cuboid_gravity_function` [-].

    Returns
    -------
    ndarray
        Mean Nusselt number [-], broadcast shape.

    Notes
    -----
    Valid for laminar flow, ``0 <= Ra <= 1e8`` (from memory). The numerical experiments made for
    this project bear it out to 5e8 within -5 to +10 %. Without a temperature difference the
    conduction of a cube is left; an oblong body conducts a little better.

    References
    ----------
    As `cuboid_gravity_function`.
    """
    factor = 0.670 * (1.0 + (0.5 / np.asarray(pr, dtype=np.float64)) ** 0.5625) ** (-4.0 / 9.0)
    root = np.sqrt(np.sqrt(np.asarray(ra_sqrt_area, dtype=np.float64)))
    return np.asarray(CUBE_CONDUCTION + factor * np.asarray(g, dtype=np.float64) * root)


def cuboid_film(
    rise: ArrayLike,
    film_temperature: ArrayLike,
    pressure: ArrayLike,
    area: ArrayLike,
    g: ArrayLike,
) -> BodyFilm:
    """Film of a cuboid with air all round.

    `cuboid_nusselt` with ``L = sqrt(area)``. For a body flush on a wall give the area and the
    gravity function of the body doubled by its mirror image; the coefficient then holds for the
    part that is really there.

    Parameters
    ----------
    rise : array_like
        Body minus air temperature, either sign [K].
    film_temperature : array_like
        Mean of body and air temperature [K].
    pressure : array_like
        Absolute pressure [Pa].
    area : array_like
        Whole area of the body [m2].
    g : array_like
        Gravity function [-].

    Returns
    -------
    BodyFilm
        Fields of the broadcast shape.

    Notes
    -----
    Validity and source as `cuboid_nusselt`. Rises below `RISE_WIDTH_K` are regularised.
    """
    properties = air(film_temperature, pressure)
    length = np.sqrt(np.asarray(area, dtype=np.float64))
    ra = rayleigh_number(soft_rise(rise), length, properties)
    nusselt = cuboid_nusselt(ra, properties.prandtl, g)
    return BodyFilm(
        nusselt * properties.conductivity / length, ra, nusselt, np.broadcast_to(length, ra.shape)
    )


def horizontal_cylinder(ra: ArrayLike, pr: ArrayLike) -> FloatArray:
    """Nusselt number of a long isothermal horizontal cylinder.

    ``(0.60 + 0.387 Ra**(1/6) / (1 + (0.559/Pr)**(9/16))**(8/27))**2``.

    Parameters
    ----------
    ra : array_like
        Rayleigh number with the diameter [-].
    pr : array_like
        Prandtl number [-].

    Returns
    -------
    ndarray
        Mean Nusselt number with the diameter [-], broadcast shape.

    Notes
    -----
    Valid for ``1e-5 <= Ra <= 1e12``. Towards zero it goes to 0.36.

    References
    ----------
    S. W. Churchill, H. H. S. Chu, "Correlating equations for laminar and turbulent free convection
    from a horizontal cylinder", International Journal of Heat and Mass Transfer 18, 1975,
    1049-1053.
    """
    ra = np.asarray(ra, dtype=np.float64)
    factor = (1.0 + (0.559 / np.asarray(pr, dtype=np.float64)) ** 0.5625) ** (-8.0 / 27.0)
    root = 0.60 + 0.387 * factor * np.cbrt(np.sqrt(ra))
    return np.asarray(root * root)


_MORGAN_UP_TO = np.array([1e-2, 1e2, 1e4, 1e7])
_MORGAN_FACTOR = np.array([0.675, 1.02, 0.850, 0.480, 0.125])
_MORGAN_POWER = np.array([0.058, 0.148, 0.188, 0.250, 0.333])


def morgan_cylinder(ra: ArrayLike) -> FloatArray:
    """Nusselt number of a long horizontal cylinder by Morgan's table, for comparison.

    ``C Ra**n`` with C, n = 0.675, 0.058 below 1e-2; 1.02, 0.148 to 1e2; 0.850, 0.188 to 1e4;
    0.480, 0.250 to 1e7; 0.125, 0.333 to 1e12. It jumps by a few per cent at the changes.

    Parameters
    ----------
    ra : array_like
        Rayleigh number with the diameter [-].

    Returns
    -------
    ndarray
        Mean Nusselt number with the diameter [-], same shape.

    Notes
    -----
    Valid for ``1e-10 <= Ra <= 1e12``.

    References
    ----------
    V. T. Morgan, "The overall convective heat transfer from smooth circular cylinders", Advances in
    Heat Transfer 11, 1975, 199-264.
    """
    ra = np.asarray(ra, dtype=np.float64)
    row = np.searchsorted(_MORGAN_UP_TO, ra, side="left")
    return np.asarray(_MORGAN_FACTOR[row] * ra ** _MORGAN_POWER[row])
