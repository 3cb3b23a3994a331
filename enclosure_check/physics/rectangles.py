"""Axis-parallel rectangles and boxes, and the exact exchange areas of rectangles in plain view."""

from __future__ import annotations

import numpy as np
import numpy.typing as npt
from numpy.typing import ArrayLike

from enclosure_check.records import dataclass

FloatArray = npt.NDArray[np.float64]
IntArray = npt.NDArray[np.intp]

# Signs of the corner sums over the ends low-low, low-high, high-low, high-high.
_CORNER_SIGN = np.array([1.0, -1.0, -1.0, 1.0])
OTHER_AXES = np.array([[1, 2], [0, 2], [0, 1]])


@dataclass(frozen=True, eq=False)
class Rectangles:
    """Flat patches parallel to the planes of one frame."""

    axis: IntArray
    """Axis of the normal, 0 to 2, shape (n,)."""
    sign: FloatArray
    """Sign of the normal that points into the air, -1 or 1, shape (n,)."""
    position: FloatArray
    """Coordinate along the axis of the normal [m], shape (n,)."""
    low: FloatArray
    """Lower ends along the two other axes in rising order [m], shape (n, 2)."""
    high: FloatArray
    """Upper ends along the two other axes in rising order [m], shape (n, 2)."""

    def __post_init__(self) -> None:
        n = self.axis.size
        flat = self.axis.shape == self.sign.shape == self.position.shape == (n,)
        if not flat or self.low.shape != (n, 2) or self.high.shape != (n, 2):
            raise ValueError(
                "fields of Rectangles have the shapes (n,), (n,), (n,), (n, 2), (n, 2)"
            )
        if not np.isin(self.axis, (0, 1, 2)).all() or not np.isin(self.sign, (-1, 1)).all():
            raise ValueError("axis of a rectangle is 0, 1 or 2, its sign -1 or 1")
        if not (np.isfinite(self.position).all() and _ordered(self.low, self.high)):
            raise ValueError("rectangles need finite coordinates with low <= high")

    @property
    def area(self) -> FloatArray:
        """Areas [m2], shape (n,)."""
        return np.asarray(np.prod(self.high - self.low, axis=1))

    @property
    def corners(self) -> FloatArray:
        """Lowest and highest corner in all three coordinates [m], shape (n, 2, 3)."""
        corners = np.empty((self.axis.size, 2, 3))
        ends = np.stack((self.low, self.high), axis=1)
        np.put_along_axis(corners, OTHER_AXES[self.axis][:, None, :], ends, axis=2)
        np.put_along_axis(corners, self.axis[:, None, None], self.position[:, None, None], axis=2)
        return corners


@dataclass(frozen=True, eq=False)
class Boxes:
    """Opaque cuboids parallel to the frame; one without thickness is an opaque sheet."""

    low: FloatArray
    """Lowest corners [m], shape (m, 3)."""
    high: FloatArray
    """Highest corners [m], shape (m, 3)."""

    def __post_init__(self) -> None:
        if self.low.ndim != 2 or self.low.shape[1] != 3 or self.high.shape != self.low.shape:
            raise ValueError("low and high of Boxes have the shape (m, 3)")
        if not _ordered(self.low, self.high):
            raise ValueError("boxes need finite coordinates with low <= high")


def _ordered(low: FloatArray, high: FloatArray) -> bool:
    return bool(np.isfinite(low).all() and np.isfinite(high).all() and (low <= high).all())


def parallel_rectangles(
    low_1: ArrayLike, high_1: ArrayLike, low_2: ArrayLike, high_2: ArrayLike, distance: ArrayLike
) -> FloatArray:
    """Exchange area of two parallel rectangles that face each other, sides parallel.

    With ``u`` the differences of the ends along the first axis, ``v`` along the second and ``z``
    the distance, the sum over the sixteen pairs of corners, with alternating sign, of::

        1/(2 pi) [ v w atan(v/w) + u t atan(u/t) - z**2/2 ln(u**2 + v**2 + z**2) ]
        w = sqrt(u**2 + z**2),  t = sqrt(v**2 + z**2)

    Parameters
    ----------
    low_1, high_1, low_2, high_2 : array_like, shape (..., 2)
        Ends of the rectangles along the two axes of their planes [m], low <= high.
    distance : array_like, shape (...)
        Distance of the planes [m], not negative.

    Returns
    -------
    ndarray, shape (...)
        Exchange area ``A_1 F_12`` [m2]: the overlapping area at distance zero, zero where a
        rectangle has no area.

    Notes
    -----
    Exact. Rounding leaves some 1e-15 times the square of the largest difference [m2].

    References
    ----------
    J. R. Ehlert, T. F. Smith, "View factors for perpendicular and parallel rectangular plates",
    J. Thermophys. Heat Transfer 7 (1993) 173-175 (from memory); J. R. Howell, A Catalog of
    Radiation Heat Transfer Configuration Factors, C-13 (from memory).
    """
    u = _corner_differences(low_1, high_1, low_2, high_2, 0)[..., :, None]
    v = _corner_differences(low_1, high_1, low_2, high_2, 1)[..., None, :]
    z2 = np.square(np.asarray(distance, dtype=np.float64))[..., None, None]
    w, t = np.sqrt(u * u + z2), np.sqrt(v * v + z2)
    square = u * u + t * t
    terms = v * w * np.arctan2(v, w) + u * t * np.arctan2(u, t)
    terms = terms - 0.5 * z2 * np.log(_relative(square))
    return _sum_corners(terms * (_CORNER_SIGN[:, None] * _CORNER_SIGN))


def perpendicular_rectangles(
    along_1: ArrayLike, away_1: ArrayLike, along_2: ArrayLike, away_2: ArrayLike
) -> FloatArray:
    """Exchange area of two rectangles at right angles, sides parallel to the line of their planes.

    With ``v`` the differences of the ends along the line in which the two planes meet, and ``x``
    and ``y`` the distances of the ends from it, the sum over the sixteen combinations, with
    alternating sign, of::

        1/(2 pi) [ v w atan(v/w) - (w**2 - v**2)/4 ln(w**2 + v**2) ],  w = sqrt(x**2 + y**2)

    Parameters
    ----------
    along_1, along_2 : array_like, shape (..., 2)
        Low and high end of each rectangle along the line where the planes meet [m].
    away_1, away_2 : array_like, shape (..., 2)
        Low and high end of each rectangle away from that line, counted to the side that the other
        one faces [m]; what lies on the negative side is not seen and cut off.

    Returns
    -------
    ndarray, shape (...)
        Exchange area ``A_1 F_12`` [m2]; zero where nothing is left of a rectangle.

    Notes
    -----
    Exact. Rounding leaves some 1e-15 times the square of the largest distance [m2].

    References
    ----------
    As `parallel_rectangles`; D. C. Hamilton, W. R. Morgan, NACA TN 2836 (1952) (from memory);
    Howell's catalogue C-15 and, with a common edge, C-14 (from memory).
    """
    one, two = (np.asarray(x, dtype=np.float64) for x in (along_1, along_2))
    v = _corner_differences(one[..., :1], one[..., 1:], two[..., :1], two[..., 1:], 0)
    v = v[..., None, :]
    x, y = (np.maximum(np.asarray(a, dtype=np.float64), 0.0) for a in (away_1, away_2))
    w2 = (np.square(x)[..., :, None] + np.square(y)[..., None, :]).reshape(
        *np.broadcast_shapes(x.shape[:-1], y.shape[:-1]), 4, 1
    )
    w = np.sqrt(w2)
    v2 = v * v
    terms = v * w * np.arctan2(v, w) - 0.25 * (w2 - v2) * np.log(_relative(w2 + v2))
    return _sum_corners(terms * (_CORNER_SIGN[:, None] * _CORNER_SIGN))


def _corner_differences(
    low_1: ArrayLike, high_1: ArrayLike, low_2: ArrayLike, high_2: ArrayLike, axis: int
) -> FloatArray:
    """Differences low-low, low-high, high-low, high-high along one axis, shape (..., 4)."""
    ends = [np.asarray(x, dtype=np.float64)[..., axis] for x in (low_1, high_1, low_2, high_2)]
    return np.stack([a - b for a in ends[:2] for b in ends[2:]], axis=-1)


def _relative(square: FloatArray) -> FloatArray:
    """Squares over the largest of their pair, one where they are zero: log(0) comes times zero."""
    largest = square.max(axis=(-2, -1), keepdims=True)
    return np.asarray(np.where(square > 0.0, square, 1.0) / np.where(largest > 0.0, largest, 1.0))


def _sum_corners(terms: FloatArray) -> FloatArray:
    return np.asarray(np.maximum(terms.sum(axis=(-2, -1)) / (2.0 * np.pi), 0.0))
