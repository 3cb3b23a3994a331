"""The network as arrays, and its heat balance and Jacobian by array operations."""

from functools import cached_property
from typing import TYPE_CHECKING

import numpy as np
import numpy.typing as npt

from enclosure_check.network.grid import PlateGrid
from enclosure_check.network.linear import Entries, Factor, factorise
from enclosure_check.network.links import FloatArray, IntArray, LinkKind, LinkLabel
from enclosure_check.records import dataclass, field, replace

if TYPE_CHECKING:
    from enclosure_check.network.spots import Spots

BoolArray = npt.NDArray[np.bool_]

# Cached properties of a network that follow from its shape alone.
_OF_SHAPE = ("unknown", "size", "_ends", "_positions", "entries", "link_label", "outgoing")

# Twice the doubled power is doubled 60 times at most: keeps an iterate that runs away finite.
_LARGEST_EXPONENT = 60.0
LN2 = float(np.log(2.0))


@dataclass(frozen=True, eq=False)
class Sources:
    """Heat put into nodes: ``P (1 + s (T - T0)) 2^((T - T0) / D)``.

    ``slope`` and ``doublings`` (1/D) are zero where the power does not depend on temperature.
    """

    node: IntArray
    label: IntArray
    power: FloatArray
    """Power at the temperature it is stated for [W], shape (s, 1) or (s, v)."""
    stated_at_k: FloatArray
    slope: FloatArray
    """[1/K], shape (s, 1)."""
    doublings: FloatArray
    """[1/K], shape (s, 1)."""

    @cached_property
    def by_temperature(self) -> bool:
        """Whether any power depends on temperature."""
        return bool(np.any(self.slope != 0) or np.any(self.doublings != 0))

    @cached_property
    def growing(self) -> BoolArray:
        """Whether each power grows with temperature, shape (s, 1)."""
        return (self.slope > 0) | (self.doublings > 0)

    @cached_property
    def doubles(self) -> bool:
        """Whether any power grows exponentially."""
        return bool(np.any(self.doublings > 0))

    def held(self, rise: FloatArray, reference_k: FloatArray) -> "Sources":
        """Give the same sources, those that grow held at what they put in at given rises (s, v)."""
        return replace(
            self,
            power=np.where(self.growing, self.heat(rise, reference_k), self.power),
            slope=np.where(self.growing, 0.0, self.slope),
            doublings=np.where(self.growing, 0.0, self.doublings),
        )

    def heat(self, rise: FloatArray, reference_k: FloatArray) -> FloatArray:
        """Heat put in [W], shape (s, v)."""
        if not self.by_temperature:
            return np.broadcast_to(self.power, rise.shape)
        over = rise + reference_k - self.stated_at_k
        growth = np.exp2(np.clip(self.doublings * over, -_LARGEST_EXPONENT, _LARGEST_EXPONENT))
        heat: FloatArray = self.power * np.maximum(1.0 + self.slope * over, 0.0) * growth
        return heat

    def heat_by_rise(self, rise: FloatArray, reference_k: FloatArray) -> FloatArray:
        """Derivative of `heat` by the node's rise [W/K], shape (s, v)."""
        if not self.by_temperature:
            return np.zeros_like(rise)
        over = rise + reference_k - self.stated_at_k
        exponent = self.doublings * over
        growth = np.exp2(np.clip(exponent, -_LARGEST_EXPONENT, _LARGEST_EXPONENT))
        growing = np.where(np.abs(exponent) < _LARGEST_EXPONENT, LN2 * self.doublings, 0.0)
        line = np.maximum(1.0 + self.slope * over, 0.0)
        by_line = np.where(line > 0, self.slope, 0.0)
        slope: FloatArray = self.power * growth * (by_line + line * growing)
        return slope


@dataclass(frozen=True, eq=False)
class Readings:
    """Nodes that show weighted means of others and take no part in the balance, row by row."""

    node: IntArray
    of: IntArray
    weight: FloatArray
    """Shape (r, 1) or (r, v)."""

    @cached_property
    def nodes(self) -> IntArray:
        """The nodes that show something, in rising order."""
        return np.array(sorted(set(self.node.tolist())), dtype=np.intp)

    @cached_property
    def _place(self) -> IntArray:
        """Place of each row's node among them, shape (r,)."""
        return np.searchsorted(self.nodes, self.node)

    def rise(self, rise: FloatArray) -> FloatArray:
        """Rises that the nodes show, from those of all others (n, v), shape (nodes, v)."""
        return _summed(self._place, self.weight * rise[self.of], self.nodes.size)


@dataclass(frozen=True)
class PartNodes:
    """Nodes of a part; several are one and the same where nothing lies between them.

    ``peak_k_per_w`` is how much hotter the board is under the middle of the part than in the mean
    under it, per watt that enters it there.
    """

    junction: int
    case: int
    board: int | None
    air: int
    peak_k_per_w: float = 0.0


@dataclass(frozen=True, eq=False)
class PlateNodes:
    """Nodes of a wall's face or a board: its cells, by its two axes, and their mean."""

    cells: IntArray
    mean: int


@dataclass(frozen=True)
class Places:
    """Where the things of the description are in the network."""

    ambient: int
    air: int
    """Mean of the inside air."""
    air_nodes: IntArray
    """From the bottom up."""
    air_heights: FloatArray
    """Of the air nodes over the lowest point of the inside [m]."""
    wall_outside: dict[str, PlateNodes]
    wall_inside: dict[str, PlateNodes]
    boards: dict[str, PlateNodes]
    parts: dict[str, PartNodes]
    grids: dict[str, PlateGrid] = field(default_factory=dict)
    """Cells of walls and boards, by name."""
    spots: "Spots | None" = None
    """Contacts on them."""


@dataclass(frozen=True, eq=False)
class Network:
    """Nodes and links of one case, for ``v`` variants at once.

    Attributes
    ----------
    node_labels
        One per node, shape (n,).
    reference_k
        Temperature that rises count from: the surrounding air [K], shape (v,).
    fixed
        Whether a node's temperature is given, shape (n,).
    fixed_rise
        Rise of the nodes whose temperature is given, zero for the others [K], shape (n, v).
    kinds
        The links, one object per kind.
    sources
        The heat put in.
    places
        Where the things of the description are.
    """

    node_labels: tuple[str, ...]
    reference_k: FloatArray
    fixed: BoolArray
    fixed_rise: FloatArray
    nowhere: int
    """A node of given temperature that takes up what is no heat: the balances of means."""
    labels: tuple[LinkLabel, ...]
    """The labels that links and sources refer to by number."""
    kinds: tuple[LinkKind, ...]
    sources: Sources
    readings: Readings
    """Nodes read off the others."""
    places: Places

    @property
    def variants(self) -> int:
        """How many variants are computed at once."""
        return int(self.reference_k.shape[0])

    @cached_property
    def unknown(self) -> IntArray:
        """Nodes whose temperature is to be found, shape (u,)."""
        shown = np.zeros(self.size, dtype=bool)
        shown[self.readings.nodes] = True
        return np.flatnonzero(~self.fixed & ~shown)

    @cached_property
    def size(self) -> int:
        """How many nodes there are."""
        return len(self.node_labels)

    @cached_property
    def _ends(self) -> tuple[IntArray, IntArray]:
        """Nodes the heat of all links leaves and enters, kinds one after the other."""
        return (
            np.concatenate([kind.a for kind in self.kinds]),
            np.concatenate([kind.b for kind in self.kinds]),
        )

    @cached_property
    def _positions(self) -> IntArray:
        """Place of each node among the unknown ones, -1 for the others, shape (n,)."""
        positions = np.full(self.size, -1, dtype=np.intp)
        positions[self.unknown] = np.arange(len(self.unknown))
        return positions

    @cached_property
    def entries(self) -> Entries:
        """Places of all derivatives among the unknown nodes, the leaving ends first.

        Those of or by nodes of given temperature lie outside.
        """
        positions = self._positions
        patterns = [kind.pattern for kind in self.kinds]
        columns = [positions[node] for _, node in patterns]
        rows = [
            positions[end[link]]
            for ends in ("a", "b")
            for kind, (link, _) in zip(self.kinds, patterns, strict=True)
            for end in (getattr(kind, ends),)
        ]
        own = positions[self.sources.node]
        row, column = np.concatenate([*rows, own]), np.concatenate([*columns, *columns, own])
        plates = (self.places.boards, self.places.wall_inside, self.places.wall_outside)
        cells = [positions[each.cells.ravel()] for plate in plates for each in plate.values()]
        groups = tuple(own[own >= 0] for own in cells)
        return Entries(row, column, len(self.unknown), groups)

    @cached_property
    def link_label(self) -> IntArray:
        """Number of each link's label, kinds one after the other as in `heat`, shape (links,)."""
        return np.concatenate([kind.label for kind in self.kinds])

    @cached_property
    def outgoing(self) -> IntArray:
        """Links that end at a node of given temperature, shape (o,)."""
        a, b = self._ends
        return np.flatnonzero((self.fixed[a] | self.fixed[b]) & (b != self.nowhere))

    def full_rise(self, unknown_rise: FloatArray) -> FloatArray:
        """Fill the given rises in: from shape (u, v) to (n, v)."""
        rise = self.fixed_rise.copy()
        rise[self.unknown] = unknown_rise
        if self.readings.node.size:
            rise[self.readings.nodes] = self.readings.rise(rise)
        return rise

    def shown(self, nodes: IntArray) -> FloatArray:
        """Weights of all nodes in what some show: of themselves, or those they are read off.

        Shape (n, nodes).
        """
        weights = np.zeros((self.size, len(nodes)))
        weights[nodes, np.arange(len(nodes))] = 1.0
        readings = self.readings
        for column, node in enumerate(nodes.tolist()):
            own = readings.node == node
            if own.any():
                weights[node, column] = 0.0
                np.add.at(weights[:, column], readings.of[own], readings.weight[own, 0])
        return weights

    def heat(self, rise: FloatArray) -> FloatArray:
        """Heat through every link from its ``a`` to its ``b`` [W], shape (links, v)."""
        return np.concatenate([kind.evaluate(rise, self.reference_k) for kind in self.kinds])

    def imbalance(self, rise: FloatArray, heat: FloatArray | None = None) -> FloatArray:
        """Heat leaving each node through links less heat put in [W], shape (n, v)."""
        heat = self.heat(rise) if heat is None else heat
        a, b = self._ends
        sources = self.sources
        put_in = sources.heat(rise[sources.node], self.reference_k)
        return self._sum_at(
            np.concatenate((a, b, sources.node)), np.concatenate((heat, -heat, -put_in))
        )

    def derivatives(self, rise: FloatArray) -> FloatArray:
        """Derivatives at the places of `entries`, which make up the Jacobian [W/K], (d, v)."""
        links = np.concatenate([kind.slopes(rise, self.reference_k) for kind in self.kinds])
        own = self.sources.heat_by_rise(rise[self.sources.node], self.reference_k)
        return np.concatenate((links, -links, -own))

    def jacobian(self, rise: FloatArray) -> FloatArray:
        """Derivative of the unknown nodes' `imbalance` by their rises [W/K], shape (v, u, u)."""
        return np.stack([self.entries.dense(column) for column in self.derivatives(rise).T])

    def factor(self, values: FloatArray, shift: float = 0.0) -> Factor:
        """Factorise the Jacobian of one variant from its `derivatives`, shape (d,)."""
        return factorise(self.entries, values, shift)

    def first_guess(self) -> FloatArray:
        """Rises of the linear network whose links behave as at a nominal rise [K], shape (u, v)."""
        factors = [kind.nominal(self.reference_k[:1]) for kind in self.kinds]
        links = np.concatenate(factors)[:, 0]
        own = np.zeros(len(self.sources.node))
        pulled = np.concatenate(
            [
                _summed(kind.pattern[0], factor * self.fixed_rise[kind.pattern[1]], len(kind.a))
                for kind, factor in zip(self.kinds, factors, strict=True)
            ]
        )
        cold = replace(self.sources, slope=np.zeros(1), doublings=np.zeros(1))
        right = -replace(self, sources=cold).imbalance(self.fixed_rise, pulled)[self.unknown]
        return self.factor(np.concatenate((links, -links, own))).solve(right)

    def varied(self, reference_k: FloatArray, power: FloatArray) -> "Network":
        """Give the network in other surroundings and with other power, for v variants.

        Parameters
        ----------
        reference_k
            Temperature that rises count from, the given ones too [K], shape (v,).
        power
            Power of all sources [W], shape (s, v).
        """
        sources = replace(self.sources, power=power)
        fixed_rise = np.repeat(self.fixed_rise, len(reference_k), axis=1)
        varied = replace(self, reference_k=reference_k, sources=sources, fixed_rise=fixed_rise)
        # What follows from the shape alone is not found again.
        kept = {name: self.__dict__[name] for name in _OF_SHAPE if name in self.__dict__}
        varied.__dict__.update(kept)
        return varied

    def stirred(self, share: float) -> "Network":
        """Give the network with its inside air stirred: even within a percent from about 1000."""
        return replace(self, kinds=tuple(kind.stirred(share) for kind in self.kinds))

    def _sum_at(self, node: IntArray, values: FloatArray) -> FloatArray:
        """Add values (e, v) up at their nodes (e,): shape (n, v)."""
        return _summed(node, values, self.size)


def _summed(index: IntArray, values: FloatArray, size: int) -> FloatArray:
    """Add values (e, v) up at their indices (e,): shape (size, v)."""
    v = values.shape[1]
    if v == 1:
        return np.asarray(np.bincount(index, values[:, 0], size), dtype=np.float64)[:, None]
    total = [np.bincount(index, column, size) for column in np.ascontiguousarray(values.T)]
    return np.stack(total, axis=1)
