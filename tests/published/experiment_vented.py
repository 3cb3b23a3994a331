"""A vented box with one upright board: a numerical experiment made for this project, and ours.

Laminar free convection without radiation, adiabatic walls, solved on a fine grid with a
general-purpose flow solver; no measurement. Inside 100 x 152 x 254 mm high, a board 140 x 2 x 200 mm
high upright in the middle gives off 10 W evenly; slots 100 x 20 mm low in the front and high in the
back; air outside at 300 K. Both openings together lost 3.07 velocity heads there, given to the
model as it was found; its mass flow is within 1 %. The case was seen while the form of the model was
chosen; none of its constants was fitted to it.

Run it as ``python tests/published/experiment_vented.py`` for the table.
"""

import sys
from dataclasses import dataclass, replace
from functools import cache
from pathlib import Path
from typing import Any

if __name__ == "__main__":
    sys.path[:0] = [str(Path(__file__).resolve().parents[2])]

import numpy as np

from enclosure_check.description.document import Document
from enclosure_check.description.resolve import resolve
from enclosure_check.network.build import build_network
from enclosure_check.network.vents import Vents
from enclosure_check.solve.steady import solve_steady

AIR_C, POWER_W, LOSS = 26.85, 10.0, 3.07
HEIGHTS = (0.1, 0.25, 0.5, 0.75, 0.9)


@dataclass(frozen=True)
class Vented:
    """What the experiment gave, or the model."""

    flow_g_per_s: float
    outlet_k: float
    board_k: float
    profile_k: tuple[float, ...]
    """Rise of the air at `HEIGHTS`."""


THEIRS = Vented(0.4325, 23.05, 34.9, (0.43, 2.37, 3.76, 12.8, 25.1))


def _slot(centre_mm: float) -> dict[str, Any]:
    return {
        "kind": "hole",
        "width_mm": 100.0,
        "height_mm": 20.0,
        "at_mm": [50.0, centre_mm],
        "loss_coefficient": LOSS / 2,
    }


def document() -> dict[str, Any]:
    """Walls that hardly conduct and do not radiate, and the board."""
    return {
        "title": "Vented box",
        "materials": {"still": {"conductivity_w_per_mk": 0.01}},
        "finishes": {"mirror": {"emissivity": 0.0}},
        "defaults": {"wall": {"material": "still", "thickness_mm": 2, "finish_outside": "mirror"}},
        "box": {"width_mm": 100, "depth_mm": 152, "height_mm": 254},
        "walls": {
            "left": {"mounting": {"kind": "insulated"}},
            "front": {"openings": {"inlet": _slot(15.0)}},
            "back": {"openings": {"outlet": _slot(239.0)}},
        },
        "boards": {
            "board": {
                "parallel_to": "left",
                "length_mm": 140,
                "width_mm": 200,
                "thickness_mm": 2,
                "conductivity_in_plane_w_per_mk": 0.3,
                "finish": "mirror",
                "other_power_w": POWER_W,
            }
        },
        "surroundings": {"air_c": AIR_C},
    }


@cache
def ours() -> Vented:
    """Give the model's answer."""
    resolved = resolve(Document.model_validate(document()), "base")
    # In a document a wall with openings has air outside; here all are insulated.
    insulated = resolved.walls["left"].mounting
    walls = {name: replace(wall, mounting=insulated) for name, wall in resolved.walls.items()}
    network = build_network(replace(resolved, walls=walls))
    solution = solve_steady(network)
    assert solution.converged
    vents = next(kind for kind in network.kinds if isinstance(kind, Vents))
    places, rise = network.places, solution.rise
    layer = rise[places.air_nodes]
    state = vents.state(layer, network.reference_k)
    warmth = float((state.leaving * (vents.hat @ layer)).sum())
    flow = float(state.leaving.sum())
    height = places.air_heights / places.air_heights[-1]
    return Vented(
        1e3 * flow,
        warmth / flow,
        float(rise[places.boards["board"].mean, 0]),
        tuple(np.interp(HEIGHTS, height, layer[:, 0]).tolist()),
    )


def table() -> list[list[str]]:
    """Give the rows of the table in the page about the method: quantity, theirs, ours."""
    got = ours()
    rows = [
        ["mass flow, g/s", f"{THEIRS.flow_g_per_s:.3f}", f"{got.flow_g_per_s:.3f}"],
        ["air that leaves, K", f"{THEIRS.outlet_k:.1f}", f"{got.outlet_k:.1f}"],
        ["board, mean, K", f"{THEIRS.board_k:.1f}", f"{got.board_k:.1f}"],
    ]
    for share, theirs, own in zip(HEIGHTS, THEIRS.profile_k, got.profile_k, strict=True):
        rows.append([f"air at {share:g} of the height, K", f"{theirs:.1f}", f"{own:.1f}"])
    return rows


if __name__ == "__main__":
    for row in table():
        print(" | ".join(row))
