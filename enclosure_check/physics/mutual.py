"""Rise that one source on a plate causes under another: the exact thin plate between rectangles."""

import math

import numpy as np
import numpy.typing as npt
from numpy.typing import ArrayLike

FloatArray = npt.NDArray[np.float64]

# Terms of the cosine series per ratio of plate to source, and bounds of their number. [-]
_TERMS_PER_RATIO, _LEAST_TERMS, _MOST_TERMS = 4.0, 48, 480
# Terms have died down where what lies between the sources is so many of their decay lengths. [-]
_DIED_DOWN = 8.0


def mutual_rise(
    first: ArrayLike, second: ArrayLike, plate: ArrayLike, kt: ArrayLike, h: float
) -> FloatArray:
    """Mean rise over a rectangle over the plate's mean, per watt put in evenly over another.

    The thin plate of `conduction.spreading_resistance`: ``sum_m e_m u_m v_m Y_m / (k t L) -
    1 / (h L W)`` with ``u_m`` and ``v_m`` the means of ``cos(m pi x / L)`` over the two, and
    ``Y_m`` the mean over both along the other axis of the Green's function of ``-Y'' + p**2 Y``,
    ``(cosh p (W - |y - y'|) + cosh p (W - y - y')) / (2 p sinh p W)``,
    ``p**2 = (m pi / L)**2 + h / (k t)``.

    Parameters
    ----------
    first, second : array_like, shape (pairs, 2, 2)
        Low and high end of the rectangles along x and along y, from a corner of the plate [m].
    plate : array_like, shape (pairs, 2)
        Edges of the plate [m].
    kt : array_like, shape (pairs,)
        Conductivity times thickness [W/K].
    h : float
        Film coefficients of both faces together, above zero [W/(m2 K)].

    Returns
    -------
    ndarray, shape (pairs,)
        Resistance, the same either way round [K/W].

    Notes
    -----
    Truncated with an error below 0.5 % of what two sources of 1/50 of the plate's edge cause under
    each other; the sum runs across the axis along which they lie further apart.
    """
    one, other = np.asarray(first, dtype=np.float64), np.asarray(second, dtype=np.float64)
    edges, sheet = np.asarray(plate, dtype=np.float64), np.asarray(kt, dtype=np.float64)
    apart = np.maximum(one[..., 0] - other[..., 1], other[..., 0] - one[..., 1])
    turn = (apart[:, 0] > apart[:, 1])[:, None, None]
    one, other = np.where(turn, one[:, ::-1], one), np.where(turn, other[:, ::-1], other)
    edges = np.where(turn[:, 0], edges[:, ::-1], edges)
    smaller = np.minimum(np.ptp(one[:, 0], axis=1), np.ptp(other[:, 0], axis=1))
    between = np.maximum(one[:, 1, 0] - other[:, 1, 1], other[:, 1, 0] - one[:, 1, 1])
    fine = _TERMS_PER_RATIO * edges[:, 0] / smaller
    alive = _DIED_DOWN * edges[:, 0] / (math.pi * np.maximum(between, 1e-12))
    counts = np.clip(np.minimum(fine, alive), _LEAST_TERMS, _MOST_TERMS)
    # Few pairs ask for many terms: those that ask for about as many go together.
    groups = np.ceil(np.log2(counts / _LEAST_TERMS)).astype(np.intp)
    rise = np.empty(len(one))
    for group in sorted(set(groups.tolist())):  # `np.unique` imports masked arrays
        own = np.flatnonzero(groups == group)
        terms = math.ceil(counts[own].max())
        rise[own] = _series(one[own], other[own], edges[own], sheet[own], h, terms)
    return rise


def _series(
    one: FloatArray, other: FloatArray, edges: FloatArray, sheet: FloatArray, h: float, count: int
) -> FloatArray:
    """The series of `mutual_rise`, so many terms of it."""
    length, width = edges[:, :1], edges[:, 1:]
    terms = np.arange(count)
    wave = terms * (math.pi / length)
    p = np.sqrt(wave * wave + (h / sheet)[:, None])
    means = np.where(terms > 0, 2.0, 1.0)
    for each in (one, other):
        middle, half = each[:, 0].mean(axis=1)[:, None], 0.5 * np.ptp(each[:, 0], axis=1)[:, None]
        means = means * np.cos(wave * middle) * np.sinc(half * wave / math.pi)
    # The Green's function twice integrated, at the ends of both intervals.
    decay = np.exp(-2.0 * p * width)
    total = np.zeros_like(p)
    for sign, a in ((-1.0, one[:, 1, :1]), (1.0, one[:, 1, 1:])):
        for turned, b in ((-1.0, other[:, 1, :1]), (1.0, other[:, 1, 1:])):
            near, far = np.abs(a - b), a + b
            straight = _cosh(p, near, width) + p * near * (1.0 - decay)
            mirrored = _cosh(p, far, width)
            total += sign * turned * (mirrored - straight)
    sizes = np.ptp(one[:, 1], axis=1) * np.ptp(other[:, 1], axis=1)
    response = total / (2.0 * p**3 * (1.0 - decay) * sizes[:, None])
    series = np.sum(means * response, axis=1) / (length[:, 0] * sheet)
    return np.asarray(series - 1.0 / (h * length[:, 0] * width[:, 0]))


def _cosh(p: FloatArray, at: FloatArray, width: FloatArray) -> FloatArray:
    """``2 cosh(p (W - y)) exp(-p W)``, which does not overflow up to 2 W."""
    return np.asarray(np.exp(-p * at) + np.exp(p * (at - 2.0 * width)))
