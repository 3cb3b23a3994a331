"""Conduction in plates, joints and layered boards, and the spreading of small sources."""

from __future__ import annotations

import math
from typing import NamedTuple

import numpy as np
import numpy.typing as npt
from numpy.typing import ArrayLike

FloatArray = npt.NDArray[np.float64]

#: Terms of the cosine series per ratio of plate to source [-], and the most that are taken.
_TERMS_PER_RATIO, _MOST_TERMS = 12.0, 3000
#: Least product of reciprocal decay length and plate edge: regularises a plate without loss.
_LEAST_DECAY = 1e-3


class LayeredConductivity(NamedTuple):
    """Effective conductivity of a stack of layers."""

    in_plane: FloatArray
    """Along the layers [W/(m K)]."""
    through: FloatArray
    """Across the layers [W/(m K)]."""


def slab(area: ArrayLike, thickness: ArrayLike, conductivity: ArrayLike) -> FloatArray:
    """Conductance of a plane slab, ``k A / t``.

    Parameters
    ----------
    area : array_like
        Section [m2].
    thickness : array_like
        Length of the path [m].
    conductivity : array_like
        Thermal conductivity [W/(m K)].

    Returns
    -------
    ndarray
        Conductance [W/K], broadcast shape.
    """
    k = np.asarray(conductivity, dtype=np.float64)
    return np.asarray(k * np.asarray(area) / np.asarray(thickness))


def contact(area: ArrayLike, coefficient: ArrayLike) -> FloatArray:
    """Conductance of a joint, ``h_c A``.

    Parameters
    ----------
    area : array_like
        Area of the joint [m2].
    coefficient : array_like
        Contact conductance [W/(m2 K)].

    Returns
    -------
    ndarray
        Conductance [W/K], broadcast shape.
    """
    return np.asarray(np.asarray(coefficient, dtype=np.float64) * np.asarray(area))


def effective_conductivity(
    thickness: ArrayLike,
    conductivity: ArrayLike,
    coverage: ArrayLike = 1.0,
    fill_conductivity: ArrayLike = 0.3,
) -> LayeredConductivity:
    """Effective conductivity of a layered board.

    Each layer conducts ``k_i c_i + k_fill (1 - c_i)``; along the board the layers act in parallel,
    ``sum(k_i t_i) / t``, across it in series, ``t / sum(t_i / k_i)``.

    Parameters
    ----------
    thickness : array_like, shape (layers, ...)
        Thicknesses [m].
    conductivity : array_like, shape (layers, ...)
        Conductivities of the layers' material [W/(m K)].
    coverage : array_like, shape (layers, ...) or scalar
        Share of the layer that this material covers [-].
    fill_conductivity : array_like
        Conductivity of what fills the rest [W/(m K)].

    Returns
    -------
    LayeredConductivity
        In-plane and through conductivity [W/(m K)], shape (...).

    Notes
    -----
    Common practice, no source for the two sums. Tracks that run one way conduct less across; the
    sums are an upper bound in plane. `azar_graebner` is a fit to measured boards.
    """
    t = np.asarray(thickness, dtype=np.float64)
    c = np.asarray(coverage, dtype=np.float64)
    k = np.asarray(conductivity, dtype=np.float64) * c + np.asarray(fill_conductivity) * (1.0 - c)
    whole = np.sum(t, axis=0)
    return LayeredConductivity(
        np.asarray(np.sum(k * t, axis=0) / whole), np.asarray(whole / np.sum(t / k, axis=0))
    )


def azar_graebner(copper_thickness: ArrayLike, board_thickness: ArrayLike) -> LayeredConductivity:
    """Effective conductivity of a board by a fit to measured boards, for comparison.

    ``k_in_plane = 0.8 + 350 z`` and ``k_through = 1 / (1.69 (1 - z) + 0.0026 z)`` with z the share
    of copper in the thickness.

    Parameters
    ----------
    copper_thickness : array_like
        Thickness of all copper, weighted with its coverage [m].
    board_thickness : array_like
        Thickness of the board [m].

    Returns
    -------
    LayeredConductivity
        In-plane and through conductivity [W/(m K)], broadcast shape.

    References
    ----------
    K. Azar, J. E. Graebner, "Experimental determination of thermal conductivity of printed wiring
    boards", 12th IEEE SEMI-THERM Symposium, 1996, 169-182 (the constants as reproduced by others).
    """
    z = np.asarray(copper_thickness, dtype=np.float64) / np.asarray(board_thickness)
    return LayeredConductivity(
        np.asarray(0.8 + 350.0 * z), np.asarray(1.0 / (1.69 * (1.0 - z) + 0.0026 * z))
    )


def _scaled_sinh(x: FloatArray) -> FloatArray:
    """``2 sinh(x) exp(-x)``, which does not overflow."""
    return -np.expm1(-2.0 * x)


def _scaled_cosh(x: FloatArray) -> FloatArray:
    """``2 cosh(x) exp(-x)``, which does not overflow."""
    return 1.0 + np.exp(-2.0 * x)


def _terms(length: ArrayLike, source: ArrayLike, loss: ArrayLike, per_ratio: float) -> int:
    """Terms that resolve both the source and the decay length ``1 / sqrt(loss)``."""
    scale = np.maximum(1.0 / np.asarray(source), 0.2 * np.sqrt(loss))
    return min(int(per_ratio * float(np.max(length * scale))) + 8, _MOST_TERMS)


def spreading_resistance(
    source_a: ArrayLike,
    source_b: ArrayLike,
    cx: ArrayLike,
    cy: ArrayLike,
    plate_a: ArrayLike,
    plate_b: ArrayLike,
    kt: ArrayLike,
    h: ArrayLike,
) -> FloatArray:
    """Mean temperature of a rectangular source over that of its plate, per watt.

    Exact for the thin plate ``k t lap(theta) - h theta + q = 0`` with adiabatic edges and q even
    over the source. Fourier cosines along one axis, the exact solution along the other:
    ``sum_m e_m u_m**2 Y_m / (k t L) - 1 / (h L W)``, where ``u_m`` is the mean over the source of
    ``cos(m pi x / L)``, ``e_m`` is 1 for m = 0 and 2 otherwise, and ``Y_m`` the mean over the
    source of the solution of ``-Y'' + p**2 Y = 1/b`` (on the source; 0 elsewhere) with
    ``p**2 = (m pi / L)**2 + h / (k t)``.

    Parameters
    ----------
    source_a, source_b : array_like
        Edges of the source along x and y [m].
    cx, cy : array_like
        Centre of the source from a corner of the plate [m].
    plate_a, plate_b : array_like
        Edges of the plate along x and y [m].
    kt : array_like
        Conductivity times thickness [W/K].
    h : array_like
        Film coefficients of both faces together [W/(m2 K)]; zero is allowed.

    Returns
    -------
    ndarray
        Resistance [K/W], broadcast shape.

    Notes
    -----
    Limiting cases: zero for a source as large as the plate and for ``k t`` without bound. Truncated
    with an error below 0.1 % for sources down to 1/250 of the plate's edge.
    """
    a, b, x, y, length, width, conduct, film = (
        np.atleast_1d(v)
        for v in np.broadcast_arrays(
            *(
                np.asarray(v, dtype=np.float64)
                for v in (source_a, source_b, cx, cy, plate_a, plate_b, kt, h)
            )
        )
    )
    # Sum along the axis on which the source takes the larger share: fewer terms.
    turn = b * length > a * width
    a, b = np.where(turn, b, a), np.where(turn, a, b)
    x, y = np.where(turn, y, x), np.where(turn, x, y)
    length, width = np.where(turn, width, length), np.where(turn, length, width)

    least = (_LEAST_DECAY / width) ** 2
    loss = np.maximum(film / conduct, least)
    terms = _terms(length, a, loss, _TERMS_PER_RATIO)
    wave = np.arange(terms) * (math.pi / length)[..., None]
    half = 0.5 * a[..., None] * wave
    mean_cosine = np.cos(wave * x[..., None]) * np.sinc(half / math.pi)
    weight = np.full(terms, 2.0)
    weight[0] = 1.0
    p = np.sqrt(wave * wave + loss[..., None])
    low = (y - 0.5 * b)[..., None]
    high = (y + 0.5 * b)[..., None]
    above, below = width[..., None] - low, width[..., None] - high
    s_low, s_high = _scaled_sinh(p * low), _scaled_sinh(p * high)
    t_low, t_high = _scaled_sinh(p * above), _scaled_sinh(p * below)
    size = b[..., None]
    outside = s_low * t_low + s_high * t_high - 2.0 * s_low * t_high * np.exp(-p * size)
    outside /= 2.0 * _scaled_sinh(p * width[..., None])
    mean_y = (1.0 - outside / (p * size)) / (p * p * size)
    total = np.sum(weight * mean_cosine * mean_cosine * mean_y, axis=-1) / (length * conduct)
    result = total - 1.0 / (loss * conduct * length * width)
    shape = np.broadcast_shapes(
        *(np.shape(v) for v in (source_a, source_b, cx, cy, plate_a, plate_b, kt, h))
    )
    return np.asarray(result.reshape(shape))


def plate_source_rise(
    x: ArrayLike,
    y: ArrayLike,
    source_a: float,
    source_b: float,
    cx: float,
    cy: float,
    plate_a: float,
    plate_b: float,
    kt: float,
    h: float,
    power: float = 1.0,
) -> FloatArray:
    """Temperature rise of a plate with one rectangular source, at given points.

    The solution described under `spreading_resistance`, evaluated at points instead of averaged.

    Parameters
    ----------
    x, y : array_like
        Points from a corner of the plate [m].
    source_a, source_b, cx, cy, plate_a, plate_b, kt, h : float
        As `spreading_resistance`; ``h`` above zero.
    power : float
        Power of the source [W].

    Returns
    -------
    ndarray
        Rise over the air [K], broadcast shape of ``x`` and ``y``.

    Notes
    -----
    Truncated with an error below 0.1 % of the rise at the source for sources down to 1/100 of the
    plate's edge. Without lateral conduction the rise is ``power / (h a b)`` on the source and zero
    elsewhere; with unbounded conduction ``power / (h L W)`` everywhere.
    """
    px, py = (np.asarray(v, dtype=np.float64) for v in np.broadcast_arrays(x, y))
    terms = _terms(plate_a, source_a, h / kt, 3.0 * _TERMS_PER_RATIO)
    wave = np.arange(terms) * (math.pi / plate_a)
    strength = np.cos(wave * cx) * np.sinc(0.5 * source_a * wave / math.pi)
    strength *= np.where(np.arange(terms) == 0, 1.0, 2.0)
    p = np.sqrt(wave * wave + h / kt)
    low, high = cy - 0.5 * source_b, cy + 0.5 * source_b
    at = py[..., None]
    near, far = np.minimum(at, high), np.maximum(at, low)
    # Green's function over the source: the part of it below the point, then the part above.
    pw = 2.0 * _scaled_sinh(p * plate_b)
    lower = _scaled_cosh(p * (plate_b - at)) * (
        np.exp(-p * np.abs(at - near)) * _scaled_sinh(p * np.maximum(near, low))
        - np.exp(-p * np.abs(at - low)) * _scaled_sinh(p * low)
    )
    upper = _scaled_cosh(p * at) * (
        np.exp(-p * np.abs(far - at)) * _scaled_sinh(p * (plate_b - np.minimum(far, high)))
        - np.exp(-p * np.abs(high - at)) * _scaled_sinh(p * (plate_b - high))
    )
    response = (np.where(at > low, lower, 0.0) + np.where(at < high, upper, 0.0)) / (p * p * pw)
    series = np.sum(strength * np.cos(wave * px[..., None]) * response, axis=-1)
    return np.asarray(series * power / (source_b * plate_a * kt))


def disc_source_on_infinite_plate(radius: float, kt: float, h: float) -> tuple[float, float]:
    """Rise per watt at the centre and at the edge of a disc source on an unbounded plate.

    ``q/h (1 - m r K1(m r))`` and ``q/h m r I1(m r) K0(m r)`` with ``m**2 = h / (k t)``.

    Parameters
    ----------
    radius : float
        Radius of the source [m].
    kt : float
        Conductivity times thickness of the plate [W/K].
    h : float
        Film coefficients of both faces together [W/(m2 K)].

    Returns
    -------
    tuple of float
        Rise at the centre and at the edge [K/W].

    References
    ----------
    H. S. Carslaw, J. C. Jaeger, Conduction of Heat in Solids, 2nd ed., 1959 (from memory).
    """
    from scipy.special import i1, k0, k1

    z = radius * math.sqrt(h / kt)
    flux = 1.0 / (math.pi * radius * radius * h)
    return flux * (1.0 - z * float(k1(z))), flux * z * float(i1(z)) * float(k0(z))
