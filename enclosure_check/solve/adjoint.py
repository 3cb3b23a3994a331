"""Adjoint weights: how temperatures answer to heat put into any node, one solve for all of them."""

import numpy as np

from enclosure_check.network.links import FloatArray, IntArray
from enclosure_check.network.network import Network
from enclosure_check.records import dataclass


@dataclass(frozen=True, eq=False)
class Adjoint:
    """Weights of some temperatures at a steady state of a network (one variant)."""

    nodes: IntArray
    """The nodes whose temperatures are asked for, shape (t,)."""
    weight: FloatArray
    """Rise of each per watt put into any node [K/W], shape (n, t)."""
    derivatives: FloatArray
    """Of the network's links there, kinds one after the other [W/K], shape (d,)."""


def adjoint(network: Network, rise: FloatArray, nodes: IntArray) -> Adjoint:
    """Give the rise of nodes per watt put into any node, at a steady state.

    With the balance ``r(x, p) = 0`` and ``J^T w = e_node`` a parameter moves the node's
    temperature by ``dT/dp = -w . dr/dp``.

    Parameters
    ----------
    network
        The network, one variant.
    rise
        Rises of all nodes [K], shape (n, 1).
    nodes
        The nodes whose temperatures are asked for, shape (t,). One of given temperature answers
        to nothing: its weights are zero, as are all weights of such nodes.

    Raises
    ------
    numpy.linalg.LinAlgError
        When the balance does not determine the temperatures.
    """
    unknown = network.unknown
    target = network.shown(nodes)[unknown]
    weight = np.zeros((network.size, len(nodes)))
    values = network.derivatives(rise)[:, 0]
    weight[unknown] = network.factor(values).solve_transposed(target)
    links = sum(len(kind.pattern[0]) for kind in network.kinds)
    return Adjoint(nodes, weight, values[:links])
