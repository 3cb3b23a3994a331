"""Builds the radiation inside: every surface exchanges with all others over one mean node."""

from enclosure_check.network.links import LinkLabel
from enclosure_check.network.site import Site
from enclosure_check.physics.radiation import mean_radiant_exchange_areas


def build_inside_radiation(site: Site) -> None:
    """Join every inside surface to the mean radiant node of the cavity."""
    surfaces = [surface for surface in site.surfaces if surface.area > 0]
    exchange = mean_radiant_exchange_areas([surface.area for surface in surfaces])
    for surface, exchange_area in zip(surfaces, exchange, strict=True):
        site.builder.radiate(
            surface.node,
            site.radiant_inside,
            surface.area,
            float(exchange_area),
            surface.emissivity,
            surface.label,
        )
    if all(surface.emissivity == 0 for surface in surfaces):
        # Nothing radiates: the mean node rests at air temperature, and no heat passes.
        label = LinkLabel("inside", "no_radiation")
        site.builder.conduct(site.radiant_inside, site.air, 1.0, label)
