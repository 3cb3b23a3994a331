"""What scaling the conductance of some links does to one temperature: slope and curvature."""

from collections.abc import Sequence
from functools import cached_property
from typing import NamedTuple

import numpy as np

from enclosure_check.network.linear import Factor
from enclosure_check.network.links import FloatArray, IntArray
from enclosure_check.network.network import Network
from enclosure_check.network.scaled import heat_by_scale
from enclosure_check.records import dataclass

# Change of the fastest temperature over which a slope is differenced. [K]
STEP_K = 0.01


class Bundle(NamedTuple):
    """Links of one kind that are scaled together: which kind, and their places in it."""

    kind: int
    links: IntArray


class Lever(NamedTuple):
    """What a common factor ``1 + x`` on the conductance of some links does to a temperature.

    ``T(x) - T(0) = slope x / (1 + bend x)``: exact for a single link of a linear network, where
    bend is the share the link has in what lies between its ends, from 0 (nothing else matters,
    heat goes with the conductance) to 1 (all heat has to pass, the difference goes with the
    resistance).
    """

    slope: float
    """[K]."""
    bend: float
    """[-], within 0 and 1."""


@dataclass(frozen=True, eq=False)
class Levers:
    """Effects on the temperature of one node of a solved network (one variant)."""

    network: Network
    rise: FloatArray
    """Rises of all nodes [K], shape (n, 1)."""
    node: int

    @cached_property
    def _factor(self) -> Factor:
        return self.network.factor(self.network.derivatives(self.rise)[:, 0])

    @cached_property
    def by_heat(self) -> FloatArray:
        """Derivative of the temperature by heat put into each node [K/W], shape (n,)."""
        unknown = self.network.unknown
        target = (unknown == self.node).astype(np.float64)[:, None]
        weight = np.zeros(self.network.size)
        weight[unknown] = self._factor.solve_transposed(target)[:, 0]
        return weight

    def slopes(self, bundles: Sequence[Bundle]) -> list[float]:
        """Derivative of the temperature by a factor on each bundle's conductance [K]."""
        return [
            float(-self._between(each.kind) @ self._change(each, self.rise)) for each in bundles
        ]

    def bends(self, bundles: Sequence[Bundle], slopes: Sequence[float]) -> list[float]:
        """Bend of each bundle's effect, its slope known [-]; see `Lever`."""
        if not bundles:
            return []
        unknown = self.network.unknown
        changes = [self._change(bundle, self.rise) for bundle in bundles]
        right = np.zeros((self.network.size, len(bundles)))
        for column, (bundle, change) in enumerate(zip(bundles, changes, strict=True)):
            kind = self.network.kinds[bundle.kind]
            np.subtract.at(right[:, column], kind.a, change)
            np.add.at(right[:, column], kind.b, change)
        response = np.zeros_like(right)
        response[unknown] = self._factor.solve(right[unknown])
        found = []
        for bundle, change, moved, slope in zip(bundles, changes, response.T, slopes, strict=True):
            largest = float(np.abs(moved).max())
            bend = 0.0
            if slope != 0.0 and largest > 0.0:
                step = STEP_K / largest
                after = self._change(bundle, self.rise + step * moved[:, None])
                bend = float(self._between(bundle.kind) @ (after - change)) / (step * slope)
            found.append(min(max(bend, 0.0), 1.0))
        return found

    def _between(self, kind: int) -> FloatArray:
        links = self.network.kinds[kind]
        return np.asarray(self.by_heat[links.a] - self.by_heat[links.b])

    def _change(self, bundle: Bundle, rise: FloatArray) -> FloatArray:
        kind = self.network.kinds[bundle.kind]
        chosen = np.zeros(len(kind.a), dtype=bool)
        chosen[bundle.links] = True
        return heat_by_scale(kind, rise, self.network.reference_k, chosen)
