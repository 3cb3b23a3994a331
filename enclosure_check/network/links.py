"""Kinds of links: heat rate as a function of temperatures and parameters, as flat arrays.

Every kind holds all links of its kind in the network. Temperatures come as rises over a reference
(the surrounding air), so that small differences keep their digits. Shapes: ``m`` links of a
kind, each depending on ``k`` nodes, ``v`` variants computed at once on the trailing axis.
"""

from dataclasses import dataclass, replace
from typing import Any, ClassVar, NamedTuple, Protocol, Self

import numpy as np
import numpy.typing as npt

from enclosure_check.physics.bodies import cuboid_film
from enclosure_check.physics.box import BoxGeometry, box_film
from enclosure_check.physics.plates import inclined_plate
from enclosure_check.physics.radiation import (
    STEFAN_BOLTZMANN,
    grey_exchange,
    grey_exchange_by_emissivity,
)

FloatArray = npt.NDArray[np.float64]
IntArray = npt.NDArray[np.intp]

# Step of a differenced derivative. Film laws are smooth over this width (their rounding at zero
# difference is 100 times wider), and rounding leaves eight digits. [K]
DIFFERENCE_K = 1e-4
# Relative step for derivatives by a parameter.
DIFFERENCE_SHARE = 1e-6


class LinkLabel(NamedTuple):
    """Whose link it is (``part:U1``) and what it does (``radiation_outside``)."""

    owner: str
    role: str


class FilmAudit(NamedTuple):
    """What the range audit needs of a film; every field has shape (m, v), laws are names."""

    rise: FloatArray
    film_temperature: FloatArray
    coefficient: FloatArray
    rayleigh: FloatArray
    nusselt: FloatArray
    length: FloatArray
    law: IntArray


class LinkKind(Protocol):
    """What assembly and solve ask of a kind of link."""

    PARAMETERS: ClassVar[tuple[str, ...]]

    @property
    def a(self) -> IntArray:
        """Node the heat leaves, shape (m,)."""

    @property
    def b(self) -> IntArray:
        """Node the heat enters, shape (m,)."""

    @property
    def stencil(self) -> IntArray:
        """Nodes each link depends on, shape (k, m)."""

    @property
    def labels(self) -> tuple[LinkLabel, ...]:
        """One label per link."""

    def heat(self, rise: FloatArray, reference_k: FloatArray) -> FloatArray:
        """Heat rate from ``a`` to ``b`` [W], shape (m, v).

        Parameters
        ----------
        rise
            Rises of the stencil's nodes [K], shape (k, m, v).
        reference_k
            Temperature the rises count from [K], shape (v,).
        """

    def heat_by_rise(self, rise: FloatArray, reference_k: FloatArray) -> FloatArray:
        """Derivative of `heat` by each rise of the stencil [W/K], shape (k, m, v)."""

    def heat_by_parameter(self, rise: FloatArray, reference_k: FloatArray, name: str) -> FloatArray:
        """Derivative of `heat` by the link's own value of a parameter, shape (m, v)."""

    def with_parameter(self, name: str, value: FloatArray) -> Self:
        """Give the same links with other values of a parameter, shape (m, 1) or (m, v)."""

    def first_variant(self) -> Self:
        """Give the links of the first variant alone."""


@dataclass(frozen=True, eq=False)
class _Links:
    """Links between two nodes each."""

    a: IntArray
    b: IntArray
    labels: tuple[LinkLabel, ...]

    PARAMETERS: ClassVar[tuple[str, ...]] = ()

    @property
    def stencil(self) -> IntArray:
        """Nodes each link depends on, shape (k, m)."""
        return np.stack((self.a, self.b))

    def heat(self, rise: FloatArray, reference_k: FloatArray) -> FloatArray:
        """Heat rate from ``a`` to ``b`` [W], shape (m, v)."""
        raise NotImplementedError

    def heat_by_rise(self, rise: FloatArray, reference_k: FloatArray) -> FloatArray:
        """Derivative of `heat` by each rise, by differences of the same function [W/K]."""
        k, m, v = rise.shape
        # All shifted copies ride on the trailing axis: one evaluation instead of k + 1.
        shifted = np.repeat(rise[:, :, None, :], k + 1, axis=2)
        for index in range(k):
            shifted[index, :, index + 1, :] += DIFFERENCE_K
        copies = np.tile(np.broadcast_to(reference_k, (v,)), k + 1)
        heat = self._repeated(k + 1, v).heat(shifted.reshape(k, m, (k + 1) * v), copies)
        heat = heat.reshape(m, k + 1, v)
        return np.moveaxis((heat[:, 1:, :] - heat[:, :1, :]) / DIFFERENCE_K, 1, 0)

    def heat_by_parameter(self, rise: FloatArray, reference_k: FloatArray, name: str) -> FloatArray:
        """Derivative of `heat` by a parameter, by a difference of the same function."""
        value = getattr(self, name)
        step = DIFFERENCE_SHARE * np.maximum(np.abs(value), 1e-3)
        moved = self.with_parameter(name, value + step)
        slope: FloatArray = (moved.heat(rise, reference_k) - self.heat(rise, reference_k)) / step
        return slope

    def with_parameter(self, name: str, value: FloatArray) -> Self:
        """Give the same links with other values of a parameter, shape (m, 1) or (m, v)."""
        if name not in self.PARAMETERS:
            raise KeyError(f"{type(self).__name__} has no parameter {name!r}")
        changed: dict[str, Any] = {name: value}
        return replace(self, **changed)

    def first_variant(self) -> Self:
        """Give the links of the first variant alone."""
        changed: dict[str, Any] = {
            name: getattr(self, name)[:, :1]
            for name in self.PARAMETERS
            if getattr(self, name).shape[-1] > 1
        }
        return replace(self, **changed) if changed else self

    def _repeated(self, copies: int, variants: int) -> Self:
        """Repeat parameters that differ by variant, to go with repeated rises."""
        changed: dict[str, Any] = {
            name: np.tile(getattr(self, name), (1, copies))
            for name in self.PARAMETERS
            if variants > 1 and getattr(self, name).shape[-1] == variants
        }
        return replace(self, **changed) if changed else self


@dataclass(frozen=True, eq=False)
class Conduction(_Links):
    """Heat conduction: ``G (T_a - T_b)``."""

    conductance: FloatArray
    """[W/K], shape (m, 1) or (m, v)."""

    PARAMETERS: ClassVar[tuple[str, ...]] = ("conductance",)

    def heat(self, rise: FloatArray, reference_k: FloatArray) -> FloatArray:
        """Heat rate from ``a`` to ``b`` [W], shape (m, v)."""
        heat: FloatArray = self.conductance * (rise[0] - rise[1])
        return heat

    def heat_by_rise(self, rise: FloatArray, reference_k: FloatArray) -> FloatArray:
        """Derivative of `heat` by each rise [W/K], shape (2, m, v)."""
        g = np.broadcast_to(self.conductance, rise.shape[1:])
        return np.stack((g, -g))

    def heat_by_parameter(self, rise: FloatArray, reference_k: FloatArray, name: str) -> FloatArray:
        """Derivative of `heat` by the conductance [K], shape (m, v)."""
        if name != "conductance":
            raise KeyError(f"Conduction has no parameter {name!r}")
        difference: FloatArray = rise[0] - rise[1]
        return difference


@dataclass(frozen=True, eq=False)
class Radiation(_Links):
    """Grey-diffuse radiation: ``s C sigma (T_a^4 - T_b^4)``, C the surface and space in series.

    ``C = 1 / (1/X + (1 - e) / (e A))`` with the exchange area X of the space and the share s of
    it that ``b`` takes.
    """

    area: FloatArray
    exchange_area: FloatArray
    share: FloatArray
    emissivity: FloatArray

    PARAMETERS: ClassVar[tuple[str, ...]] = ("area", "exchange_area", "share", "emissivity")

    def heat(self, rise: FloatArray, reference_k: FloatArray) -> FloatArray:
        """Heat rate from ``a`` to ``b`` [W], shape (m, v)."""
        heat: FloatArray = self._conductance() * _fourth_power_difference(rise, reference_k)
        return heat

    def heat_by_rise(self, rise: FloatArray, reference_k: FloatArray) -> FloatArray:
        """Derivative of `heat` by each rise [W/K], shape (2, m, v)."""
        absolute = rise + reference_k
        slope = 4.0 * self._conductance() * (absolute * absolute * absolute)
        slope[1] *= -1.0
        return slope

    def heat_by_parameter(self, rise: FloatArray, reference_k: FloatArray, name: str) -> FloatArray:
        """Derivative of `heat` by a parameter, analytic by the emissivity."""
        if name != "emissivity":
            return super().heat_by_parameter(rise, reference_k, name)
        slope = grey_exchange_by_emissivity(self.area, self.exchange_area, self.emissivity)
        by_emissivity: FloatArray = STEFAN_BOLTZMANN * self.share * slope
        by_emissivity = by_emissivity * _fourth_power_difference(rise, reference_k)
        return by_emissivity

    def _conductance(self) -> FloatArray:
        exchange = grey_exchange(self.area, self.exchange_area, self.emissivity)
        conductance: FloatArray = STEFAN_BOLTZMANN * self.share * exchange
        return conductance


def _fourth_power_difference(rise: FloatArray, reference_k: FloatArray) -> FloatArray:
    """``T_a^4 - T_b^4``, factored so that equal temperatures give exactly zero."""
    a, b = rise[0] + reference_k, rise[1] + reference_k
    difference: FloatArray = (rise[0] - rise[1]) * (a + b) * (a * a + b * b)
    return difference


@dataclass(frozen=True, eq=False)
class PlateFilm(_Links):
    """Free convection of a plane face to air: ``f h A (T_a - T_b)``, h by the face's tilt."""

    area: FloatArray
    factor: FloatArray
    """Multiplies the law; 1, or a draw within its accuracy."""
    fall_length: FloatArray
    area_perimeter_length: FloatArray
    up_cosine: FloatArray
    pressure_pa: float

    PARAMETERS: ClassVar[tuple[str, ...]] = (
        "area",
        "factor",
        "fall_length",
        "area_perimeter_length",
        "up_cosine",
    )

    def heat(self, rise: FloatArray, reference_k: FloatArray) -> FloatArray:
        """Heat rate from ``a`` to ``b`` [W], shape (m, v)."""
        audit = self.audit(rise, reference_k)
        return self.factor * self.area * audit.coefficient * audit.rise

    def audit(self, rise: FloatArray, reference_k: FloatArray) -> FilmAudit:
        """Give the films with the groups of their laws."""
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
class BodyFilm(_Links):
    """Free convection of a small body to air: ``f h A (T_a - T_b)``, h by the cuboid law."""

    area: FloatArray
    factor: FloatArray
    body_area: FloatArray
    """Area the law is formed with: that of the body and its mirror images [m2]."""
    gravity_function: FloatArray
    pressure_pa: float

    PARAMETERS: ClassVar[tuple[str, ...]] = ("area", "factor", "body_area", "gravity_function")
    LAW: ClassVar[int] = 3

    def heat(self, rise: FloatArray, reference_k: FloatArray) -> FloatArray:
        """Heat rate from ``a`` to ``b`` [W], shape (m, v)."""
        audit = self.audit(rise, reference_k)
        return self.factor * self.area * audit.coefficient * audit.rise

    def audit(self, rise: FloatArray, reference_k: FloatArray) -> FilmAudit:
        """Give the films with the groups of their laws."""
        difference = rise[0] - rise[1]
        film_temperature = reference_k + 0.5 * (rise[0] + rise[1])
        film = cuboid_film(
            difference, film_temperature, self.pressure_pa, self.body_area, self.gravity_function
        )
        law = np.full(difference.shape, self.LAW, dtype=np.intp)
        return FilmAudit(difference, film_temperature, *film, law)


@dataclass(frozen=True, eq=False)
class BoxFilm(_Links):
    """Free convection of the six outer faces of one box to the air around it.

    Each face's film depends on the temperatures of all of them, so the stencil of every link is
    the six faces and the air. Faces that are not open carry no heat.
    """

    geometry: BoxGeometry
    factor: FloatArray
    pressure_pa: float

    PARAMETERS: ClassVar[tuple[str, ...]] = ("factor",)

    @property
    def stencil(self) -> IntArray:
        """Nodes each link depends on, shape (7, 6)."""
        nodes = np.append(self.a, self.b[0])
        return np.repeat(nodes[:, None], len(self.a), axis=1)

    def heat(self, rise: FloatArray, reference_k: FloatArray) -> FloatArray:
        """Heat rate from each face to the air [W], shape (6, v)."""
        audit = self.audit(rise, reference_k)
        return self.factor * self.geometry.area[:, None] * audit.coefficient * audit.rise

    def audit(self, rise: FloatArray, reference_k: FloatArray) -> FilmAudit:
        """Give the films with the groups of their laws."""
        # Every column of the stencil is the same: the faces and the air.
        faces, air = rise[:6, 0], rise[6, 0]
        film = box_film(faces + reference_k, air + reference_k, self.pressure_pa, self.geometry)
        difference = faces - air
        film_temperature = reference_k + 0.5 * (faces + air)
        return FilmAudit(
            difference,
            film_temperature,
            film.coefficient,
            film.rayleigh,
            film.nusselt,
            film.length,
            film.law,
        )
