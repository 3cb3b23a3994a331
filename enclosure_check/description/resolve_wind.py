"""Check the wind against the walls, and say what it was taken to be."""

from collections.abc import Mapping

from enclosure_check.description.case import SurroundingsCase, WallCase
from enclosure_check.description.names import WallName
from enclosure_check.description.remarks import Remarks

# Outsides that air can come from; the others have something close behind them.
_FREE = ("open_air", "insulated")


def check_wind(
    surroundings: SurroundingsCase, walls: Mapping[WallName, WallCase], remarks: Remarks
) -> None:
    """Refuse wind from a side that is not free; record what is assumed of the wind."""
    speed, side = surroundings.wind_m_per_s, surroundings.wind_from
    if side is not None and side in walls and walls[side].mounting.kind not in _FREE:
        remarks.error(
            ("surroundings", "wind_from"),
            f"given {side!r}, but the {side} wall has its mounting {walls[side].mounting.kind} "
            "there; give another side, or any",
        )
    if speed <= 0:
        return
    way = "from any side, each wall counting with its longer edge"
    if side is not None:
        way = f"from the {side}, along that axis of the box"
    remarks.assume(f"wind of {speed:g} m/s past the box, {way}; still air is the hot case")
    for name, wall in walls.items():
        if wall.mounting.kind != "open_air":
            remarks.assume("no wind at walls that are not in open air", name)
        for opening in wall.openings:
            if not opening.closed:
                remarks.assume(
                    "wind neither drives nor hinders the flow through openings, though it may",
                    f"{name}/{opening.name}",
                )
