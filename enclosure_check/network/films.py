"""Free convection links: the film of a whole surface, shared out to the cells it is made of.

A film belongs to a surface, never to its cells: its coefficient follows from the surface's mean
temperature and its air's, and each cell passes heat with its own difference.
"""

from collections.abc import Callable
from dataclasses import dataclass, replace
from functools import cached_property
from typing import Any, ClassVar, NamedTuple

import numpy as np

from enclosure_check.network.links import (
    NOMINAL_RISE_K,
    FloatArray,
    IntArray,
    Links,
)
from enclosure_check.physics.bodies import cuboid_film
from enclosure_check.physics.box import BoxGeometry, box_film
from enclosure_check.physics.plates import inclined_plate

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
class Films(Links):
    """``f_s h_s A (T_a - T_b)`` from cells to air, h_s by the law of the cell's surface.

    Attributes
    ----------
    surface
        Which surface each cell belongs to, shape (m,).
    nodes
        Nodes the surfaces' coefficients depend on, shape (n, s): the mean and the air, or all
        the faces of a box and the air.
    area
        Area of each cell [m2], shape (m, 1).
    factor
        Multiplies each surface's law; 1, or a draw within its accuracy; shape (s, 1).
    """

    surface: IntArray
    nodes: IntArray
    area: FloatArray
    factor: FloatArray
    pressure_pa: float

    PARAMETERS: ClassVar[tuple[str, ...]] = ("area", "factor")
    SURFACE_PARAMETERS: ClassVar[frozenset[str]] = frozenset({"factor"})

    @property
    def stencil(self) -> IntArray:
        """Nodes each link depends on: cell, its air, its surface's nodes; shape (2 + n, m)."""
        return np.concatenate((np.stack((self.a, self.b)), self.nodes[:, self.surface]))

    def audit(self, rise: FloatArray, reference_k: FloatArray) -> FilmAudit:
        """Give the films of the surfaces.

        Parameters
        ----------
        rise
            Rises of the surfaces' nodes [K], shape (n, s, v).
        reference_k
            Temperature the rises count from [K], shape (v,).
        """
        raise NotImplementedError

    def surface_rise(self, rise: FloatArray) -> FloatArray:
        """Pick the rises of the surfaces' nodes (n, s, v) out of the stencil's (2 + n, m, v)."""
        return rise[2:, self._first_cell]

    def surface_value(self, values: IntArray) -> IntArray:
        """Pick one value per surface out of one per cell, shape (s,)."""
        return values[self._first_cell]

    @cached_property
    def _first_cell(self) -> IntArray:
        """One cell of each surface, shape (s,)."""
        first = np.zeros(self.nodes.shape[1], dtype=np.intp)
        first[self.surface[::-1]] = np.arange(len(self.surface) - 1, -1, -1)
        return first

    def heat(self, rise: FloatArray, reference_k: FloatArray) -> FloatArray:
        """Heat rate from each cell to the air [W], shape (m, v)."""
        film = self.factor * self.audit(self.surface_rise(rise), reference_k).coefficient
        heat: FloatArray = film[self.surface] * self.area * (rise[0] - rise[1])
        return heat

    def heat_by_rise(self, rise: FloatArray, reference_k: FloatArray) -> FloatArray:
        """Derivative of `heat` by each rise [W/K], shape (2 + n, m, v).

        By the cell and its air analytic; by what the coefficients depend on, a difference.
        """
        own = self.surface_rise(rise)
        n, s, v = own.shape
        # All shifted copies ride on the trailing axis: one evaluation instead of n + 1.
        shifted = np.repeat(own[:, :, None, :], n + 1, axis=2)
        steps = np.arange(n)
        shifted[steps, :, steps + 1, :] += DIFFERENCE_K
        copies = np.tile(np.broadcast_to(reference_k, (v,)), n + 1)
        several = self._repeated(n + 1, v)
        film = several.audit(shifted.reshape(n, s, (n + 1) * v), copies).coefficient
        film = (several.factor * film).reshape(s, n + 1, v)
        direct = film[:, 0][self.surface] * self.area
        by_node = np.moveaxis((film[:, 1:] - film[:, :1]) / DIFFERENCE_K, 1, 0)
        indirect = by_node[:, self.surface] * (self.area * (rise[0] - rise[1]))
        return np.concatenate((np.stack((direct, -direct)), indirect))

    def factors(self, reference_k: FloatArray) -> FloatArray:
        """Factors at a nominal rise [W/K], shape (2 + n, m, 1)."""
        n, s = self.nodes.shape
        rise = np.full((n, s, 1), NOMINAL_RISE_K)
        rise[-1] = 0.0
        one = self._first_variant()
        film = one.factor * one.audit(rise, reference_k).coefficient
        direct = film[self.surface] * one.area
        return np.concatenate((np.stack((direct, -direct)), np.zeros((n, *direct.shape))))

    def parameter_of(self, name: str) -> IntArray:
        """Which value of a parameter is each link's own: that of its surface, or its own."""
        return self.surface if name in self.SURFACE_PARAMETERS else np.arange(len(self.a))

    def _changed(self, change: Callable[[FloatArray], FloatArray]) -> Any:
        changed: dict[str, Any] = {
            name: change(getattr(self, name))
            for name in self.PARAMETERS
            if getattr(self, name).shape[-1] > 1
        }
        return replace(self, **changed) if changed else self

    def _repeated(self, copies: int, variants: int) -> Any:
        """Repeat parameters that differ by variant, to go with repeated rises."""
        if variants == 1:
            return self
        return self._changed(lambda value: np.tile(value, (1, copies)))

    def _first_variant(self) -> Any:
        return self._changed(lambda value: value[:, :1])


@dataclass(frozen=True, eq=False)
class PlateFilm(Films):
    """Free convection of plane faces, by their tilt and sign."""

    fall_length: FloatArray
    area_perimeter_length: FloatArray
    up_cosine: FloatArray

    PARAMETERS: ClassVar[tuple[str, ...]] = (
        "area",
        "factor",
        "fall_length",
        "area_perimeter_length",
        "up_cosine",
    )
    SURFACE_PARAMETERS: ClassVar[frozenset[str]] = frozenset(PARAMETERS) - {"area"}

    def audit(self, rise: FloatArray, reference_k: FloatArray) -> FilmAudit:
        """Give the films of the surfaces."""
        difference = rise[0] - rise[1]
        film_temperature = reference_k + 0.5 * (rise[0] + rise[1])
        film = inclined_plate(
            difference,
            film_temperature,
            self.pressure_pa,
            self.fall_length,
            self.area_perimeter_length,
            self.up_cosine,
        )
        return FilmAudit(difference, film_temperature, *film)


@dataclass(frozen=True, eq=False)
class BodyFilm(Films):
    """Free convection of small bodies, by the cuboid law."""

    body_area: FloatArray
    """Area the law is formed with: that of the body and its mirror images [m2]."""
    gravity_function: FloatArray

    PARAMETERS: ClassVar[tuple[str, ...]] = ("area", "factor", "body_area", "gravity_function")
    SURFACE_PARAMETERS: ClassVar[frozenset[str]] = frozenset(PARAMETERS) - {"area"}
    LAW: ClassVar[int] = 3

    def audit(self, rise: FloatArray, reference_k: FloatArray) -> FilmAudit:
        """Give the films of the bodies."""
        difference = rise[0] - rise[1]
        film_temperature = reference_k + 0.5 * (rise[0] + rise[1])
        film = cuboid_film(
            difference, film_temperature, self.pressure_pa, self.body_area, self.gravity_function
        )
        law = np.full(difference.shape, self.LAW, dtype=np.intp)
        return FilmAudit(difference, film_temperature, *film, law)


@dataclass(frozen=True, eq=False)
class BoxFilm(Films):
    """Free convection of the six outer faces of one box to the air around it.

    Each face's film depends on the means of all of them. Faces that are not open carry no heat.
    """

    geometry: BoxGeometry

    def audit(self, rise: FloatArray, reference_k: FloatArray) -> FilmAudit:
        """Give the films of the faces."""
        # Every column is the same: the six faces and the air.
        faces, air = rise[:6, 0], rise[6, 0]
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
