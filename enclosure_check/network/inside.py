"""Builds the radiation inside: grey exchange with reflections between patches.

Two nodes for each patch: its irradiation H, and the mean emission E of what lies on it. What lies
on a patch gives ``e A (sigma T^4 - H)`` to H; patches exchange their radiosities
``(1 - e) H + e E`` over the exchange areas of their view factors.
"""

from itertools import pairwise

import numpy as np

from enclosure_check.network.links import FloatArray, IntArray, LinkLabel
from enclosure_check.network.site import Site

# A patch that is hidden altogether takes no part. [m2]
LEAST_AREA = 1e-12
# Exchange areas below this share of their patches are left out. [-]
LEAST_SHARE = 1e-9
# Weight that keeps the mean emission of a patch of mirrors defined; it sends nothing out. [-]
_MIRROR = 1e-9


def build_inside_radiation(site: Site) -> None:
    """Join every inside surface to its patch, and the patches among each other."""
    builder, count = site.builder, site.patches.count
    exchange = site.patches.exchange()
    area = exchange.sum(axis=1)
    # What stands proud of a patch sees no more than through the patch's own outline.
    on_patch = np.zeros(count)
    for surface in site.surfaces:
        np.add.at(on_patch, np.ravel(surface.patch), np.ravel(surface.area))
    outline = np.minimum(1.0, area / np.maximum(on_patch, 1e-300))
    sees = area > LEAST_AREA
    emitting = np.zeros(count)
    irradiation = builder.nodes("irradiation of patch", (count,))
    found: list[tuple[IntArray, IntArray, FloatArray, FloatArray]] = []
    for surface in site.surfaces:
        bare = (np.ravel(surface.area) > 0) & sees[np.ravel(surface.patch)]
        nodes, patch = np.ravel(surface.cells)[bare], np.ravel(surface.patch)[bare]
        seen = np.ravel(surface.area)[bare] * outline[patch]
        builder.radiate(nodes, irradiation[patch], seen, seen, surface.emissivity, surface.label)
        np.add.at(emitting, patch, surface.emissivity * seen)
        found.append((patch, nodes, seen, np.full(nodes.size, max(surface.emissivity, _MIRROR))))
    emission = irradiation.copy()
    patch, nodes, seen, weight = (np.concatenate(column) for column in zip(*found, strict=True))
    order = np.argsort(patch, kind="stable")
    bounds = np.searchsorted(patch[order], np.arange(count + 1)).tolist()
    for index, (start, end) in enumerate(pairwise(bounds)):
        if end > start:
            here = order[start:end]
            label = f"emission of patch {index + 1}"
            emission[index] = builder.mean_emission(label, nodes[here], seen[here], weight[here])
    mean = emitting / np.where(sees, area, 1.0)
    first, second = np.nonzero(np.triu(exchange > LEAST_SHARE * area.min(), 1))
    builder.exchange(
        (irradiation[first], irradiation[second]),
        (emission[first], emission[second]),
        exchange[first, second],
        (mean[first], mean[second]),
        LinkLabel("inside", "radiation"),
    )
    # Between perfect mirrors no irradiation is determined; a trace of one holds them at rest.
    builder.conduct(irradiation, site.air_nodes[0], TRACE_W_PER_K, LinkLabel("inside", "trace"))


# Far below what any check can tell; see above. [W/K]
TRACE_W_PER_K = 1e-12
