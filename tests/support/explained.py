"""A document with many ways for heat, and its links scaled and solved again.

Import it as ``from support.explained import DOCUMENT`` (``tests`` is on the path).
"""

from dataclasses import replace

import numpy as np
from support.cases import board, box, part, patched
from support.features import CABLE, CAN, STAND_OFF

from enclosure_check.network.inside_air import InsideAir
from enclosure_check.network.links import Conduction, Radiation
from enclosure_check.network.network import Network
from enclosure_check.network.scaled import with_free_areas
from enclosure_check.network.vents import Vents
from enclosure_check.solve.levers import Bundle

DOCUMENT = box(
    surroundings={"sky": "clear", "radiant_c": 20, "sun_w_per_m2": {"top": 400}},
    walls={
        "bottom": {"mounting": {"kind": "bolted_to", "contact_w_per_m2k": 50, "surface_c": 30}},
        "left": {"material": "pc_abs", "cables": {"mains": CABLE}},
        "back": {"mounting": {"kind": "against_surface", "gap_mm": 12, "surface_c": 15}},
    },
    boards={
        "main": board(
            other_power_w=3,
            from_walls_mm={"front": 12},
            stand_offs={"s": STAND_OFF},
            shield_cans={"can": CAN},
        ),
    },
    parts={
        "U1": part(
            power_w=2,
            at_mm=[20, 80],
            theta_jc_top_k_per_w=4,
            theta_jb_k_per_w=6,
            limits={"junction": {"max_c": 110}},
        ),
        "U2": part(power_w=1, at_mm=[60, 50], limits={"case": {"max_c": 80, "min_c": -20}}),
        "U3": part(power_w=1.5, at_mm=[20, 20], power_slope_pct_per_k=0.4, side="back"),
        "R1": part(place="right", side=None, at_mm=[50, 70], power_w=2, bottom_contact_k_per_w=1),
        "B1": part(
            place="air", side=None, at_mm=None, height_mm=20, limits={"case": {"max_c": 60}}
        ),
    },
)

SLOTS = {
    "kind": "slots",
    "width_mm": 60,
    "height_mm": 30,
    "slot_width_mm": 4,
    "free_area_pct": 50,
}
VENTED = patched(
    DOCUMENT,
    {
        "walls": {
            "front": {"openings": {"high": {**SLOTS, "at_mm": [100, 125]}}},
            "right": {"openings": {"low": {**SLOTS, "at_mm": [50, 25]}}},
        }
    },
)


def scaled(network: Network, bundle: Bundle, factor: float) -> Network:
    """The network with the conductance of some links multiplied, by the kinds' own numbers."""
    kind = network.kinds[bundle.kind]
    factors = np.ones((len(kind.a), 1))
    factors[bundle.links] = factor
    if isinstance(kind, Conduction):
        changed = replace(kind, conductance=kind.conductance * factors)
    elif isinstance(kind, Radiation):
        changed = replace(kind, share=kind.share * factors)
    elif isinstance(kind, InsideAir):
        films, straights = len(kind.cell), len(kind.cell_a)
        changed = replace(
            kind,
            area=kind.area * factors[:films],
            straight_area=kind.straight_area * factors[2 * films : 2 * films + straights],
        )
    elif isinstance(kind, Vents):
        by_opening = factors[len(kind.air) - 1 :].reshape(-1, len(kind.air))[:, :1]
        changed = with_free_areas(kind, by_opening)
    else:
        changed = replace(kind, area=kind.area * factors)
    kinds = list(network.kinds)
    kinds[bundle.kind] = changed
    return replace(network, kinds=tuple(kinds))
