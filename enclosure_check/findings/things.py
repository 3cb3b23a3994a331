"""Cells put together to physical things, and what flows between them in one way.

A board is one thing, and so are a face of a wall, the inside air, a part. The part explained is two
where something lies between its junction and its case. Heat goes from thing to thing net; within
one it is taken as mixed.
"""

from collections import defaultdict
from typing import NamedTuple

import numpy as np

from enclosure_check.findings.solved import Solved
from enclosure_check.network.links import FloatArray, IntArray
from enclosure_check.records import dataclass
from enclosure_check.solve.levers import Bundle

INSIDE_AIR, RADIATION_SPACE = "inside air", "radiation inside"
_RENAMED = (
    ("irradiation of patch", RADIATION_SPACE),
    ("middle of ", "stand-off "),
    ("surface behind ", "behind "),
)
# Heat below this is none. [W]
LEAST_W = 1e-9


@dataclass(frozen=True, eq=False)
class Things:
    """The things of a network; t of them."""

    names: tuple[str, ...]
    of_node: IntArray
    """Thing of each node, -1 for those that take part in nothing, shape (n,)."""
    temperature_c: FloatArray
    """[C], shape (t,)."""
    outside: tuple[bool, ...]
    """Whether the temperature is given."""
    put_in_w: FloatArray
    """Heat of sources [W], shape (t,)."""
    root: int
    """The thing with the junction of the part explained."""


class Flow(NamedTuple):
    """Heat from one thing to another in one way, or within one (``start == end``)."""

    start: int
    end: int
    role: str
    bundle: Bundle
    heat_w: float
    """Net, not negative; of no meaning within a thing."""
    drive_k: float
    """Mean difference that drives it, each link counted by what it carries [K]."""


class _Collector:
    def __init__(self, solved: Solved) -> None:
        self.names: list[str] = []
        self.temperatures: list[float] = []
        self.of_node = np.full(solved.network.size, -1, dtype=np.intp)
        self._at = solved.temperature_c

    def add(self, name: str, nodes: IntArray | list[int], temperature_c: float) -> int:
        self.names.append(name)
        self.temperatures.append(temperature_c)
        self.of_node[nodes] = len(self.names) - 1
        return len(self.names) - 1


def things_of(solved: Solved, part: str) -> Things:
    """Put the nodes of a network together to things, as they explain a part."""
    network, places = solved.network, solved.network.places
    found = _Collector(solved)
    for name, plate in places.boards.items():
        found.add(f"board {name}", [*plate.cells.ravel(), plate.mean], solved.at(plate.mean))
    for name, inner in places.wall_inside.items():
        outer = places.wall_outside[name]
        even = outer.mean == inner.mean
        for plate, side in ((outer, ""),) if even else ((inner, " inside"), (outer, " outside")):
            cells = [*plate.cells.ravel(), plate.mean]
            found.add(f"{name} wall{side}", cells, solved.at(plate.mean))
    found.add(INSIDE_AIR, [*places.air_nodes, places.air], solved.at(places.air))
    root = -1
    for name, own in places.parts.items():
        outward = solved.flow(f"part:{name}", "junction_to_case") > 0
        if name != part:
            found.add(name, [own.junction, own.case], solved.at(own.case))
        elif own.junction == own.case or not outward:
            root = found.add(name, [own.junction, own.case], solved.at(own.junction))
        else:
            root = found.add(f"{name} junction", [own.junction], solved.at(own.junction))
            found.add(f"{name} case", [own.case], solved.at(own.case))
    _add_the_rest(solved, found)
    count = len(found.names)
    put_in = np.zeros(count)
    sources = network.sources
    heat = sources.heat(solved.solution.rise[sources.node], network.reference_k)[:, 0]
    np.add.at(put_in, found.of_node[sources.node], heat)
    given = np.zeros(count, dtype=bool)
    known = found.of_node >= 0
    given[found.of_node[known & network.fixed]] = True
    return Things(
        tuple(found.names),
        found.of_node,
        np.array(found.temperatures),
        tuple(given.tolist()),
        put_in,
        root,
    )


def _add_the_rest(solved: Solved, found: _Collector) -> None:
    """Add what carries heat and has no place of its own: by its node's label."""
    network = solved.network
    carrying = np.zeros(network.size, dtype=bool)
    for kind in network.kinds:
        real = kind.b != network.nowhere
        carrying[kind.a[real]] = carrying[kind.b[real]] = True
    rest = np.flatnonzero(carrying & (found.of_node < 0))
    by_name: dict[str, list[int]] = defaultdict(list)
    for node in rest.tolist():
        label, _, _ = network.node_labels[node].partition(", cell ")
        for before, after in _RENAMED:
            label = label.replace(before, after, 1)
        by_name[label].append(node)
    for name, nodes in by_name.items():
        found.add(name, nodes, float(solved.temperature_c[nodes].mean()))


def flows_of(solved: Solved, things: Things) -> list[Flow]:
    """Give every flow between things, and every set of links within one, in a fixed order."""
    network = solved.network
    flows: list[Flow] = []
    first = 0
    for number, kind in enumerate(network.kinds):
        heat = solved.heat_w[first : first + len(kind.a)]
        first += len(kind.a)
        a, b = things.of_node[kind.a], things.of_node[kind.b]
        groups: dict[tuple[int, int, str], list[int]] = defaultdict(list)
        for link in np.flatnonzero((a >= 0) & (b >= 0)).tolist():
            one, other = int(a[link]), int(b[link])
            role = network.labels[kind.label[link]].role
            groups[min(one, other), max(one, other), role].append(link)
        for (low, high, role), members in groups.items():
            links = np.array(members, dtype=np.intp)
            out = np.where(a[links] == low, heat[links], -heat[links])
            net = float(out.sum())
            over = solved.temperature_c[kind.a[links]] - solved.temperature_c[kind.b[links]]
            carried = float(np.abs(heat[links]).sum())
            drive = float((heat[links] * over).sum()) / carried if carried > 0 else 0.0
            start, end = (low, high) if net >= 0 else (high, low)
            flows.append(Flow(start, end, role, Bundle(number, links), abs(net), drive))
    return flows


def passing(things: Things, flows: list[Flow]) -> FloatArray:
    """Share of the root's heat that passes each thing, all heat in a thing taken as mixed.

    What comes to a thing leaves it in proportion to all that leaves it: ``f = e + P^T f``, P the
    shares of each thing's outflow. (the proportional sharing of J. Bialek, "Tracing the flow of
    electricity", IEE Proceedings 143, 1996, from memory)

    Returns
    -------
    ndarray
        Shape (t,); 1 at the root, or more where heat comes back to it.
    """
    count = len(things.names)
    between = np.zeros((count, count))
    for flow in flows:
        if flow.start != flow.end and flow.heat_w > LEAST_W:
            between[flow.start, flow.end] += flow.heat_w
    out = between.sum(axis=1)
    shares = between / np.maximum(out, LEAST_W)[:, None]
    # A trace is lost on the way: among rounding errors heat may seem to circle without a way out.
    matrix = np.eye(count) - (1.0 - 1e-9) * shares.T
    start = np.zeros(count)
    start[things.root] = 1.0
    return np.asarray(np.linalg.solve(matrix, start))
