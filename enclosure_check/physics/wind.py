"""Wind along the outer faces of a box: the flat-plate law, and free convection beside it."""

from __future__ import annotations

from typing import Literal, NamedTuple

import numpy as np
import numpy.typing as npt
from numpy.typing import ArrayLike

from enclosure_check.physics.air import GRAVITY, air
from enclosure_check.physics.smooth import smoothstep
from enclosure_check.records import dataclass

FloatArray = npt.NDArray[np.float64]
Regime = Literal["forced", "mixed", "natural"]

#: Key of the law in the registry.
PLATE_IN_WIND = "flat_plate_in_wind"
#: Reynolds number up to which the film on a plate is laminar [-] (Incropera & DeWitt, from memory).
CRITICAL_REYNOLDS = 5e5
#: Share of it over which the turbulent part sets in, so that the slope has no step [-]; ours.
ONSET_SHARE = 0.2
#: Gr/Re^2 below which wind alone counts, above which buoyancy does [-] (common practice).
FORCED_BELOW, NATURAL_ABOVE = 0.1, 10.0
_LAMINAR, _TURBULENT = 0.664, 0.037
# First in-plane axis and second, of the faces left, right, front, back, bottom, top.
_AXIS = np.array([0, 0, 1, 1, 2, 2])
_FIRST, _SECOND = np.array([1, 1, 0, 0, 0, 0]), np.array([2, 2, 2, 2, 1, 1])


@dataclass(frozen=True, eq=False)
class Wind:
    """Wind past a box; made by `wind_past_box`."""

    speed: float
    """Speed of the air past the box [m/s], above zero."""
    length: FloatArray
    """Length of each face along the wind, from the edge it meets first [m], shape (6,)."""


class WindFilm(NamedTuple):
    """Films of the six faces in wind alone, each of shape (6, ...)."""

    coefficient: FloatArray
    """Film coefficient [W/(m2 K)]."""
    reynolds: FloatArray
    """Reynolds number with the length along the wind [-]."""
    nusselt: FloatArray
    """Nusselt number with that length [-]."""
    gr_over_re2: FloatArray
    """Grashof number over the square of the Reynolds number, both with that length [-]."""


def flat_plate_in_wind(re: ArrayLike, pr: ArrayLike) -> FloatArray:
    """Mean Nusselt number of an isothermal plate in an even stream along it.

    ``0.664 Re**(1/2) Pr**(1/3)`` up to Re = 5e5; beyond it
    ``(0.037 Re**(4/5) - 871) Pr**(1/3)``, laminar to 5e5 and turbulent from there on. The 871 is
    taken as the 871.3 that makes both meet, and the difference of the two sets in by a smoothstep
    over Re 5e5 to 6e5, which lowers it there by 8 % at most: value and slope are continuous.

    Parameters
    ----------
    re : array_like
        Reynolds number with the length of the plate along the stream, zero or above [-].
    pr : array_like
        Prandtl number [-].

    Returns
    -------
    ndarray
        Mean Nusselt number with that length [-], broadcast shape.

    Notes
    -----
    Valid for Pr 0.6 to 60 and Re up to 1e8; below about 1e3 a film is no longer thin beside its
    plate and more heat passes than the law tells (all from memory). The turbulent part
    lies 10 to 16 % above Schlichting's for Re 2e6 to 1e8.

    References
    ----------
    Laminar: E. Pohlhausen, "Der Wärmeaustausch zwischen festen Körpern und Flüssigkeiten mit
    kleiner Reibung und kleiner Wärmeleitung", Zeitschrift für angewandte Mathematik und Mechanik 1,
    1921, 115-121. Mixed: F. P. Incropera, D. P. DeWitt, Fundamentals of Heat and Mass Transfer
    (from memory).
    """
    re = np.asarray(re, dtype=np.float64)
    laminar = _LAMINAR * np.sqrt(re)
    if re.size and re.max() > CRITICAL_REYNOLDS:
        over = np.maximum(re, CRITICAL_REYNOLDS)
        more = _TURBULENT * (over**0.8 - CRITICAL_REYNOLDS**0.8)
        more -= _LAMINAR * (np.sqrt(over) - np.sqrt(CRITICAL_REYNOLDS))
        onset = smoothstep((over / CRITICAL_REYNOLDS - 1.0) / ONSET_SHARE)
        laminar = laminar + onset * more
    return np.asarray(laminar * np.cbrt(np.asarray(pr, dtype=np.float64)))


def wind_past_box(dims: ArrayLike, speed: float, along_axis: int | None) -> Wind:
    """Prepare the wind past a box.

    A face along the wind is as long as its edge along it. A face across the wind, to windward or
    leeward, counts with its shorter edge. Of wind from no certain side every face counts with
    its longer edge, which gives the least film as long as it is laminar.

    Parameters
    ----------
    dims : array_like, shape (3,)
        Outer width, depth and height [m].
    speed : float
        Speed of the air past the box [m/s].
    along_axis : int or None
        Axis of the box (0 width, 1 depth, 2 height) the wind blows along; None where it may come
        from any side.

    Returns
    -------
    Wind
        Speed and lengths.

    Notes
    -----
    A strip across a stream has ``0.667 Re**(1/2) Pr**(1/3)`` on its face to windward (Re 1e4 to
    5e4) and ``0.191 Re**(2/3) Pr**(1/3)`` to leeward (7e3 to 8e4), with its width (recalled from
    tables of non-circular cylinders in Incropera & DeWitt, from memory): the first is the law of
    the plate along the stream, the second lies above it from Re = 2e3 on.
    """
    d = np.asarray(dims, dtype=np.float64)
    a, b = d[_FIRST], d[_SECOND]
    if along_axis is None:
        return Wind(speed, np.maximum(a, b))
    return Wind(speed, np.where(along_axis == _AXIS, np.minimum(a, b), d[along_axis]))


def wind_film(
    rise: FloatArray, film_temperature: FloatArray, pressure: ArrayLike, wind: Wind
) -> WindFilm:
    """Films of the six faces in wind alone.

    Parameters
    ----------
    rise : ndarray, shape (6, ...)
        Face minus air temperature, either sign [K].
    film_temperature : ndarray, shape (6, ...)
        Mean of face and air temperature [K].
    pressure : array_like
        Absolute pressure [Pa].
    wind : Wind
        From `wind_past_box`.

    Returns
    -------
    WindFilm
        Films and groups.
    """
    properties = air(film_temperature, pressure)
    length = wind.length.reshape((6,) + (1,) * (rise.ndim - 1))
    re = wind.speed * length / properties.kinematic_viscosity
    nusselt = flat_plate_in_wind(re, properties.prandtl)
    buoyancy = GRAVITY * properties.expansion * np.abs(rise) * length
    return WindFilm(
        properties.conductivity * nusselt / length,
        re,
        nusselt,
        np.asarray(buoyancy / wind.speed**2),
    )


def combined_film(free: ArrayLike, forced: ArrayLike) -> FloatArray:
    """Film in wind and by buoyancy together, ``(h_free**3 + h_forced**3)**(1/3)``.

    Parameters
    ----------
    free, forced : array_like
        Either film alone [W/(m2 K)], zero or above.

    Returns
    -------
    ndarray
        Film [W/(m2 K)], broadcast shape: never below either, at most 26 % above the larger.

    References
    ----------
    S. W. Churchill, "A comprehensive correlating equation for laminar, assisting, forced and free
    convection", AIChE Journal 23, 1977, 10-16 (from memory): for buoyancy that assists the
    stream. Wind across it is taken the same way.
    """
    larger, smaller = np.maximum(free, forced), np.minimum(free, forced)
    ratio = smaller / np.where(larger > 0.0, larger, 1.0)
    return np.asarray(larger * np.cbrt(1.0 + ratio * ratio * ratio))


def regime(gr_over_re2: float) -> Regime:
    """Name what moves the air at a face: wind (forced), buoyancy (natural) or both (mixed)."""
    if gr_over_re2 < FORCED_BELOW:
        return "forced"
    return "natural" if gr_over_re2 > NATURAL_ABOVE else "mixed"
