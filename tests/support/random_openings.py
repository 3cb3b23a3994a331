"""Openings at random, for random documents: every kind, on walls with air outside.

Import it as ``from support.random_openings import random_vented_document``.
"""

import math
import random
from typing import Any

from support.random_documents import random_document

from enclosure_check.description.frames import AXIS
from enclosure_check.description.names import WALL_NAMES

Data = dict[str, Any]

KINDS = ("hole", "perforated", "slots", "louvre", "mesh", "filter", "cable_gland")
# Sizes of the box across and up each wall, by its axis.
_ACROSS = {0: ("depth_mm", "height_mm"), 1: ("width_mm", "height_mm"), 2: ("width_mm", "depth_mm")}


def random_vented_document(rng: random.Random, most: int = 6) -> Data:
    """Make one document with up to ``most`` openings and up to eight boards."""
    document = random_document(rng, most_boards=8)
    walls = document["walls"]
    free = [name for name in WALL_NAMES if "mounting" not in walls.get(name, {})]
    for index in range(rng.randint(0, most)):
        name = rng.choice(free)
        across, up = (document["box"][key] for key in _ACROSS[AXIS[name]])
        opening = random_opening(rng, across, up)
        walls.setdefault(name, {}).setdefault("openings", {})[f"vent {index}"] = opening
    return document


def random_opening(rng: random.Random, across: float, up: float) -> Data:
    """Make one opening in a wall of a size [mm]."""
    kind = rng.choice(KINDS)
    width, height = across * _log(rng, 0.02, 0.9), up * _log(rng, 0.02, 0.9)
    made: Data = {"kind": kind}
    if kind == "cable_gland":
        width = height = min(width, height, 60.0)
        made |= {"diameter_mm": width, "cable_mm": width * rng.uniform(0.2, 0.9)}
    else:
        made |= {"width_mm": width, "height_mm": height}
    small = min(width, height)
    if kind == "perforated":
        made |= {"hole_mm": small * _log(rng, 0.02, 0.3), "free_area_pct": rng.uniform(10, 60)}
    if kind in ("slots", "louvre"):
        made |= {
            "slot_width_mm": small * _log(rng, 0.02, 0.3),
            "free_area_pct": rng.uniform(10, 60),
        }
    if kind in ("hole", "perforated") and rng.random() < 0.3:
        made["loss_coefficient"] = _log(rng, 1, 60)
    if kind == "hole" and rng.random() < 0.2:
        made[rng.choice(["screen", "filter"])] = {}
    made["at_mm"] = [
        rng.uniform(width / 2, across - width / 2),
        rng.uniform(height / 2, up - height / 2),
    ]
    made["blocked_pct"] = rng.choice([0, 0, 0, rng.uniform(0, 99), 100])
    return made


def _log(rng: random.Random, low: float, high: float) -> float:
    return math.exp(rng.uniform(math.log(low), math.log(high)))
