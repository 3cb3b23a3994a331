"""Collects nodes and links while the small builders run, then makes the network of them."""

from collections.abc import Sequence
from typing import TYPE_CHECKING, Any

import numpy as np
from numpy.typing import ArrayLike

from enclosure_check.network.films import BoxFilm
from enclosure_check.network.links import (
    Conduction,
    FloatArray,
    IntArray,
    LinkKind,
    LinkLabel,
    PatchExchange,
    Radiation,
)
from enclosure_check.network.network import Network, Places, Readings, Sources
from enclosure_check.physics.box import BoxGeometry
from enclosure_check.records import dataclass, field

if TYPE_CHECKING:
    from enclosure_check.physics.wind import Wind

# Resistances below this, and conductances over its inverse, are far beyond what any part of a
# check can tell; stated as zero they are taken as this. [K/W]
LEAST_RESISTANCE = 1e-4


@dataclass(frozen=True)
class PlaneFace:
    """Shape and attitude of a plane face, as its film law needs them.

    ``fall_length`` along gravity [m], ``area_perimeter_length`` area over perimeter [m],
    ``up_cosine`` of the normal that points into the air.
    """

    fall_length: float
    area_perimeter_length: float
    up_cosine: float


class Blocks:
    """Links of one kind, collected as rows of growing arrays: whole numbers, and values."""

    def __init__(self, numbers: Sequence[str], values: Sequence[str]) -> None:
        self.names = (tuple(numbers), tuple(values))
        self.count = 0
        self._numbers = np.zeros((len(numbers), 64), dtype=np.intp)
        self._values = np.zeros((len(values), 64))

    def add(self, length: int, numbers: Sequence[ArrayLike], values: Sequence[ArrayLike]) -> None:
        """Add so many links; each entry is one for all of them or flat and as long."""
        start, end = self.count, self.count + length
        while end > self._numbers.shape[1]:
            self._numbers = np.concatenate((self._numbers, np.zeros_like(self._numbers)), axis=1)
            self._values = np.concatenate((self._values, np.zeros_like(self._values)), axis=1)
        for row, entry in zip(self._numbers, numbers, strict=True):
            row[start:end] = entry
        for value_row, entry in zip(self._values, values, strict=True):
            value_row[start:end] = entry
        self.count = end

    def __len__(self) -> int:
        return self.count

    def take(self, other: "Blocks", first: int, last: int) -> None:
        """Add some links of others of the kind as they are: from the first up to before the last.

        The columns of both are the same.
        """
        numbers, values = other._numbers[:, first:last], other._values[:, first:last]
        self.add(last - first, list(numbers), list(values))

    def columns(self) -> dict[str, Any]:
        """Give every column by name, values with a trailing axis for variants."""
        numbers, values = self._numbers[:, : self.count], self._values[:, : self.count]
        return {
            **dict(zip(self.names[0], numbers, strict=True)),
            **{name: row[:, None] for name, row in zip(self.names[1], values, strict=True)},
        }


_ENDS = ("a", "b", "label")


@dataclass
class NetworkBuilder:
    """Nodes and links being collected; temperatures in kelvin, all else in SI."""

    reference_k: float
    pressure_pa: float
    _node_labels: list[str] = field(default_factory=list)
    _fixed_k: list[float | None] = field(default_factory=list)
    _labels: dict[LinkLabel, int] = field(default_factory=dict)

    def __post_init__(self) -> None:
        self._conduction = Blocks((*_ENDS, "x", "y"), ("conductance",))
        self._radiation = Blocks((*_ENDS, "x", "y"), Radiation.PARAMETERS)
        self._exchange = Blocks((*_ENDS, "c", "d"), PatchExchange.PARAMETERS)
        self._made: list[LinkKind] = []
        self._readings = Blocks(("node", "of"), ("weight",))
        self._sources = Blocks(("node", "label"), ("power", "stated_at_k", "slope", "doublings"))
        self.nowhere = self.node("no place", self.reference_k)

    def collected(self) -> tuple[Any, ...]:
        """Give all that grows: nodes and labels first, then links, sources and readings."""
        return (
            self._node_labels,
            self._labels,
            self._fixed_k,
            self._conduction,
            self._radiation,
            self._exchange,
            self._made,
            self._readings,
            self._sources,
        )

    # Nodes -------------------------------------------------------------------------------

    def node(self, label: str, fixed_k: float | None = None) -> int:
        """Add a node, its temperature given or to be found; gives its number."""
        self._node_labels.append(label)
        self._fixed_k.append(fixed_k)
        return len(self._node_labels) - 1

    def nodes(self, label: str, shape: tuple[int, ...]) -> IntArray:
        """Add an array of nodes whose temperatures are to be found; gives their numbers."""
        first = len(self._node_labels)
        count = int(np.prod(shape))
        self._node_labels += [f"{label}, cell {index + 1}" for index in range(count)]
        self._fixed_k += [None] * count
        return np.arange(first, first + count).reshape(shape)

    def mean(self, label: str, cells: IntArray, weights: ArrayLike) -> int:
        """Give a node that keeps the weighted mean of cells, which is no heat."""
        node = self.node(label)
        self.keep_mean(node, cells, weights)
        return node

    def keep_mean(self, node: int, cells: IntArray, weights: ArrayLike) -> None:
        """Let a node keep the weighted mean of cells, which is no heat."""
        row = self.label(LinkLabel(self._node_labels[node], "mean"))
        share = np.ravel(weights) / np.sum(weights)
        flat = cells.ravel()
        self._conduction.add(flat.size, (node, self.nowhere, row, node, flat), (share,))

    def read(self, node: int, nodes: IntArray, weights: FloatArray) -> None:
        """Let a node show the weighted mean of others; no link may depend on it.

        It takes no part in the balance: its temperature is read off when those are known.
        """
        self._readings.add(nodes.size, (node, nodes), (weights / weights.sum(),))

    # Links -------------------------------------------------------------------------------

    def conduct(self, a: ArrayLike, b: ArrayLike, conductance: ArrayLike, label: LinkLabel) -> None:
        """Join nodes by conductances [W/K], one by one where arrays are given."""
        a, b, conductance = np.ravel(a), np.ravel(b), np.ravel(conductance)
        length = max(a.size, b.size)
        self._conduction.add(length, (a, b, self.label(label), a, b), (conductance,))

    def conduct_by(
        self,
        a: ArrayLike,
        b: ArrayLike,
        x: ArrayLike,
        y: ArrayLike,
        conductance: FloatArray,
        label: LinkLabel | list[LinkLabel],
    ) -> None:
        """Let heat from a to b follow the difference of two other nodes x and y [W/K].

        The label is one for all, or there is one for each.
        """
        each = [label] if isinstance(label, LinkLabel) else label
        row = [self.label(own) for own in each]
        self._conduction.add(conductance.size, (a, b, row, x, y), (conductance,))

    def resist(self, a: int, b: int, resistance: float, label: LinkLabel) -> None:
        """Join two nodes by a resistance [K/W]; one of nothing by the least there is."""
        self.conduct(a, b, 1.0 / max(resistance, LEAST_RESISTANCE), label)

    def behind(self, a: int, resistance: float, label: str, link: LinkLabel) -> int:
        """Give the node behind a resistance [K/W]: a new one, or ``a`` itself without any."""
        if resistance <= 0:
            return a
        node = self.node(label)
        self.resist(a, node, resistance, link)
        return node

    def radiate(
        self,
        a: ArrayLike,
        b: ArrayLike,
        area: ArrayLike,
        exchange_area: ArrayLike,
        emissivity: float,
        label: LinkLabel,
        share: float = 1.0,
    ) -> None:
        """Join nodes by radiation; areas [m2]."""
        if share > 0:
            a, b, row = np.ravel(a), np.ravel(b), self.label(label)
            values = (np.ravel(area), np.ravel(exchange_area), share, emissivity)
            self._radiation.add(a.size, (a, b, row, a, b), values)

    def radiate_each(
        self, a: IntArray, b: IntArray, area: FloatArray, emissivity: FloatArray, label: IntArray
    ) -> None:
        """Join nodes by radiation that sees all of their area [m2], one by one."""
        self._radiation.add(a.size, (a, b, label, a, b), (area, area, 1.0, emissivity))

    def mean_emissions(
        self,
        labels: Sequence[str],
        sizes: IntArray,
        cells: IntArray,
        area: FloatArray,
        emissivity: FloatArray,
    ) -> IntArray:
        """Give nodes that keep the mean emission of groups of cells, which is no heat.

        Parameters
        ----------
        labels
            Of the nodes, one for each group.
        sizes
            How many cells each has.
        cells, area, emissivity
            The cells, group after group, their areas [m2] and emissivities.
        """
        nodes = [self.node(label) for label in labels]
        rows = [self.label(LinkLabel(label, "mean")) for label in labels]
        node, row = np.repeat(nodes, sizes), np.repeat(rows, sizes)
        self._radiation.add(
            cells.size, (node, self.nowhere, row, node, cells), (area, area, 1.0, emissivity)
        )
        return np.array(nodes, dtype=np.intp)

    def exchange(
        self,
        irradiation: tuple[IntArray, IntArray],
        emission: tuple[IntArray, IntArray],
        exchange_area: FloatArray,
        emissivity: tuple[FloatArray, FloatArray],
        label: LinkLabel,
    ) -> None:
        """Join patches by their irradiation and emission nodes, pair by pair; areas [m2]."""
        numbers = (*irradiation, self.label(label), *emission)
        self._exchange.add(exchange_area.size, numbers, (exchange_area, *emissivity))

    def add(self, kind: LinkKind) -> None:
        """Add links of a kind of their own."""
        self._made.append(kind)

    def box_film(
        self,
        cells: Sequence[IntArray],
        means: Sequence[int],
        air: int,
        geometry: BoxGeometry,
        labels: Sequence[LinkLabel],
        wind: "Wind | None" = None,
    ) -> None:
        """Join the outer faces of a box, all six in order, to the air around it."""
        blocks = Blocks((*_ENDS, "surface"), ("area",))
        for index, (face, label) in enumerate(zip(cells, labels, strict=True)):
            area = geometry.area[index] / face.size
            blocks.add(face.size, (face.ravel(), air, self.label(label), index), (area,))
        given: dict[str, Any] = {
            **blocks.columns(),
            "nodes": np.array([*means, air], dtype=np.intp),
            "geometry": geometry,
            "factor": np.ones((6, 1)),
            "pressure_pa": self.pressure_pa,
        }
        if wind is None:
            self.add(BoxFilm(**given))
        else:
            from enclosure_check.network.wind import BoxFilmInWind

            self.add(BoxFilmInWind(**given, wind=wind, wind_factor=np.ones((6, 1))))

    def heat(
        self,
        node: ArrayLike,
        power: ArrayLike,
        label: LinkLabel,
        stated_at_k: float = 298.15,
        slope: float = 0.0,
        doublings: float = 0.0,
    ) -> None:
        """Put heat [W] into nodes, growing with their temperature if so said [1/K]."""
        if np.any(power):
            node, row = np.ravel(node), self.label(label)
            self._sources.add(node.size, (node, row), (power, stated_at_k, slope, doublings))

    def finish(self, places: Places) -> Network:
        """Make the network."""
        made: list[tuple[Any, Blocks]] = [
            (Conduction, self._conduction),
            (Radiation, self._radiation),
            (PatchExchange, self._exchange),
        ]
        kinds: list[LinkKind] = []
        for kind, blocks in made:
            columns = blocks.columns()
            if columns["a"].size:
                kinds.append(kind(**columns))
        fixed = np.array([value is not None for value in self._fixed_k])
        rise = [0.0 if value is None else value - self.reference_k for value in self._fixed_k]
        return Network(
            node_labels=tuple(self._node_labels),
            reference_k=np.array([self.reference_k]),
            fixed=fixed,
            fixed_rise=np.array(rise)[:, None],
            nowhere=self.nowhere,
            labels=tuple(self._labels),
            kinds=(*kinds, *self._made),
            sources=Sources(**self._sources.columns()),
            readings=Readings(**self._readings.columns()),
            places=places,
        )

    def label(self, label: LinkLabel) -> int:
        """Give the number of a label."""
        return self._labels.setdefault(label, len(self._labels))
