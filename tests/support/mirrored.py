"""The mirror image of a document, as plain data.

Import it as ``from support.mirrored import mirrored``.
"""

from typing import Any

from enclosure_check.description.frames import AXIS, OPPOSITE, SIGN, wall_pair
from enclosure_check.description.names import WALL_NAMES

Data = dict[str, Any]


def mirrored(document: Data, axis: int) -> Data:
    """Give the mirror image of a document across one axis of the box (0 left and right, 1 front
    and back, 2 bottom and top).
    """
    first, second = wall_pair(axis)

    def name(wall: str) -> str:
        return OPPOSITE[wall] if wall in (first, second) else wall  # type: ignore[index,return-value]

    def keys(mapping: Data) -> Data:
        return {name(wall): value for wall, value in mapping.items()}

    image = dict(document)
    image["walls"] = keys(document.get("walls", {}))
    lean, roll = (
        document["box"].get("tilt", {}).get(key, 0) for key in ("lean_back_deg", "roll_right_deg")
    )
    # Up is (-sin roll, -sin lean cos roll, cos lean cos roll): turn one component round.
    lean, roll = [(lean, -roll), (-lean, roll), (180 - lean, roll)][axis]
    lean = (lean + 180) % 360 - 180
    image["box"] = {**document["box"], "tilt": {"lean_back_deg": lean, "roll_right_deg": roll}}
    around = dict(document["surroundings"])
    if "sun_w_per_m2" in around:
        around["sun_w_per_m2"] = keys(around["sun_w_per_m2"])
    if "wind_from" in around:
        around["wind_from"] = name(around["wind_from"])
    image["surroundings"] = around
    image["boards"] = {
        key: {
            **board,
            "parallel_to": name(board["parallel_to"]),
            "from_walls_mm": keys(board.get("from_walls_mm", {})),
        }
        for key, board in document.get("boards", {}).items()
    }
    image["parts"] = {
        key: _mirrored_part(part, image["boards"], axis, name)
        for key, part in document.get("parts", {}).items()
    }
    return image


def _mirrored_part(part: Data, boards: Data, axis: int, name: Any) -> Data:
    image = dict(part)
    if part["place"] == "air":
        image["from_walls_mm"] = {
            name(wall): value for wall, value in part.get("from_walls_mm", {}).items()
        }
        return image
    if part["place"] in WALL_NAMES:
        image["place"] = name(part["place"])
        normal = AXIS[part["place"]]
    else:
        image["side"] = name(part["side"])
        normal = AXIS[part["side"]]
    if "pad" in part and "to" in part["pad"]:
        image["pad"] = {**part["pad"], "to": name(part["pad"]["to"])}
    # Seen from its side, a mirror across the normal swaps right and left, one across the right
    # axis does too, and one across the up axis swaps upper and lower.
    up_axis = 2 if normal != 2 else 1
    vertical, horizontal = part.get("at_from", "lower_left").split("_")
    if axis == up_axis:
        vertical = {"lower": "upper", "upper": "lower"}[vertical]
    else:
        horizontal = {"left": "right", "right": "left"}[horizontal]
    image["at_from"] = f"{vertical}_{horizontal}"
    return image


assert all(SIGN[wall] == -SIGN[OPPOSITE[wall]] for wall in WALL_NAMES)
