"""Builds the radiation inside: grey exchange with reflections between patches.

Two nodes for each patch: its irradiation H, and the mean emission E of what lies on it. What lies
on a patch gives ``e A (sigma T^4 - H)`` to H; patches exchange their radiosities
``(1 - e) H + e E`` over the exchange areas of their view factors.
"""

import numpy as np

from enclosure_check.network.links import LinkLabel
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
    surfaces = site.surfaces
    sizes = [np.size(surface.cells) for surface in surfaces]
    cells, patch, on_it = (
        np.concatenate([np.ravel(column) for column in columns])
        for columns in zip(*((each.cells, each.patch, each.area) for each in surfaces), strict=True)
    )
    emissivity = np.repeat([surface.emissivity for surface in surfaces], sizes)
    label = np.repeat([builder.label(surface.label) for surface in surfaces], sizes)
    # What stands proud of a patch sees no more than through the patch's own outline.
    on_patch = np.zeros(count)
    np.add.at(on_patch, patch, on_it)
    outline = np.minimum(1.0, area / np.maximum(on_patch, 1e-300))
    sees = area > LEAST_AREA
    irradiation = builder.nodes("irradiation of patch", (count,))
    bare = (on_it > 0) & sees[patch]
    cells, patch, emissivity, label = cells[bare], patch[bare], emissivity[bare], label[bare]
    seen = on_it[bare] * outline[patch]
    builder.radiate_each(cells, irradiation[patch], seen, emissivity, label)
    emitting = np.zeros(count)
    np.add.at(emitting, patch, emissivity * seen)
    emission = irradiation.copy()
    order = np.argsort(patch, kind="stable")
    held = np.bincount(patch, minlength=count)
    some = np.flatnonzero(held)
    emission[some] = builder.mean_emissions(
        [f"emission of patch {index + 1}" for index in some.tolist()],
        held[some],
        cells[order],
        seen[order],
        np.maximum(emissivity, _MIRROR)[order],
    )
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
