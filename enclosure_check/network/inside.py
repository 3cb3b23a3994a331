"""Builds the radiation inside: every surface exchanges with all others over one mean node."""

import numpy as np

from enclosure_check.network.links import LinkLabel
from enclosure_check.network.site import Site
from enclosure_check.physics.radiation import mean_radiant_exchange_areas


def build_inside_radiation(site: Site) -> None:
    """Join every inside surface to the mean radiant node of the cavity."""
    surfaces = [surface for surface in site.surfaces if surface.area.sum() > 0]
    areas = np.array([float(surface.area.sum()) for surface in surfaces])
    for surface, area, exchange in zip(
        surfaces, areas, mean_radiant_exchange_areas(areas), strict=True
    ):
        bare = surface.area > 0
        site.builder.radiate(
            surface.cells[bare],
            site.radiant_inside,
            surface.area[bare],
            surface.area[bare] * (exchange / area),
            surface.emissivity,
            surface.label,
        )
    if all(surface.emissivity == 0 for surface in surfaces):
        # Nothing radiates: the mean node rests at air temperature, and no heat passes.
        label = LinkLabel("inside", "no_radiation")
        site.builder.conduct(site.radiant_inside, site.air, 1.0, label)
