"""Free convection from a box outside, as one body whose faces shelter each other.

Isolated-plate laws face by face flatter a box, because its top stands in the plume of its sides.
Here each face keeps its plate law, times a shelter factor, and all of them are scaled so that an
isothermal box meets the cuboid law.
"""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
import numpy.typing as npt
from numpy.typing import ArrayLike

from enclosure_check.physics.air import Air, air, rayleigh_number
from enclosure_check.physics.bodies import cuboid_gravity_function_tilted, cuboid_nusselt
from enclosure_check.physics.plates import fall_length, inclined_parts, plate_audit
from enclosure_check.physics.smooth import RISE_WIDTH_K, soft_rise, soft_sign
from enclosure_check.records import dataclass

FloatArray = npt.NDArray[np.float64]
IntArray = npt.NDArray[np.intp]
BoolArray = npt.NDArray[np.bool_]

#: Faces in the order of every first axis here.
FACES = ("left", "right", "front", "back", "bottom", "top")

# Shares of the isolated-plate law, read off the numerical experiments made for this project
# (laminar, isothermal cuboids; the last one a cube of which only the top is warm).
SHELTER_VERTICAL = 0.90
SHELTER_STABLE = 0.95
SHELTER_UNSTABLE_ISOTHERMAL = 0.33
SHELTER_UNSTABLE_ALONE = 0.68
#: Share of the open area below which the sides no longer count in the shelter of a face [-]: keeps
#: the shelter continuous where the last side turns away.
_SIDES_FLOOR = 1e-3
_AXIS = np.array([0, 0, 1, 1, 2, 2])
_OPPOSITE = np.array([1, 0, 3, 2, 5, 4])
_NORMAL_SIGN = np.array([-1.0, 1.0, -1.0, 1.0, -1.0, 1.0])


@dataclass(frozen=True, eq=False)
class BoxGeometry:
    """What the film of a box needs to know of its shape and attitude; made by `box_geometry`."""

    dims: FloatArray
    """Outer width (x), depth (y), height (z) in the frame of the box [m], shape (3,)."""
    up: FloatArray
    """Unit vector up in that frame [-], shape (3,)."""
    open_faces: BoolArray
    """Faces that look into open air, in the order of `FACES`, shape (6,)."""
    area: FloatArray
    """Face areas [m2], shape (6,)."""
    fall_length: FloatArray
    """Lengths along gravity [m], shape (6,)."""
    area_perimeter_length: FloatArray
    """Area over open perimeter [m], shape (6,); an edge on a covered face is not open."""
    up_cosine: FloatArray
    """Cosines between outward normals and up [-], shape (6,)."""
    side_weights: FloatArray
    """Weight of the rise of face j in the shelter of face i [-], shape (6, 6)."""
    open_share: FloatArray
    """Area share of each open face in the open area, zero for the others [-], shape (6,)."""
    open_area: FloatArray
    """Area of each open face, zero for the others [m2], shape (6,)."""
    body_area: float
    """Area of the box doubled by its mirror images [m2]."""
    body_share: float
    """Share of the doubled body that is the box itself [-]."""
    gravity_function: float
    """Gravity function of the doubled body [-]."""
    scale_weight: float
    """Exponent on the scale: 1 a free or wall-mounted box, 0 one standing on something [-]."""


class BoxFilm(NamedTuple):
    """Films of the six faces; every field but ``scale`` has the shape (6, ...)."""

    coefficient: FloatArray
    """Film coefficient, zero for faces that are not open [W/(m2 K)]."""
    shelter: FloatArray
    """Share of the isolated-plate law that the neighbouring faces leave [-]."""
    scale: FloatArray
    """Common factor that brings the isothermal box to the cuboid law [-], shape (...)."""
    rayleigh: FloatArray
    """Rayleigh number of the dominating plate law [-]."""
    nusselt: FloatArray
    """Nusselt number of the film [-]."""
    length: FloatArray
    """Characteristic length of the dominating plate law [m]."""
    law: IntArray
    """Code of the dominating plate law, see `PlateFilm`."""


def _side_weights(area: FloatArray, up_cosine: FloatArray, open_faces: BoolArray) -> FloatArray:
    """Weights of the other open faces by how upright they are, rows summing to (almost) 1 or 0."""
    upright = np.where(open_faces, area * (1.0 - up_cosine**2), 0.0)
    weights = np.tile(upright, (6, 1))
    np.fill_diagonal(weights, 0.0)
    floor = _SIDES_FLOOR * max(float(np.sum(area[open_faces])), 1e-300)
    return np.asarray(weights / (weights.sum(axis=1, keepdims=True) + floor))


def _open_perimeter(d: FloatArray, is_open: BoolArray) -> FloatArray:
    """Length of the edges of each face over which air can come and go [m], shape (6,).

    An edge shared with a covered face is blocked, as in the box doubled by its mirror image. A
    face without any open edge keeps its whole perimeter.
    """
    edge = np.zeros((6, 6))
    for i in range(6):
        for j in range(6):
            if _AXIS[i] != _AXIS[j]:
                edge[i, j] = d[3 - _AXIS[i] - _AXIS[j]]
    part = edge @ is_open.astype(np.float64)
    return np.where(part > 0.0, part, edge.sum(axis=1))


def box_geometry(dims: ArrayLike, up: ArrayLike, open_faces: ArrayLike) -> BoxGeometry:
    """Prepare a box for `box_film`.

    Parameters
    ----------
    dims : array_like, shape (3,)
        Outer width (x, to the right), depth (y, to the rear) and height (z) [m].
    up : array_like, shape (3,)
        Direction of up in the frame of the box; made a unit vector here [-].
    open_faces : array_like of bool, shape (6,)
        Left, right, front, back, bottom, top: true where the face looks into open air. The others
        are taken as covered flush by something adiabatic.

    Returns
    -------
    BoxGeometry
        Areas, lengths and angles of the faces and the data of the equivalent free body.
    """
    d = np.asarray(dims, dtype=np.float64)
    u = np.asarray(up, dtype=np.float64)
    u = u / np.sqrt(np.sum(u * u))
    is_open = np.asarray(open_faces, dtype=np.bool_)
    first, second = np.array([1, 0, 0])[_AXIS], np.array([2, 2, 1])[_AXIS]
    a, b = d[first], d[second]
    area = a * b
    up_cosine = np.clip(_NORMAL_SIGN * u[_AXIS], -1.0, 1.0)
    open_area = np.where(is_open, area, 0.0)
    covered = ~is_open
    mirrored = covered[0::2] | covered[1::2]
    body = d * np.where(mirrored, 2.0, 1.0)
    squeezed = bool(np.any(covered[0::2] & covered[1::2]))
    upright = float(np.prod(np.where(covered, 1.0 - up_cosine**2, 1.0)))
    return BoxGeometry(
        dims=d,
        up=u,
        open_faces=is_open,
        area=area,
        fall_length=fall_length(a, b, u[first], u[second]),
        area_perimeter_length=area / _open_perimeter(d, is_open),
        up_cosine=up_cosine,
        side_weights=_side_weights(area, up_cosine, is_open),
        open_share=open_area / max(float(open_area.sum()), 1e-300),
        open_area=open_area,
        body_area=2.0 * float(body[0] * body[1] + body[1] * body[2] + body[2] * body[0]),
        body_share=0.5 ** int(mirrored.sum()),
        gravity_function=float(cuboid_gravity_function_tilted(body, u)),
        scale_weight=0.0 if squeezed else upright,
    )


def shelter_factor(instability: ArrayLike, side_warmth: ArrayLike) -> FloatArray:
    """Share of its isolated-plate law that a face of a box keeps.

    With s the instability: vertical (0) 0.90; stable, linear to 0.95 at -1; unstable,
    ``0.90 (1 - s**2) + top s**2`` with ``top = 0.68 - 0.35 r``.

    Parameters
    ----------
    instability : array_like
        Cosine between outward normal and up for a warm face, its negative for a cold one [-].
    side_warmth : array_like
        Mean over the upright open faces of their rise over the rise of this one, between 0 (this
        face alone is warm) and 1 (isothermal or warmer sides) [-].

    Returns
    -------
    ndarray
        Share [-], broadcast shape.

    Notes
    -----
    The four constants are read off the numerical experiments made for this project (cuboids of
    aspect 1 to 5, laminar, uncertainty of a single face's share 4 to 20 %); nothing measured is
    behind them. Interpolation between the attitudes is ours.
    """
    s = np.asarray(instability, dtype=np.float64)
    r = np.asarray(side_warmth, dtype=np.float64)
    top = SHELTER_UNSTABLE_ALONE - (SHELTER_UNSTABLE_ALONE - SHELTER_UNSTABLE_ISOTHERMAL) * r
    unstable, stable = np.maximum(s, 0.0), np.maximum(-s, 0.0)
    change = (SHELTER_STABLE - SHELTER_VERTICAL) * stable
    drop = (top - SHELTER_VERTICAL) * (unstable * unstable)
    return np.asarray(SHELTER_VERTICAL + change + drop)


def _column(values: FloatArray, like: FloatArray) -> FloatArray:
    """Per-face values with as many trailing axes as the temperatures have."""
    return values.reshape((6,) + (1,) * (like.ndim - 1))


def _scale(
    rise: FloatArray, film_temperature: FloatArray, pressure: ArrayLike, box: BoxGeometry
) -> FloatArray:
    """Cuboid law over the sum of sheltered laminar plate laws, for the isothermal box."""
    share, cosine = _column(box.open_share, rise), _column(box.up_cosine, rise)
    size = np.sum(share * np.abs(rise), axis=0)
    warm = 0.5 + 0.5 * np.sum(share * rise, axis=0) / np.maximum(size, 1e-12)
    properties: Air = air(np.sum(share * film_temperature, axis=0), pressure)
    plate = inclined_parts(
        size,
        properties,
        _column(box.fall_length, rise),
        _column(box.area_perimeter_length, rise),
        cosine,
        laminar=True,
    )[0]
    square = size * size
    ratio = square / (square + RISE_WIDTH_K**2)
    sign = np.sqrt(ratio)
    # A cold face behaves like the warm face opposite, which has its area and its lengths.
    sides, open_area = box.side_weights.sum(axis=1), box.open_area
    warm_kept = shelter_factor(sign * cosine, _column(sides, rise) * ratio)
    cold_kept = shelter_factor(sign * cosine, _column(sides[_OPPOSITE], rise) * ratio)
    kept = warm_kept * _column(open_area, rise) * warm
    kept = kept + cold_kept * _column(open_area[_OPPOSITE], rise) * (1.0 - warm)
    length = np.sqrt(box.body_area)
    ra = rayleigh_number(soft_rise(size), length, properties)
    body = cuboid_nusselt(ra, properties.prandtl, box.gravity_function)
    whole = box.body_share * box.body_area / length * properties.conductivity * body
    return np.asarray(whole / np.sum(kept * plate, axis=0))


def box_film(
    face_temperature: ArrayLike, air_temperature: ArrayLike, pressure: ArrayLike, box: BoxGeometry
) -> BoxFilm:
    """Films of the six faces of a box in still open air.

    ``h_i = scale**w * shelter_i * h_plate,i``. The plate coefficient is that of `inclined_plate`
    with the face's own rise; `shelter_factor` says what the neighbours leave of it; the scale is
    the cuboid law (`cuboid_nusselt`) over the sum of the sheltered plate laws, both for the
    isothermal box at the mean rise and both laminar, so that it stays a statement about shape when
    the actual films are turbulent.

    Covered faces: those looking sideways count as a mirror (the doubled box by the cuboid law,
    divided again), those looking up or down take the scale away (``w = prod(1 - c**2)`` over the
    covered faces, c their cosine to up), and so do two opposite ones.

    Parameters
    ----------
    face_temperature : array_like, shape (6, ...)
        Outside temperatures of the faces in the order of `FACES` [K].
    air_temperature : array_like, shape (...)
        Air temperature [K].
    pressure : array_like, shape (...)
        Absolute pressure [Pa].
    box : BoxGeometry
        From `box_geometry`.

    Returns
    -------
    BoxFilm
        Coefficients and the groups for a range audit; zero coefficients where a face is not open.

    Notes
    -----
    Limiting cases: isothermal free box, the cuboid law exactly, down to the conduction of a cube
    without a temperature difference; wall-mounted box, half the law of the box mirrored in the
    wall; standing box, the sheltered plate laws alone. A cold box acts like a warm one upside down.
    Against the numerical experiments made for this project, totals within 10 %.

    References
    ----------
    Plate laws as `inclined_plate`; M. M. Yovanovich 1987 as `cuboid_gravity_function`; shelter as
    `shelter_factor`.
    """
    face = np.asarray(face_temperature, dtype=np.float64)
    ambient = np.asarray(air_temperature, dtype=np.float64)
    trailing = np.broadcast_shapes(face.shape[1:], ambient.shape, np.shape(pressure))
    if face.shape[1:] != trailing:
        face = face.reshape((6,) + (1,) * (len(trailing) + 1 - face.ndim) + face.shape[1:])
        face = np.broadcast_to(face, (6, *trailing))
    rise = face - ambient
    film_temperature = ambient + 0.5 * rise
    fall, span = _column(box.fall_length, rise), _column(box.area_perimeter_length, rise)
    cosine = _column(box.up_cosine, rise)
    properties = air(film_temperature, pressure)
    h, h_v, h_h, ra_v, ra_h = inclined_parts(rise, properties, fall, span, cosine)

    width2 = RISE_WIDTH_K**2
    warmth = rise[None] * (rise / (rise * rise + width2))[:, None]
    warmth = np.minimum(np.maximum(warmth, 0.0), 1.0)
    sides = np.einsum("ij,ij...->i...", box.side_weights, warmth)
    shelter = shelter_factor(soft_sign(rise, RISE_WIDTH_K) * cosine, sides)
    if box.scale_weight > 0.0 and box.open_faces.any():
        scale = _scale(rise, film_temperature, pressure, box)
        factor = scale if box.scale_weight == 1.0 else scale**box.scale_weight
    else:
        scale = factor = np.ones(rise.shape[1:])
    h = h * shelter * factor * _column(box.open_faces.astype(np.float64), rise)
    film = plate_audit(h, h_v, h_h, ra_v, ra_h, properties.conductivity, fall, span)
    return BoxFilm(h, shelter, scale, film.rayleigh, film.nusselt, film.length, film.law)
