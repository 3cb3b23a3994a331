"""Names the document's vocabulary fixes; needed where the models are not."""

from typing import Literal

WallName = Literal["left", "right", "front", "back", "bottom", "top"]
WALL_NAMES: tuple[WallName, ...] = ("left", "right", "front", "back", "bottom", "top")
AIR = "air"

MountingKind = Literal[
    "open_air", "against_surface", "neighbour", "standing_on", "bolted_to", "insulated"
]
LimitKind = Literal["junction", "case", "board", "air"]
OpeningKind = Literal["hole", "perforated", "slots", "louvre", "mesh", "filter", "cable_gland"]
