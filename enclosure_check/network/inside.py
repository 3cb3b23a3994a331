"""Builds the radiation inside: grey exchange with reflections between patches.

Two nodes for each patch: its irradiation H, and the mean emission E of what lies on it. What lies
on a patch gives ``e A (sigma T^4 - H)`` to H; patches exchange their radiosities
``(1 - e) H + e E`` over the exchange areas of their view factors.
"""

import numpy as np

from enclosure_check.network.links import FloatArray, LinkLabel
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
    cells: list[list[FloatArray]] = [[] for _ in range(count)]
    irradiation = builder.nodes("irradiation of patch", (count,))
    for surface in site.surfaces:
        bare = (np.ravel(surface.area) > 0) & sees[np.ravel(surface.patch)]
        nodes, patch = np.ravel(surface.cells)[bare], np.ravel(surface.patch)[bare]
        seen = np.ravel(surface.area)[bare] * outline[patch]
        builder.radiate(nodes, irradiation[patch], seen, seen, surface.emissivity, surface.label)
        np.add.at(emitting, patch, surface.emissivity * seen)
        weight = np.full(nodes.size, max(surface.emissivity, _MIRROR))
        # Not by `numpy.unique`, which loads masked arrays.
        for index in sorted(set(patch.tolist())):
            here = patch == index
            cells[index].append(np.stack((nodes[here], seen[here], weight[here])))
    emission = irradiation.copy()
    for index, found in enumerate(cells):
        if found:
            nodes, seen, weight = np.concatenate(found, axis=1)
            label = f"emission of patch {index + 1}"
            emission[index] = builder.mean_emission(label, nodes.astype(np.intp), seen, weight)
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
