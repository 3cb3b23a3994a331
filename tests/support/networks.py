"""Networks of a few nodes, made by hand.

Import it as ``from support.networks import one_node`` (``tests`` is on the path).
"""

from dataclasses import replace
from typing import Any

import numpy as np

from enclosure_check.network.builder import NetworkBuilder
from enclosure_check.network.links import LinkLabel
from enclosure_check.network.network import Network, Places

LABEL = LinkLabel("test", "test")
POWER = LinkLabel("test", "power")
AMBIENT_K = 298.15


def started(ambient_k: float = AMBIENT_K) -> tuple[NetworkBuilder, int]:
    """A builder, and the ambient."""
    builder = NetworkBuilder(ambient_k, 101_325.0)
    return builder, builder.node("ambient", ambient_k)


def finished(builder: NetworkBuilder) -> Network:
    """Make the network; no test of these asks for places."""
    nothing = np.array([builder.nowhere])
    return builder.finish(
        Places(
            ambient=builder.nowhere,
            air=builder.nowhere,
            air_nodes=nothing,
            air_heights=np.zeros(1),
            wall_outside={},
            wall_inside={},
            boards={},
            parts={},
        )
    )


def one_node(power: float, resistance: float = 1.0, **growth: float) -> Network:
    """A node that heats itself, joined to the ambient by a resistance [K/W]; it is the last one."""
    builder, ambient = started()
    node = builder.node("junction")
    builder.conduct(node, ambient, 1 / resistance, LABEL)
    builder.heat(node, power, POWER, **growth)
    return finished(builder)


def together(networks: list[Network]) -> Network:
    """The variants of one network side by side; only numbers may differ between them."""
    first = networks[0]

    def joined(arrays: list[np.ndarray]) -> np.ndarray:
        return np.concatenate(arrays, axis=-1)

    kinds = []
    for index, kind in enumerate(first.kinds):
        changed: dict[str, Any] = {
            name: joined([getattr(network.kinds[index], name) for network in networks])
            for name in kind.PARAMETERS
        }
        kinds.append(replace(kind, **changed))  # type: ignore[type-var]  # every kind is one
    sources = replace(
        first.sources,
        **{
            name: joined([getattr(network.sources, name) for network in networks])
            for name in ("power", "stated_at_k", "slope", "doublings")
        },
    )
    return replace(
        first,
        reference_k=joined([network.reference_k for network in networks]),
        fixed_rise=joined([network.fixed_rise for network in networks]),
        kinds=tuple(kinds),
        sources=sources,
        readings=replace(
            first.readings, weight=joined([network.readings.weight for network in networks])
        ),
    )
