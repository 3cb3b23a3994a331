"""Kinds of links: heat rate as a function of temperatures and parameters, as flat arrays.

Every kind holds all links of its kind in the network. Temperatures come as rises over a reference
(the surrounding air), so that small differences keep their digits. Shapes: ``m`` links of a
kind, each depending on ``k`` nodes, ``v`` variants computed at once on the trailing axis.
"""

from functools import cached_property
from typing import Any, ClassVar, NamedTuple, Protocol, Self

import numpy as np
import numpy.typing as npt

from enclosure_check.physics.radiation import (
    STEFAN_BOLTZMANN,
    grey_exchange,
    grey_exchange_by_emissivity,
)
from enclosure_check.records import dataclass, replace

FloatArray = npt.NDArray[np.float64]
IntArray = npt.NDArray[np.intp]

# Relative step for derivatives by a parameter.
DIFFERENCE_SHARE = 1e-6
# Rise at which links that are not linear are taken for the first guess. [K]
NOMINAL_RISE_K = 10.0


class LinkLabel(NamedTuple):
    """Whose link it is (``part:U1``) and what it does (``radiation_outside``)."""

    owner: str
    role: str


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
    def label(self) -> IntArray:
        """Number of each link's label in the network's table, shape (m,)."""

    @property
    def pattern(self) -> tuple[IntArray, IntArray]:
        """Link and node of every derivative, shapes (d,)."""

    def evaluate(self, rise: FloatArray, reference_k: FloatArray) -> FloatArray:
        """Heat rate from ``a`` to ``b`` [W], shape (m, v).

        Parameters
        ----------
        rise
            Rises of all nodes [K], shape (n, v).
        reference_k
            Temperature the rises count from [K], shape (v,).
        """

    def slopes(self, rise: FloatArray, reference_k: FloatArray) -> FloatArray:
        """Derivatives of `evaluate` in the order of `pattern` [W/K], shape (d, v)."""

    def nominal(self, reference_k: FloatArray) -> FloatArray:
        """Factors of a linear link that behaves so at a nominal rise [W/K], shape (d, 1)."""

    def with_parameter(self, name: str, value: FloatArray) -> Self:
        """Give the same links with other values of a parameter, shape (p, 1) or (p, v)."""

    def stirred(self, share: float) -> Self:
        """Give the links with the inside air stirred by a share of what its films carry."""


@dataclass(frozen=True, eq=False)
class Links:
    """What all kinds have: two ends and a label each."""

    a: IntArray
    b: IntArray
    label: IntArray

    PARAMETERS: ClassVar[tuple[str, ...]] = ()

    @property
    def stencil(self) -> IntArray:
        """Nodes each link depends on, shape (k, m)."""
        return np.stack((self.a, self.b))

    @cached_property
    def pattern(self) -> tuple[IntArray, IntArray]:
        """Link and node of every derivative, shapes (k m,)."""
        stencil = self.stencil
        link = np.broadcast_to(np.arange(stencil.shape[1]), stencil.shape)
        return link.ravel(), stencil.ravel()

    def evaluate(self, rise: FloatArray, reference_k: FloatArray) -> FloatArray:
        """Heat rate from ``a`` to ``b`` [W] from the rises of all nodes (n, v), shape (m, v)."""
        return self.heat(rise[self.stencil], reference_k)

    def slopes(self, rise: FloatArray, reference_k: FloatArray) -> FloatArray:
        """Derivatives of `evaluate` in the order of `pattern` [W/K], shape (k m, v)."""
        slopes = self.heat_by_rise(rise[self.stencil], reference_k)
        return slopes.reshape(-1, rise.shape[1])

    def nominal(self, reference_k: FloatArray) -> FloatArray:
        """Factors of a linear link that behaves so at a nominal rise [W/K], shape (k m, 1)."""
        return self.factors(reference_k).reshape(-1, 1)

    def heat(self, rise: FloatArray, reference_k: FloatArray) -> FloatArray:
        """Heat rate from ``a`` to ``b`` [W] from the rises of the stencil (k, m, v), (m, v)."""
        raise NotImplementedError  # every kind has its own law

    def heat_by_rise(self, rise: FloatArray, reference_k: FloatArray) -> FloatArray:
        """Derivative of `heat` by each rise of the stencil [W/K], shape (k, m, v)."""
        raise NotImplementedError  # every kind has its own law

    def factors(self, reference_k: FloatArray) -> FloatArray:
        """Factors of the stencil's rises at a nominal rise [W/K], shape (k, m, 1)."""
        raise NotImplementedError  # every kind has its own law

    def heat_by_parameter(self, rise: FloatArray, reference_k: FloatArray, name: str) -> FloatArray:
        """Derivative of `heat` by a parameter, by a difference of the same function."""
        value = getattr(self, name)
        step = DIFFERENCE_SHARE * np.maximum(np.abs(value), 1e-3)
        moved = self.with_parameter(name, value + step)
        change = moved.heat(rise, reference_k) - self.heat(rise, reference_k)
        slope: FloatArray = change / step[self.parameter_of(name)]
        return slope

    def stirred(self, share: float) -> Self:
        """Give the links with the inside air stirred: the same, where no air is in them."""
        return self

    def parameter_of(self, name: str) -> IntArray:
        """Which value of a parameter is each link's own: its own one, unless said otherwise."""
        return np.arange(len(self.a))

    def with_parameter(self, name: str, value: FloatArray) -> Self:
        """Give the same links with other values of a parameter, shape (p, 1) or (p, v)."""
        if name not in self.PARAMETERS:
            raise KeyError(f"{type(self).__name__} has no parameter {name!r}")
        changed: dict[str, Any] = {name: value}
        return replace(self, **changed)


@dataclass(frozen=True, eq=False)
class Conduction(Links):
    """Heat that goes with one difference of temperatures: ``G (T_x - T_y)``.

    For plain conduction x and y are the ends themselves. A source spread evenly over cells
    follows the mean of the cells, not each cell; a mean over cells is kept by a balance of its own.
    """

    x: IntArray
    y: IntArray
    conductance: FloatArray
    """[W/K], shape (m, 1) or (m, v)."""

    PARAMETERS: ClassVar[tuple[str, ...]] = ("conductance",)

    @cached_property
    def stencil(self) -> IntArray:
        """Nodes each link depends on, shape (2, m)."""
        return np.stack((self.x, self.y))

    def heat(self, rise: FloatArray, reference_k: FloatArray) -> FloatArray:
        """Heat rate from ``a`` to ``b`` [W], shape (m, v)."""
        heat: FloatArray = self.conductance * (rise[0] - rise[1])
        return heat

    def heat_by_rise(self, rise: FloatArray, reference_k: FloatArray) -> FloatArray:
        """Derivative of `heat` by each rise [W/K], shape (2, m, v)."""
        g = np.broadcast_to(self.conductance, rise.shape[1:])
        return np.stack((g, -g))

    def factors(self, reference_k: FloatArray) -> FloatArray:
        """Factors of the link itself [W/K], shape (2, m, 1)."""
        g = self.conductance[:, :1]
        return np.stack((g, -g))

    def heat_by_parameter(self, rise: FloatArray, reference_k: FloatArray, name: str) -> FloatArray:
        """Derivative of `heat` by the conductance [K], shape (m, v)."""
        if name != "conductance":
            raise KeyError(f"Conduction has no parameter {name!r}")
        difference: FloatArray = rise[0] - rise[1]
        return difference


@dataclass(frozen=True, eq=False)
class Radiation(Links):
    """Grey-diffuse radiation: ``s C sigma (T_x^4 - T_y^4)``, C the surface and space in series.

    ``C = 1 / (1/X + (1 - e) / (e A))`` with the exchange area X of the space and the share s of
    it that ``b`` takes; x and y are the ends themselves unless it keeps a mean (see `Conduction`).
    """

    x: IntArray
    y: IntArray
    area: FloatArray
    exchange_area: FloatArray
    share: FloatArray
    emissivity: FloatArray

    PARAMETERS: ClassVar[tuple[str, ...]] = ("area", "exchange_area", "share", "emissivity")

    @cached_property
    def stencil(self) -> IntArray:
        """Nodes each link depends on, shape (2, m)."""
        return np.stack((self.x, self.y))

    def heat(self, rise: FloatArray, reference_k: FloatArray) -> FloatArray:
        """Heat rate from ``a`` to ``b`` [W], shape (m, v)."""
        heat: FloatArray = self._conductance * fourth_power_difference(rise, reference_k)
        return heat

    def heat_by_rise(self, rise: FloatArray, reference_k: FloatArray) -> FloatArray:
        """Derivative of `heat` by each rise [W/K], shape (2, m, v)."""
        absolute = rise + reference_k
        slope = 4.0 * self._conductance * (absolute * absolute * absolute)
        slope[1] *= -1.0
        return slope

    def factors(self, reference_k: FloatArray) -> FloatArray:
        """Factors at a nominal rise [W/K], shape (2, m, 1)."""
        slope = 4.0 * self._conductance[:, :1] * (reference_k + NOMINAL_RISE_K) ** 3
        return np.stack((slope, -slope))

    def heat_by_parameter(self, rise: FloatArray, reference_k: FloatArray, name: str) -> FloatArray:
        """Derivative of `heat` by a parameter, analytic by the emissivity."""
        if name != "emissivity":
            return super().heat_by_parameter(rise, reference_k, name)
        slope = grey_exchange_by_emissivity(self.area, self.exchange_area, self.emissivity)
        by_emissivity: FloatArray = STEFAN_BOLTZMANN * self.share * slope
        by_emissivity = by_emissivity * fourth_power_difference(rise, reference_k)
        return by_emissivity

    @cached_property
    def _conductance(self) -> FloatArray:
        """[W/K4], shape (m, 1) or (m, v)."""
        exchange = grey_exchange(self.area, self.exchange_area, self.emissivity)
        conductance: FloatArray = STEFAN_BOLTZMANN * self.share * exchange
        return conductance


@dataclass(frozen=True, eq=False)
class PatchExchange(Links):
    """Radiosity exchanged between two patches: ``X sigma (J_a - J_b)``, X the exchange area.

    ``a`` and ``b`` are the irradiation nodes of the patches, ``c`` and ``d`` their emission nodes:
    a patch sends out ``J = (1 - e) T_irradiation^4 + e T_emission^4`` with its mean emissivity e.
    """

    c: IntArray
    d: IntArray
    exchange_area: FloatArray
    emissivity_a: FloatArray
    emissivity_b: FloatArray

    PARAMETERS: ClassVar[tuple[str, ...]] = ("exchange_area", "emissivity_a", "emissivity_b")

    @cached_property
    def stencil(self) -> IntArray:
        """Nodes each link depends on, shape (4, m)."""
        return np.stack((self.a, self.b, self.c, self.d))

    def heat(self, rise: FloatArray, reference_k: FloatArray) -> FloatArray:
        """Heat rate from ``a`` to ``b`` [W], shape (m, v)."""
        # Counted from the fourth power of the irradiation at b, so that equal rises give zero.
        by_a = fourth_power_difference(rise[[0, 1]], reference_k)
        by_c = fourth_power_difference(rise[[2, 1]], reference_k)
        by_d = fourth_power_difference(rise[[3, 1]], reference_k)
        sent: FloatArray = (1 - self.emissivity_a) * by_a + self.emissivity_a * by_c
        sent = sent - self.emissivity_b * by_d
        return STEFAN_BOLTZMANN * self.exchange_area * sent

    def heat_by_rise(self, rise: FloatArray, reference_k: FloatArray) -> FloatArray:
        """Derivative of `heat` by each rise [W/K], shape (4, m, v)."""
        absolute = rise + reference_k
        slope: FloatArray = absolute * absolute * absolute * self._factors()
        return slope

    def factors(self, reference_k: FloatArray) -> FloatArray:
        """Factors at a nominal rise [W/K], shape (4, m, 1)."""
        slope: FloatArray = self._factors()[:, :, :1] * (reference_k + NOMINAL_RISE_K) ** 3
        return slope

    def _factors(self) -> FloatArray:
        a, b = self.emissivity_a, self.emissivity_b
        share = np.stack(np.broadcast_arrays(1 - a, b - 1, a, -b))
        factors: FloatArray = 4.0 * STEFAN_BOLTZMANN * self.exchange_area * share
        return factors


def fourth_power_difference(rise: FloatArray, reference_k: FloatArray) -> FloatArray:
    """``T_0^4 - T_1^4``, factored so that equal temperatures give exactly zero."""
    a, b = rise[0] + reference_k, rise[1] + reference_k
    difference: FloatArray = (rise[0] - rise[1]) * (a + b) * (a * a + b * b)
    return difference
