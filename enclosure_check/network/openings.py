"""Builds the openings: every wall's vents as one kind of link, with the boards in the way."""

import math

import numpy as np

from enclosure_check.description.case import Case, OpeningCase
from enclosure_check.description.frames import AXIS, SIGN
from enclosure_check.network.links import FloatArray, LinkLabel
from enclosure_check.network.opening_losses import OpeningLoss, opening_loss
from enclosure_check.network.passages import Obstacle, passage_losses
from enclosure_check.network.site import Site
from enclosure_check.network.units import metres, metres_3
from enclosure_check.network.vents import Vents

# Pieces an opening is cut into over its height.
PIECES = 8


def build_openings(case: Case, site: Site) -> None:
    """Join the inside air to the air outside by every opening that is not closed."""
    openings = [each for wall in case.walls.values() for each in wall.openings if not each.closed]
    builder, air_site = site.builder, site.air_site
    number: list[int] = []
    area: list[FloatArray] = []
    heights: list[FloatArray] = []
    for index, opening in enumerate(openings):
        at = piece_heights(opening, site)
        heights.append(at)
        area.append(np.full(len(at), opening.free_area_mm2 * 1e-6 / len(at)))
        number += [index] * len(at)
    boards = [
        Obstacle(board.axis, metres_3(board.low_mm), metres_3(board.high_mm))
        for board in case.boards.values()
    ]
    quadratic, friction = passage_losses(boards, air_site.inside, case.up, len(site.air_nodes) - 1)

    def column(values: list[float]) -> FloatArray:
        return np.array(values, dtype=np.float64)[:, None]

    losses = [opening_loss(opening) for opening in openings]
    builder.add(
        Vents(
            air=site.air_nodes,
            ambient=site.ambient,
            spacing=air_site.height / (len(site.air_nodes) - 1),
            names=tuple((opening.wall, opening.name) for opening in openings),
            opening=np.array(number, dtype=np.intp),
            hat=air_site.share(np.concatenate(heights)),
            area=np.concatenate(area)[:, None],
            loss=column([loss.loss for loss in losses]),
            viscous=column([loss.viscous / loss.hole_m for loss in losses]),
            filter=column([loss.filter_pa_s_per_m for loss in losses]),
            radius=column([math.sqrt(loss.free_area_m2 / math.pi) for loss in losses]),
            exchange_diameter=column([loss.hole_m for loss in losses]),
            exchange_count=column([loss.free_area_m2 / hole_area(loss) for loss in losses]),
            exchange_depth=column([metres(o.thickness_mm) for o in openings]),
            level_cosine=column([SIGN[o.wall] * case.up[AXIS[o.wall]] for o in openings]),
            passage_loss=quadratic[:, None],
            passage_friction=friction[:, None],
            pressure_pa=builder.pressure_pa,
            opening_label=np.array(
                [
                    builder.label(LinkLabel(f"opening:{o.wall}/{o.name}", "openings"))
                    for o in openings
                ],
                dtype=np.intp,
            ),
            carried_label=builder.label(LinkLabel("inside", "carried")),
        )
    )


def piece_heights(opening: OpeningCase, site: Site) -> FloatArray:
    """Heights of the middles of an opening's pieces over the lowest point inside [m]."""
    low, size = np.array(metres_3(opening.low_mm)), np.array(metres_3(opening.size_mm))
    along = np.stack((low, low + size)) * np.asarray(site.up)
    bottom = float(along.min(axis=0).sum()) - site.air_site.bottom
    top = float(along.max(axis=0).sum()) - site.air_site.bottom
    if top - bottom < 1e-6:
        return np.array([0.5 * (top + bottom)])
    return np.asarray(bottom + (top - bottom) * (np.arange(PIECES) + 0.5) / PIECES)


def hole_area(loss: OpeningLoss) -> float:
    """Area of a round hole of an opening's hydraulic diameter [m2]."""
    return math.pi / 4.0 * loss.hole_m**2
