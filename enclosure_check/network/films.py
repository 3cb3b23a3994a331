"""Free convection of the outer faces of the box to the air around it."""

from functools import cached_property
from typing import ClassVar, NamedTuple

import numpy as np

from enclosure_check.network.links import (
    NOMINAL_RISE_K,
    FloatArray,
    IntArray,
    Links,
)
from enclosure_check.physics.box import BoxGeometry, box_film
from enclosure_check.records import dataclass

# Step of a differenced derivative. Film laws are smooth over this width (their rounding at zero
# difference is 100 times wider), and rounding leaves eight digits. [K]
DIFFERENCE_K = 1e-4


class FilmAudit(NamedTuple):
    """Films with the groups of their laws; every field has shape (s, v)."""

    rise: FloatArray
    film_temperature: FloatArray
    coefficient: FloatArray
    rayleigh: FloatArray
    nusselt: FloatArray
    length: FloatArray
    law: IntArray


@dataclass(frozen=True, eq=False)
class BoxFilm(Links):
    """``f_s h_s A (T_a - T_b)`` from the cells of the outer faces to the air.

    A film belongs to a face, not to its cells: the coefficients follow from the means of all six
    faces and the air, and each cell passes heat with its own difference. Faces that are not open
    carry no heat.

    Attributes
    ----------
    surface
        Which face each cell belongs to, shape (m,).
    nodes
        Means of the six faces, and the air, shape (7,).
    area
        Area of each cell [m2], shape (m, 1).
    factor
        Multiplies each face's film; 1, or a draw within its accuracy; shape (6, 1).
    """

    surface: IntArray
    nodes: IntArray
    area: FloatArray
    factor: FloatArray
    pressure_pa: float
    geometry: BoxGeometry

    PARAMETERS: ClassVar[tuple[str, ...]] = ("area", "factor")

    @cached_property
    def stencil(self) -> IntArray:
        """Nodes each link depends on: cell, its air, all means and the air; shape (9, m)."""
        means = np.broadcast_to(self.nodes[:, None], (7, len(self.a)))
        return np.concatenate((np.stack((self.a, self.b)), means))

    def audit(self, rise: FloatArray, reference_k: FloatArray) -> FilmAudit:
        """Give the free films of the faces from the rises of ``nodes`` [K], shape (7, v)."""
        faces, air = rise[:6], rise[6]
        film = box_film(faces + reference_k, air + reference_k, self.pressure_pa, self.geometry)
        return FilmAudit(
            faces - air,
            reference_k + 0.5 * (faces + air),
            film.coefficient,
            film.rayleigh,
            film.nusselt,
            film.length,
            film.law,
        )

    def films(self, rise: FloatArray, reference_k: FloatArray, copies: int = 1) -> FloatArray:
        """Film coefficients of the faces from the rises of ``nodes`` [W/m2K], shape (6, c v).

        ``copies`` is how many copies c of the variants the rises hold, shape (7, c v).
        """
        film: FloatArray = copied(self.factor, copies) * self.audit(rise, reference_k).coefficient
        return film

    def heat(self, rise: FloatArray, reference_k: FloatArray) -> FloatArray:
        """Heat rate from each cell to the air [W], shape (m, v)."""
        film = self.films(rise[2:, 0], reference_k)
        heat: FloatArray = film[self.surface] * self.area * (rise[0] - rise[1])
        return heat

    def heat_by_rise(self, rise: FloatArray, reference_k: FloatArray) -> FloatArray:
        """Derivative of `heat` by each rise [W/K], shape (9, m, v).

        By the cell and its air analytic; by what the coefficients depend on, a difference.
        """
        own = rise[2:, 0]
        v = own.shape[1]
        # All shifted copies ride on the trailing axis: one evaluation instead of eight.
        shifted = np.repeat(own[:, None, :], 8, axis=1)
        steps = np.arange(7)
        shifted[steps, steps + 1, :] += DIFFERENCE_K
        copies = np.tile(np.broadcast_to(reference_k, (v,)), 8)
        film = self.films(shifted.reshape(7, 8 * v), copies, 8).reshape(6, 8, v)
        direct = film[:, 0][self.surface] * self.area
        by_node = np.moveaxis((film[:, 1:] - film[:, :1]) / DIFFERENCE_K, 1, 0)
        indirect = by_node[:, self.surface] * (self.area * (rise[0] - rise[1]))
        return np.concatenate((np.stack((direct, -direct)), indirect))

    def factors(self, reference_k: FloatArray) -> FloatArray:
        """Factors at a nominal rise [W/K], shape (9, m, 1)."""
        rise = np.full((7, 1), NOMINAL_RISE_K)
        rise[-1] = 0.0
        film = self.films(rise, reference_k)[:, :1]
        direct = film[self.surface] * self.area[:, :1]
        return np.concatenate((np.stack((direct, -direct)), np.zeros((7, *direct.shape))))

    def parameter_of(self, name: str) -> IntArray:
        """Which value of a parameter is each link's own: that of its face, or its own."""
        return self.surface if name == "factor" else np.arange(len(self.a))


def copied(values: FloatArray, copies: int) -> FloatArray:
    """Give values by variant (6, v) for copies of all variants (6, c v); one for all as it is."""
    return values if values.shape[1] == 1 else np.tile(values, copies)
