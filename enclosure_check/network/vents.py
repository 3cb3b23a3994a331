"""Air that comes and goes through openings: what it carries, and how it passes through the box.

Flows follow from the temperatures of the inside air alone (`physics.vent_flow`), so they are no
unknowns of the network. Air that leaves takes the heat of the air at its height along. Air that
comes in is as warm as that outside: it falls through inside air warmer than itself (or rises
through colder), takes inside air along on its way as a plume does, which warms it until it stays,
and what falls past a height has to rise past it in the air around.
"""

from functools import cached_property
from typing import ClassVar, NamedTuple

import numpy as np

from enclosure_check.network.films import DIFFERENCE_K
from enclosure_check.network.links import NOMINAL_RISE_K, FloatArray, IntArray
from enclosure_check.physics.air import GRAVITY, air
from enclosure_check.physics.vent_exchange import exchange_flow
from enclosure_check.physics.vent_flow import VentFlows, balanced_flows
from enclosure_check.physics.vent_streams import plume_growth, sinking_share
from enclosure_check.records import dataclass, replace

# The loss of an opening is taken as linear below this velocity at least. [m/s]
SLOW_M_PER_S = 1e-3


class VentState(NamedTuple):
    """Flows of c cases; s pieces of openings, j = n - 1 steps between air nodes."""

    leaving: FloatArray
    """Mass that leaves by each piece [kg/s], shape (s, c)."""
    entering: FloatArray
    """Mass that comes in [kg/s], shape (s, c)."""
    head: FloatArray
    """Excess of pressure inside over outside at the air nodes [Pa], shape (n, c)."""
    column: FloatArray
    """Mass that rises in the air past each step, streams not counted [kg/s], shape (j, c)."""
    stream_heat: FloatArray
    """Heat that streams of outside air carry upwards past each step [W], shape (j, c)."""
    heat_capacity: FloatArray
    """Of the air [J/(kg K)], shape (c,)."""


@dataclass(frozen=True, eq=False)
class Vents:
    """All openings of one box.

    Attributes
    ----------
    air
        Air nodes from the bottom up, shape (n,).
    ambient
        Node of the surrounding air.
    spacing
        Distance of the air nodes along gravity [m].
    names
        Of the openings, o of them, by wall.
    opening
        Which opening each piece belongs to, shape (s,).
    hat
        Shares of the air nodes in the air at the height of each piece, shape (s, n).
    area
        Free area of each piece [m2], shape (s, 1).
    loss, viscous, filter
        Of each opening, shape (o, 1): loss coefficient on the velocity in the free area at large
        Reynolds number [-], what viscosity adds over hole diameter [1/m], a filter's loss [Pa s/m].
    radius
        Of the jet that comes in by each opening, taken as round [m], shape (o, 1).
    exchange_diameter, exchange_count, level_cosine
        Diameter of what exchanges two ways at once [m], how many of them, and the cosine between
        outward normal and up; (o, 1).
    exchange_depth
        Length of such an opening along its normal [m], shape (o, 1).
    passage_loss, passage_friction
        Of boards in the way between air nodes: K/(2 A^2) [1/m4], and pressure over mass flow and
        kinematic viscosity [1/m3]; shape (j, 1).
    """

    air: IntArray
    ambient: int
    spacing: float
    names: tuple[tuple[str, str], ...]
    opening: IntArray
    hat: FloatArray
    area: FloatArray
    loss: FloatArray
    viscous: FloatArray
    filter: FloatArray
    radius: FloatArray
    exchange_diameter: FloatArray
    exchange_count: FloatArray
    exchange_depth: FloatArray
    level_cosine: FloatArray
    passage_loss: FloatArray
    passage_friction: FloatArray
    pressure_pa: float
    opening_label: IntArray
    carried_label: int

    PARAMETERS: ClassVar[tuple[str, ...]] = ("loss",)

    # Links: between air nodes, then from every air node out by every opening ---------------

    @cached_property
    def a(self) -> IntArray:
        """Node the heat leaves, shape (m,)."""
        return np.concatenate((self.air[:-1], np.tile(self.air, len(self.names))))

    @cached_property
    def b(self) -> IntArray:
        """Node the heat enters, shape (m,)."""
        out = np.full(len(self.names) * len(self.air), self.ambient, dtype=np.intp)
        return np.concatenate((self.air[1:], out))

    @cached_property
    def label(self) -> IntArray:
        """Number of each link's label, shape (m,)."""
        carried = np.full(len(self.air) - 1, self.carried_label, dtype=np.intp)
        return np.concatenate((carried, np.repeat(self.opening_label, len(self.air))))

    @cached_property
    def pattern(self) -> tuple[IntArray, IntArray]:
        """Link and node of every derivative: each link by each air node, shapes (d,)."""
        n = len(self.air)
        return np.repeat(np.arange(len(self.a)), n), np.tile(self.air, len(self.a))

    @cached_property
    def _weights(self) -> FloatArray:
        """Heights to which the air nodes count in the column below each air node [m], (n, n)."""
        n = len(self.air)
        half = 0.5 * self.spacing
        below = np.tril(np.full((n, n), self.spacing), -1)
        below[1:, 0] -= half
        below[np.arange(1, n), np.arange(1, n)] += half
        return below

    @cached_property
    def _column_weights(self) -> FloatArray:
        """The same below each piece, the air linear between nodes [m], shape (s, n)."""
        low, share = self._place
        rows = np.arange(len(low))
        weights = self._weights[low].copy()
        weights[rows, low] += self.spacing * (share - 0.5 * share * share)
        weights[rows, low + 1] += self.spacing * 0.5 * share * share
        return weights

    @cached_property
    def _place(self) -> tuple[IntArray, FloatArray]:
        """Air node below each piece, and how far up to the next it is, shapes (s,)."""
        low = np.minimum(np.argmax(self.hat > 0, axis=1), len(self.air) - 2)
        return low, self.hat[np.arange(len(low)), low + 1]

    @cached_property
    def _below(self) -> FloatArray:
        """Share of each step between air nodes that lies below each piece, shape (s, j)."""
        low, share = self._place
        steps = np.arange(len(self.air) - 1)
        below = (steps < low[:, None]).astype(np.float64)
        below[np.arange(len(low)), low] = share
        return below

    @cached_property
    def _growth(self) -> FloatArray:
        """What inflow has grown by to each step [-], falling (steps from the top) and rising.

        Shape (2, s, j).
        """
        low, share = self._place
        middles = np.arange(len(self.air) - 1) + 0.5
        fallen = self.spacing * (low + share - middles[:, None]).T
        radius = self.radius[self.opening]
        falling = plume_growth(np.maximum(fallen, 0.0), radius)
        return np.stack((falling[:, ::-1], plume_growth(np.maximum(-fallen, 0.0), radius)))

    @cached_property
    def _on_the_way(self) -> FloatArray:
        """Shares of the air nodes in the air at each piece, from the top and from the bottom.

        Shape (2, s, n).
        """
        return np.stack((self.hat[:, ::-1], self.hat))

    # Laws ----------------------------------------------------------------------------------

    def state(self, layer: FloatArray, reference: FloatArray) -> VentState:
        """Give the flows at temperatures of the air nodes (n, c) over the air outside (c,)."""
        mean = air(reference + 0.5 * layer.mean(axis=0), self.pressure_pa)
        outside = air(reference, self.pressure_pa).density
        inside = air(reference + layer, self.pressure_pa).density
        lighter = outside - inside
        flow = self._flow(lighter, inside, outside, mean.kinematic_viscosity)
        exchanged = self._exchange(lighter, outside, flow.flow)
        leaving = np.maximum(flow.flow, 0.0) + exchanged
        entering = np.maximum(-flow.flow, 0.0) + exchanged
        fallen, stream_heat = self._streams(layer, entering, mean.specific_heat)
        head = flow.base_pressure + GRAVITY * self._weights @ lighter
        lost = self._passage_loss(flow.passage, outside, mean.kinematic_viscosity)
        head[1:] -= np.cumsum(lost, axis=0)
        return VentState(
            leaving,
            entering,
            head,
            flow.passage + fallen,
            stream_heat,
            mean.specific_heat,
        )

    def _flow(
        self, lighter: FloatArray, inside: FloatArray, outside: FloatArray, viscosity: FloatArray
    ) -> VentFlows:
        loss, area = self.loss[self.opening], self.area
        quadratic = loss / (2.0 * area * area)
        slow = loss * SLOW_M_PER_S / (2.0 * area)
        linear = self.viscous[self.opening] * viscosity / (2.0 * area)
        linear = linear + self.filter[self.opening] / (outside * area)
        c = lighter.shape[1]
        return balanced_flows(
            GRAVITY * self._column_weights @ lighter,
            quadratic / (self.hat @ inside),
            np.broadcast_to(quadratic / outside, (len(area), c)),
            np.broadcast_to(np.maximum(linear, slow), (len(area), c)),
            self._below,
            np.broadcast_to(self.passage_loss / outside, (len(self.air) - 1, c)),
            np.broadcast_to(self.passage_friction * viscosity, (len(self.air) - 1, c)),
        )

    def _passage_loss(
        self, passing: FloatArray, density: FloatArray, viscosity: FloatArray
    ) -> FloatArray:
        """Pressure that flow past boards loses from step to step [Pa], shape (j, c)."""
        square = self.passage_loss / density * passing * np.abs(passing)
        return np.asarray(square + self.passage_friction * viscosity * passing)

    def _exchange(self, lighter: FloatArray, density: FloatArray, flow: FloatArray) -> FloatArray:
        """Mass that each piece lets in and out at once [kg/s], shape (s, c)."""
        unstable = self.level_cosine[self.opening] * (self.hat @ lighter) / density
        per_opening = exchange_flow(
            self.exchange_diameter[self.opening], self.exchange_depth[self.opening], unstable
        )
        most = per_opening.exchange * density * self.exchange_count[self.opening]
        stopped = per_opening.flooding * density * self.exchange_count[self.opening]
        return np.asarray(most * np.maximum(1.0 - np.abs(flow) / np.maximum(stopped, 1e-30), 0.0))

    def _streams(
        self, layer: FloatArray, entering: FloatArray, heat_capacity: FloatArray
    ) -> tuple[FloatArray, FloatArray]:
        """Streams of outside air past each step: mass downwards, heat upwards, both (j, c).

        Those that fall are told from the top down, those that rise from the bottom up, both at
        once: they are the same upside down.
        """
        ways = np.stack((layer[::-1], layer))[:, None]
        grown = self._growth[..., None]
        whole, further = 1.0 + grown, np.diff(grown, axis=2, prepend=0.0)
        arriving = self._on_the_way[..., None] * entering[:, None]
        colder = np.array([1.0, -1.0])[:, None, None]
        capacity = heat_capacity * ways
        fresh = np.zeros((2, *entering.shape))
        heat = np.zeros_like(fresh)
        masses, heats = [], []
        for step in range(len(self.air) - 1):
            new = arriving[:, :, step]
            taken = fresh * further[:, :, step] + new * grown[:, :, step]
            fresh, heat = fresh + new, heat + taken * capacity[:, :, step]
            # What it has taken up warms it: it goes on into air warmer than itself as it is now.
            mass = np.maximum(fresh * whole[:, :, step], 1e-30)
            warmer = ways[:, :, step + 1] - heat / (heat_capacity * mass)
            kept = sinking_share(colder * warmer)
            fresh, heat = fresh * kept, heat * kept
            masses.append((fresh * whole[:, :, step]).sum(axis=1))
            heats.append(heat.sum(axis=1))
        mass_past, heat_past = np.stack(masses), np.stack(heats)
        return mass_past[::-1, 0] - mass_past[:, 1], heat_past[:, 1] - heat_past[::-1, 0]

    # What the solver asks --------------------------------------------------------------------

    def evaluate(self, rise: FloatArray, reference_k: FloatArray) -> FloatArray:
        """Heat through every link [W], shape (m, v)."""
        layer = rise[self.air]
        return self._heat(layer, self.state(layer, reference_k))

    def _heat(self, layer: FloatArray, state: VentState) -> FloatArray:
        rising, sinking = np.maximum(state.column, 0.0), np.minimum(state.column, 0.0)
        carried = state.heat_capacity * (rising * layer[:-1] + sinking * layer[1:])
        out = self._by_opening(state.leaving)
        left = state.heat_capacity * out * layer
        return np.concatenate((carried + state.stream_heat, left.reshape(-1, layer.shape[1])))

    def _by_opening(self, flow: FloatArray) -> FloatArray:
        """Share flows of pieces (s, c) out over openings and air nodes, shape (o, n, c)."""
        return np.asarray(np.einsum("so,sn,sc->onc", self._belongs, self.hat, flow))

    @cached_property
    def _belongs(self) -> FloatArray:
        """Which pieces make up each opening, shape (s, o)."""
        return np.asarray(self.opening[:, None] == np.arange(len(self.names)), dtype=np.float64)

    def slopes(self, rise: FloatArray, reference_k: FloatArray) -> FloatArray:
        """Derivatives of `evaluate` in the order of `pattern` [W/K], shape (d, v)."""
        n = len(self.air)
        columns = []
        for v in range(rise.shape[1]):
            layer = np.repeat(rise[self.air, v : v + 1], n + 1, axis=1)
            layer[np.arange(n), np.arange(n) + 1] += DIFFERENCE_K
            reference = np.repeat(reference_k[v : v + 1], n + 1)
            one = self._of_variant(v)
            heat = one._heat(layer, one.state(layer, reference))
            columns.append(((heat[:, 1:] - heat[:, :1]) / DIFFERENCE_K).ravel())
        return np.stack(columns, axis=1)

    def _of_variant(self, v: int) -> "Vents":
        if self.loss.shape[1] == 1:
            return self
        return replace(self, loss=self.loss[:, v : v + 1])

    def nominal(self, reference_k: FloatArray) -> FloatArray:
        """Factors of links that carry what they do at a nominal rise [W/K], shape (d, 1)."""
        n = len(self.air)
        state = self._of_variant(0).state(np.full((n, 1), NOMINAL_RISE_K), reference_k[:1])
        capacity = float(state.heat_capacity[0])
        factors = np.zeros((len(self.a), n))
        steps = np.arange(n - 1)
        factors[steps, steps] = capacity * np.maximum(state.column[:, 0], 0.0)
        factors[steps, steps + 1] = capacity * np.minimum(state.column[:, 0], 0.0)
        out = capacity * self._by_opening(state.leaving)[:, :, 0]
        for opening in range(len(self.names)):
            rows = n - 1 + opening * n + np.arange(n)
            factors[rows, np.arange(n)] = out[opening]
        return factors.reshape(-1, 1)

    # Parameters ------------------------------------------------------------------------------

    def with_parameter(self, name: str, value: FloatArray) -> "Vents":
        """Give the same openings with other loss coefficients, shape (o, 1) or (o, v)."""
        if name != "loss":
            raise KeyError(f"Vents has no parameter {name!r}")
        return replace(self, loss=value)

    def stirred(self, share: float) -> "Vents":
        """Give the same openings: stirring moves no air through them."""
        return self

    # What findings ask -----------------------------------------------------------------------

    def neutral_height(self, state: VentState) -> float | None:
        """Height over the lowest point inside where no pressure drives air, the lowest such [m]."""
        head = state.head[:, 0]
        crossings = np.flatnonzero(head[:-1] * head[1:] < 0)
        if not len(crossings):
            return None
        low = int(crossings[0])
        share = head[low] / (head[low] - head[low + 1])
        return float((low + share) * self.spacing)
