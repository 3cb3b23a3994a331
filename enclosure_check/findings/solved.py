"""A case with its network and temperatures, and the few things findings read off it."""

from dataclasses import dataclass
from functools import cached_property

import numpy as np

from enclosure_check.description.case import Case
from enclosure_check.network.links import FloatArray
from enclosure_check.network.network import Network
from enclosure_check.network.units import celsius
from enclosure_check.solve.steady import Solution


@dataclass(frozen=True, eq=False)
class Solved:
    """One case, solved (one variant)."""

    case: Case
    network: Network
    solution: Solution

    @cached_property
    def temperature_c(self) -> FloatArray:
        """Temperature of every node [C], shape (n,)."""
        kelvin = self.solution.rise[:, 0] + self.network.reference_k[0]
        return np.array([celsius(value) for value in kelvin])

    @cached_property
    def heat_w(self) -> FloatArray:
        """Heat through every link [W], shape (links,)."""
        return self.network.heat(self.solution.rise)[:, 0]

    @cached_property
    def _flows(self) -> dict[tuple[str, str], float]:
        flows: dict[tuple[str, str], float] = {}
        for label, heat in zip(self.network.link_labels, self.heat_w.tolist(), strict=True):
            flows[label] = flows.get(label, 0.0) + heat
        return flows

    @cached_property
    def _sources(self) -> dict[tuple[str, str], float]:
        sources = self.network.sources
        heat = sources.heat(self.solution.rise[sources.node], self.network.reference_k)
        put_in: dict[tuple[str, str], float] = {}
        for label, value in zip(sources.labels, heat[:, 0].tolist(), strict=True):
            put_in[label] = put_in.get(label, 0.0) + value
        return put_in

    def flow(self, owner: str, role: str) -> float:
        """Heat through all links of an owner and role [W]."""
        return self._flows.get((owner, role), 0.0)

    def put_in(self, owner: str, role: str) -> float:
        """Heat put in under an owner and role [W]."""
        return self._sources.get((owner, role), 0.0)

    def total_put_in(self, role: str) -> float:
        """Heat put in under a role by all owners [W]."""
        return sum((value for (_, own), value in self._sources.items() if own == role), 0.0)
