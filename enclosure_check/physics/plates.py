"""Free convection from plane faces: vertical, horizontal and at any tilt, warm or cold."""

from __future__ import annotations

import math
from typing import NamedTuple

import numpy as np
import numpy.typing as npt
from numpy.typing import ArrayLike

from enclosure_check.physics.air import GRAVITY, Air, air
from enclosure_check.physics.smooth import smoothstep, soft_abs, soft_rise

FloatArray = npt.NDArray[np.float64]
IntArray = npt.NDArray[np.intp]

#: Vertical plate: laminar up to the first, turbulent law from the second Rayleigh number on [-].
TRANSITION_FROM, TRANSITION_TO = 1e9, 1e10
#: Conduction from one side of an isothermal disc into a half-space, Nu with L = area / perimeter.
#: The disc gives 4 k r T, so h = 4 k / (pi r), and with L = r / 2 the Nusselt number is 2 / pi.
DISC_CONDUCTION = 2.0 / math.pi
#: Law codes of `PlateFilm.law`, in the order of `PLATE_LAWS` of the registry.
VERTICAL, HOT_SIDE_UP, HOT_SIDE_DOWN = 0, 1, 2
_UP_FLOOR, _UP_SLOPE = DISC_CONDUCTION**4, 0.54**4
_DOWN_FLOOR, _DOWN_SLOPE = DISC_CONDUCTION**5, 0.52**5


class PlateFilm(NamedTuple):
    """Film of a plane face; every field has the broadcast shape of the inputs."""

    coefficient: FloatArray
    """Film coefficient [W/(m2 K)]."""
    rayleigh: FloatArray
    """Rayleigh number of the dominating law, with the share of gravity it uses [-]."""
    nusselt: FloatArray
    """Nusselt number ``h L / k`` of the film [-]."""
    length: FloatArray
    """Characteristic length of the dominating law [m]."""
    law: IntArray
    """Dominating law: 0 vertical, 1 hot side up, 2 hot side down (for a warm face)."""


def churchill_chu(ra: ArrayLike, pr: ArrayLike) -> FloatArray:
    """Nusselt number of an isothermal vertical plate, laminar and turbulent.

    ``(0.825 + 0.387 Ra**(1/6) / (1 + (0.492/Pr)**(9/16))**(8/27))**2``.

    Parameters
    ----------
    ra : array_like
        Rayleigh number with the height [-].
    pr : array_like
        Prandtl number [-].

    Returns
    -------
    ndarray
        Mean Nusselt number with the height [-], broadcast shape.

    Notes
    -----
    Valid for ``Ra <= 1e12``, any Prandtl number. Towards zero it goes to 0.68.

    References
    ----------
    S. W. Churchill, H. H. S. Chu, "Correlating equations for laminar and turbulent free convection
    from a vertical plate", International Journal of Heat and Mass Transfer 18, 1975, 1323-1329,
    equation 9.
    """
    ra = np.asarray(ra, dtype=np.float64)
    factor = (1.0 + (0.492 / np.asarray(pr, dtype=np.float64)) ** 0.5625) ** (-8.0 / 27.0)
    root = 0.825 + 0.387 * factor * np.cbrt(np.sqrt(ra))
    return np.asarray(root * root)


def churchill_chu_laminar(ra: ArrayLike, pr: ArrayLike) -> FloatArray:
    """Nusselt number of an isothermal vertical plate, laminar.

    ``0.68 + 0.670 Ra**(1/4) / (1 + (0.492/Pr)**(9/16))**(4/9)``.

    Parameters
    ----------
    ra : array_like
        Rayleigh number with the height [-].
    pr : array_like
        Prandtl number [-].

    Returns
    -------
    ndarray
        Mean Nusselt number with the height [-], broadcast shape.

    Notes
    -----
    Valid for ``Ra <= 1e9``, any Prandtl number.

    References
    ----------
    As `churchill_chu`.
    """
    ra = np.asarray(ra, dtype=np.float64)
    factor = 0.670 * (1.0 + (0.492 / np.asarray(pr, dtype=np.float64)) ** 0.5625) ** (-4.0 / 9.0)
    return np.asarray(0.68 + factor * np.sqrt(np.sqrt(ra)))


def vertical_plate(ra: ArrayLike, pr: ArrayLike) -> FloatArray:
    """Nusselt number of an isothermal vertical plate over the whole range.

    The laminar law up to Ra = 1e9, the full law from 1e10, and between them
    ``Nu_laminar**(1 - t) Nu_full**t`` with ``t = smoothstep(log10 Ra - 9)``. The blend is ours: the
    authors' laminar law ends 25 % below their full law at 1e9, and a jump would leave heat rates
    that no temperature can give.

    Parameters
    ----------
    ra : array_like
        Rayleigh number with the height [-].
    pr : array_like
        Prandtl number [-].

    Returns
    -------
    ndarray
        Mean Nusselt number with the height [-], broadcast shape.

    Notes
    -----
    Valid for ``Ra <= 1e12``. Heat flow rises with the temperature difference throughout.

    References
    ----------
    As `churchill_chu`.
    """
    ra = np.asarray(ra, dtype=np.float64)
    nusselt = churchill_chu_laminar(ra, pr)
    if ra.size == 0 or not ra.max() > TRANSITION_FROM:
        return nusselt
    share = smoothstep(np.log10(np.maximum(ra, TRANSITION_FROM)) - 9.0)
    return np.asarray(nusselt * (churchill_chu(ra, pr) / nusselt) ** share)


def hot_side_up_laminar(ra: ArrayLike) -> FloatArray:
    """Nusselt number of a horizontal plate, warm face up or cold face down, laminar law.

    ``((2/pi)**4 + 0.54**4 Ra)**(1/4)``: the law ``0.54 Ra**(1/4)`` with the conduction of a disc
    into a half-space as its floor. The floor adds 0.005 % at Ra = 1e4.

    Parameters
    ----------
    ra : array_like
        Rayleigh number with ``L = area / perimeter`` [-].

    Returns
    -------
    ndarray
        Mean Nusselt number with ``L = area / perimeter`` [-], same shape.

    Notes
    -----
    Law valid for ``1e4 <= Ra <= 1e7``.

    References
    ----------
    J. R. Lloyd, W. R. Moran, "Natural convection adjacent to horizontal surface of various
    planforms", Journal of Heat Transfer 96, 1974, 443-447.
    """
    return np.sqrt(np.sqrt(_UP_FLOOR + _UP_SLOPE * np.asarray(ra, dtype=np.float64)))


def hot_side_up(ra: ArrayLike) -> FloatArray:
    """Nusselt number of a horizontal plate, warm face up or cold face down.

    The larger of ``0.54 Ra**(1/4)`` (with a conduction floor, see `hot_side_up_laminar`) and
    ``0.15 Ra**(1/3)``. The two cross at Ra = 4.7e6, below the 1e7 at which the authors change over;
    taking the larger one is continuous and adds at most 6.5 %, at 1e7.

    Parameters
    ----------
    ra : array_like
        Rayleigh number with ``L = area / perimeter`` [-].

    Returns
    -------
    ndarray
        Mean Nusselt number with ``L = area / perimeter`` [-], same shape.

    Notes
    -----
    Valid for ``1e4 <= Ra <= 1e11``.

    References
    ----------
    As `hot_side_up_laminar`; W. H. McAdams, Heat Transmission, 3rd ed., 1954.
    """
    ra = np.asarray(ra, dtype=np.float64)
    return np.asarray(np.maximum(hot_side_up_laminar(ra), 0.15 * np.cbrt(ra)))


def hot_side_down(ra: ArrayLike) -> FloatArray:
    """Nusselt number of a horizontal plate, warm face down or cold face up.

    ``((2/pi)**5 + 0.52**5 Ra)**(1/5)``: the law ``0.52 Ra**(1/5)`` with the conduction of a disc
    into a half-space as its floor. The floor adds 0.005 % at Ra = 1e4.

    Parameters
    ----------
    ra : array_like
        Rayleigh number with ``L = area / perimeter`` [-].

    Returns
    -------
    ndarray
        Mean Nusselt number with ``L = area / perimeter`` [-], same shape.

    Notes
    -----
    Law valid for ``1e4 <= Ra <= 1e9``.

    References
    ----------
    G. D. Raithby, K. G. T. Hollands, "Natural convection", in Handbook of Heat Transfer, 3rd ed.,
    1998.
    """
    ra = np.asarray(ra, dtype=np.float64)
    return np.asarray((_DOWN_FLOOR + _DOWN_SLOPE * ra) ** 0.2)


def mcadams_down(ra: ArrayLike) -> FloatArray:
    """Nusselt number of a horizontal plate, warm face down, older law for hand estimates.

    ``0.27 Ra**(1/4)``.

    Parameters
    ----------
    ra : array_like
        Rayleigh number with ``L = area / perimeter`` [-].

    Returns
    -------
    ndarray
        Mean Nusselt number with ``L = area / perimeter`` [-], same shape.

    Notes
    -----
    Valid for ``1e5 <= Ra <= 1e10``.

    References
    ----------
    W. H. McAdams, Heat Transmission, 3rd ed., 1954.
    """
    return 0.27 * np.sqrt(np.sqrt(np.asarray(ra, dtype=np.float64)))


def fall_length(
    a: ArrayLike, b: ArrayLike, gravity_a: ArrayLike, gravity_b: ArrayLike
) -> FloatArray:
    """Mean length of the streamlines on a rectangular face.

    The mean chord of the rectangle along the in-plane part of gravity:
    ``a b / (a |g_b| + b |g_a|)`` with ``(g_a, g_b)`` made a unit vector, i.e. area over the width
    seen along the stream. Gravity along ``b`` gives ``b``.

    Parameters
    ----------
    a, b : array_like
        Edges of the face [m].
    gravity_a, gravity_b : array_like
        Components of gravity along ``a`` and ``b``, any scale and sign [-].

    Returns
    -------
    ndarray
        Length [m], broadcast shape; ``sqrt(a b)`` where gravity has no in-plane part.
    """
    a = np.asarray(a, dtype=np.float64)
    b = np.asarray(b, dtype=np.float64)
    along_a = np.abs(np.asarray(gravity_a, dtype=np.float64))
    along_b = np.abs(np.asarray(gravity_b, dtype=np.float64))
    size = np.hypot(along_a, along_b)
    none = size < 1e-12
    width = (a * along_b + b * along_a) / np.where(none, 1.0, size)
    return np.asarray(np.where(none, np.sqrt(a * b), a * b / np.where(none, 1.0, width)))


def inclined_parts(
    rise: FloatArray,
    properties: Air,
    fall_length: ArrayLike,
    area_perimeter_length: ArrayLike,
    up_cosine: ArrayLike,
    *,
    laminar: bool = False,
    level_rise: FloatArray | None = None,
    level_width: float = 0.0,
) -> tuple[FloatArray, FloatArray, FloatArray, FloatArray, FloatArray]:
    """Film coefficient of a plane face, and the pieces it was blended from.

    The inner part of `inclined_plate`, for callers that have the properties at hand.

    Parameters
    ----------
    rise : ndarray
        Face minus air temperature [K].
    properties : Air
        Properties at film temperature.
    fall_length, area_perimeter_length, up_cosine : array_like
        As `inclined_plate`.
    laminar : bool
        Use the laminar laws only.
    level_rise : ndarray, optional
        Difference for the horizontal law [K], where it is another: in stratified air a face may
        be as much warmer at its foot as colder at its head, and drive films up and down but
        stand level in the mean.
    level_width : float
        Half-width over which the horizontal law goes from a warm face to a cold one [K]: a face
        that is as warm as its air in the mean is not so everywhere, and its film has a finite
        slope there.

    Returns
    -------
    tuple of ndarray
        Film coefficient [W/(m2 K)], the coefficients of the vertical and of the horizontal law
        [W/(m2 K)], and their Rayleigh numbers [-]; that of the horizontal law carries the sign of
        ``rise * up_cosine``.
    """
    nu, k, pr = properties.kinematic_viscosity, properties.conductivity, properties.prandtl
    per_volume = GRAVITY * properties.expansion * pr / (nu * nu)  # Ra / (L^3 dT)
    fall = np.asarray(fall_length, dtype=np.float64)
    span = np.asarray(area_perimeter_length, dtype=np.float64)
    up = np.asarray(up_cosine, dtype=np.float64)
    ra_v = per_volume * soft_rise(rise) * (np.sqrt(np.maximum(1.0 - up * up, 0.0)) * fall**3)
    signed = rise if level_rise is None else level_rise
    ra_h = per_volume * signed * (up * span**3)
    if level_width > 0.0:
        size = per_volume * soft_abs(signed, level_width) * (np.abs(up) * span**3)
        unstable, stable = 0.5 * (size + ra_h), 0.5 * (size - ra_h)
    else:
        unstable, stable = np.maximum(ra_h, 0.0), np.maximum(-ra_h, 0.0)
    if laminar:
        nu_v, nu_up = churchill_chu_laminar(ra_v, pr), hot_side_up_laminar(unstable)
    else:
        nu_v, nu_up = vertical_plate(ra_v, pr), hot_side_up(unstable)
    h_v = k / fall * nu_v
    h_h = k / span * np.maximum(nu_up, hot_side_down(stable))
    ratio = np.minimum(h_v, h_h) / np.maximum(h_v, h_h)
    ratio *= ratio
    tenth = ratio * ratio * ratio * ratio * ratio
    return np.maximum(h_v, h_h) * (1.0 + tenth) ** 0.1, h_v, h_h, ra_v, ra_h


def inclined_plate(
    rise_signed: ArrayLike,
    film_temperature: ArrayLike,
    pressure: ArrayLike,
    fall_length: ArrayLike,
    area_perimeter_length: ArrayLike,
    up_cosine: ArrayLike,
    *,
    laminar: bool = False,
) -> PlateFilm:
    """Film of a plane face at any tilt, warmer or colder than its air.

    The vertical law with the component of gravity along the face,
    ``Ra sqrt(1 - c**2)``, and the horizontal law with the component across it, ``Ra |c|``, where c
    is the cosine between the outward normal and up. A warm face looking up or a cold one looking
    down is unstable (`hot_side_up`), the others are stable (`hot_side_down`). The two coefficients
    are joined as ``(h_v**10 + h_h**10)**(1/10)``: continuous in tilt, and within 1 % of either law
    where that law is 1.3 times the other.

    Parameters
    ----------
    rise_signed : array_like
        Face minus air temperature [K].
    film_temperature : array_like
        Mean of face and air temperature [K].
    pressure : array_like
        Absolute pressure [Pa].
    fall_length : array_like
        Length along the face in the direction of gravity, see `fall_length` [m].
    area_perimeter_length : array_like
        Area over perimeter of the face [m].
    up_cosine : array_like
        Cosine between the normal pointing into the air and up [-].
    laminar : bool
        Use the laminar laws only (no transition on the vertical part, ``0.54 Ra**(1/4)`` on the
        unstable one).

    Returns
    -------
    PlateFilm
        Fields of the broadcast shape.

    Notes
    -----
    Limiting cases: vertical face, `vertical_plate`; horizontal face, `hot_side_up` or
    `hot_side_down`; no temperature difference, conduction. Rises below `RISE_WIDTH_K` are
    regularised.

    References
    ----------
    Gravity along the plate, stable side, to 60 degrees from the vertical: Churchill & Chu 1975
    (from memory). Larger of the vertical law with ``g cos`` and the horizontal law: G. D. Raithby,
    K. G. T. Hollands, Handbook of Heat Transfer, 3rd ed., 1998 (from memory).
    """
    rise = np.asarray(rise_signed, dtype=np.float64)
    properties = air(film_temperature, pressure)
    h, h_v, h_h, ra_v, ra_h = inclined_parts(
        rise, properties, fall_length, area_perimeter_length, up_cosine, laminar=laminar
    )
    return plate_audit(
        h, h_v, h_h, ra_v, ra_h, properties.conductivity, fall_length, area_perimeter_length
    )


def plate_audit(
    h: FloatArray,
    h_v: FloatArray,
    h_h: FloatArray,
    ra_v: FloatArray,
    ra_h: FloatArray,
    conductivity: FloatArray,
    fall_length: ArrayLike,
    area_perimeter_length: ArrayLike,
) -> PlateFilm:
    """Film with the groups of the dominating law, from what `inclined_parts` returns.

    Parameters
    ----------
    h, h_v, h_h, ra_v, ra_h : ndarray
        As returned by `inclined_parts` (``h`` may have been scaled since) [W/(m2 K)], [-].
    conductivity : ndarray
        Conductivity of the air [W/(m K)].
    fall_length, area_perimeter_length : array_like
        As `inclined_plate` [m].

    Returns
    -------
    PlateFilm
        Fields of the broadcast shape.
    """
    vertical = h_v >= h_h
    length = np.where(vertical, fall_length, area_perimeter_length)
    law = np.where(vertical, VERTICAL, np.where(ra_h >= 0.0, HOT_SIDE_UP, HOT_SIDE_DOWN))
    ra = np.where(vertical, ra_v, np.abs(ra_h))
    return PlateFilm(h, ra, h * length / conductivity, length, law)
