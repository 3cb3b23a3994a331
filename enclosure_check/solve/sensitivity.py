"""Sensitivities of temperatures by the adjoint: one transposed solve serves every parameter."""

import numpy as np

from enclosure_check.network.links import FloatArray
from enclosure_check.network.network import Network
from enclosure_check.records import dataclass
from enclosure_check.solve.steady import Solution


@dataclass(frozen=True, eq=False)
class Sensitivities:
    """Derivatives of one node's temperature by every parameter of a network (one variant)."""

    by_power: FloatArray
    """By the power of each source [K/W], shape (s,)."""
    by_fixed: FloatArray
    """By each given temperature, zero for the unknown nodes [K/K], shape (n,)."""
    by_parameter: tuple[dict[str, FloatArray], ...]
    """By each parameter of each kind, one dictionary per kind [K/unit], shapes (p,)."""


def sensitivities(network: Network, solution: Solution, node: int) -> Sensitivities:
    """Give the derivatives of a node's temperature by every parameter.

    With the balance ``r(x, p) = 0``: ``dT/dp = -w . dr/dp``, ``J^T w = e_node``.

    Parameters
    ----------
    network
        The network, one variant.
    solution
        Its steady state.
    node
        A node whose temperature is not given.

    Raises
    ------
    ValueError
        When the node's temperature is given, or there are several variants.
    """
    unknown = network.unknown
    if network.variants != 1:
        raise ValueError("sensitivities are taken of one variant")
    if network.fixed[node]:
        raise ValueError(f"the temperature of {network.node_labels[node]!r} is given")
    rise, reference = solution.rise, network.reference_k
    target = network.shown(np.array([node]))[:, 0]
    weight = np.zeros(network.size)
    factor = network.factor(network.derivatives(rise)[:, 0])
    weight[unknown] = factor.solve_transposed(target[unknown, None])[:, 0]
    sources = network.sources
    unit = sources.heat_by_power(rise[sources.node], reference)[:, 0]
    by_node = np.where(network.fixed, target, 0.0)
    by_parameter = []
    for kind in network.kinds:
        between = weight[kind.a] - weight[kind.b]
        link, at = kind.pattern
        np.add.at(by_node, at, -between[link] * kind.slopes(rise, reference)[:, 0])
        by_parameter.append(
            {
                name: -kind.weighted_by_parameter(rise, reference, between, name)
                for name in kind.PARAMETERS
            }
        )
    by_fixed = np.where(network.fixed, by_node, 0.0)
    return Sensitivities(weight[sources.node] * unit, by_fixed, tuple(by_parameter))
