"""A case with its network and temperatures, and the few things findings read off it."""

from functools import cached_property

import numpy as np

from enclosure_check.description.case import Case
from enclosure_check.network.links import FloatArray
from enclosure_check.network.network import Network
from enclosure_check.network.units import celsius
from enclosure_check.records import dataclass
from enclosure_check.solve.nearby import Inverse
from enclosure_check.solve.steady import Solution


@dataclass(frozen=True, eq=False)
class Solved:
    """One case, solved (one variant)."""

    case: Case
    network: Network
    solution: Solution
    inverse: Inverse
    """Inverse Jacobian near the solution."""

    @cached_property
    def temperature_c(self) -> FloatArray:
        """Temperature of every node [C], shape (n,)."""
        return self.solution.rise[:, 0] + celsius(float(self.network.reference_k[0]))

    @cached_property
    def heat_w(self) -> FloatArray:
        """Heat through every link [W], shape (links,)."""
        return self.network.heat(self.solution.rise)[:, 0]

    @cached_property
    def _flows(self) -> dict[tuple[str, str], float]:
        network = self.network
        total = np.bincount(network.link_label, self.heat_w, len(network.labels))
        return dict(zip(network.labels, total.tolist(), strict=True))

    @cached_property
    def _sources(self) -> dict[tuple[str, str], float]:
        network, sources = self.network, self.network.sources
        heat = sources.heat(self.solution.rise[sources.node], network.reference_k)
        total = np.bincount(sources.label, heat[:, 0], len(network.labels))
        return dict(zip(network.labels, total.tolist(), strict=True))

    def at(self, node: int) -> float:
        """Temperature of a node [C]."""
        return float(self.temperature_c[node])

    def flow(self, owner: str, role: str) -> float:
        """Heat through all links of an owner and role [W]."""
        return self._flows.get((owner, role), 0.0)

    def put_in(self, owner: str, role: str) -> float:
        """Heat put in under an owner and role [W]."""
        return self._sources.get((owner, role), 0.0)

    def total_put_in(self, role: str) -> float:
        """Heat put in under a role by all owners [W]."""
        return sum((value for (_, own), value in self._sources.items() if own == role), 0.0)
