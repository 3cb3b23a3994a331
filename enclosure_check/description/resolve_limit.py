"""Fill in the limits of parts, derating curves included."""

from __future__ import annotations

from itertools import pairwise
from typing import TYPE_CHECKING

from enclosure_check.description.case import LimitCase
from enclosure_check.description.names import LimitKind
from enclosure_check.description.remarks import Path, Remarks
from enclosure_check.description.yaml_nodes import plain_value

if TYPE_CHECKING:
    from enclosure_check.description.part import Limit

# The temperatures a derating curve may be drawn over, as every other temperature limit. [C]
LOWEST_C, HIGHEST_C = -150.0, 500.0


def resolve_limit(
    here: Path, point: LimitKind, limit: Limit, on_board: bool, remarks: Remarks
) -> LimitCase | None:
    """Give one limit of a part, or None when something is wrong with it.

    Parameters
    ----------
    here
        Path of the limit.
    point
        What it holds for.
    limit
        What the document says.
    on_board
        Whether the part sits on a board.
    remarks
        Takes the errors.
    """
    if point == "board" and not on_board:
        remarks.error(here, "a board limit needs a part on a board")
        return None
    highest, derated = limit.max_c, False
    if limit.derating is not None:
        from_curve = _derated(here, limit, remarks)
        if from_curve is None:
            return None
        derated = highest is None or from_curve < highest
        highest = from_curve if highest is None else min(highest, from_curve)
    if highest is None and limit.min_c is None:
        remarks.error(here, "missing; needs max_c, min_c or derating")
        return None
    if highest is not None and limit.min_c is not None and limit.min_c >= highest:
        remarks.error((*here, "min_c"), f"given {limit.min_c:g}; not below the highest allowed")
        return None
    return LimitCase(point, highest, limit.min_c, derated)


def _derated(here: Path, limit: Limit, remarks: Remarks) -> float | None:
    """Give the highest temperature at which the curve still allows the load [C]."""
    assert limit.derating is not None
    curve_path = (*here, "derating", "allowed_pct")
    points: list[tuple[float, float]] = []
    for text, allowed in limit.derating.allowed_pct.items():
        temperature = plain_value(text)
        if isinstance(temperature, bool) or not isinstance(temperature, int | float):
            remarks.error((*curve_path, text), f"given {text!r}, allowed: a temperature in Celsius")
            return None
        if not LOWEST_C <= temperature <= HIGHEST_C:
            remarks.error(
                (*curve_path, text),
                f"given {text!r}, allowed: {LOWEST_C:g} to {HIGHEST_C:g} Celsius",
            )
            return None
        points.append((temperature, allowed))
    if any(
        not (later[0] > earlier[0] and later[1] <= earlier[1])
        for earlier, later in pairwise(points)
    ):
        remarks.error(
            curve_path, "temperatures must rise and the allowed load must not rise with them"
        )
        return None
    return highest_allowed_c(points, limit.derating.load_pct)


def highest_allowed_c(points: list[tuple[float, float]], load_pct: float) -> float:
    """Give the highest temperature at which a derating curve allows a load [C].

    Parameters
    ----------
    points
        Pairs of temperature [C], rising, and load allowed [%], not rising.
    load_pct
        The load [%]. More than the curve ever allows gives the lowest temperature less 100 K
        (no temperature is cold enough, yet the margin stays a number).
    """
    if load_pct > points[0][1]:
        return points[0][0] - 100.0
    for (low_c, high_pct), (high_c, low_pct) in pairwise(points):
        if load_pct > low_pct:
            return low_c + (high_c - low_c) * (high_pct - load_pct) / (high_pct - low_pct)
    return points[-1][0]
