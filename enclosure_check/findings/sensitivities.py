"""Which numbers of a document buy most margin where it is smallest, all by one adjoint."""

import math
from collections.abc import Sequence

import numpy as np

from enclosure_check.description.case import ToleranceCase
from enclosure_check.description.numbers import meaning, numbers
from enclosure_check.description.variation import Variation
from enclosure_check.findings.certainty import Sensitivities, Sensitivity
from enclosure_check.findings.confidence import Bands, bands, stated_turns, unit_of
from enclosure_check.findings.parts import point
from enclosure_check.findings.rebuilt import derivative_by_rebuilding
from enclosure_check.findings.results import PartFinding
from enclosure_check.findings.solved import Solved

Key = tuple[str, ...]
# Sections of the document that a designer does not choose.
_INSTALLATION = ("surroundings", "mode")
# Keys that set limits, not temperatures.
_LIMITS = ("limits", "touch_max_c")
# A number whose percent moves a margin by less is left out: it does nothing there. [K]
LEAST_K = 1e-4


def sensitivities(
    solved: Solved, variation: Variation, worst: PartFinding, most: int
) -> Sensitivities:
    """Give the numbers that move the smallest margin most, per percent of each.

    Parameters
    ----------
    solved
        The case it arises in.
    variation
        The document under its option and condition.
    worst
        The finding with the smallest margin.
    most
        How many to give of those a designer can change, and of those of the installation.
    """
    node = point(solved, worst.name, worst.limit_kind)
    own = bands(solved, [node])
    rows: list[Sensitivity] = []
    if own is not None:
        sign = -1.0 if worst.limit_side == "max" else 1.0
        rows = [
            row
            for path, value in numbers(variation.node).items()
            if not any(step in _LIMITS for step in path)
            and (row := _row(own, variation, path, value, sign)) is not None
        ]
    rows.sort(key=_rank)
    design, given = (
        [row for row in rows if row.installation is kind][:most] for kind in (False, True)
    )
    return Sensitivities(
        worst.name, worst.limit_kind, worst.limit_side, solved.case.condition, (*design, *given)
    )


def _row(
    own: Bands, variation: Variation, path: Key, value: float, sign: float
) -> Sensitivity | None:
    """Give what a number buys; None where it does nothing."""
    found = _by_adjoint(own, variation, path, value)
    route = "adjoint"
    if found is None:
        route = "rebuilt"
        by = derivative_by_rebuilding(own.solved, own.adjoint, variation.case_with, path, value)
        if by is None:
            return None
        found = float(by[0])
    per_pct = None if path[-1].endswith("_c") else sign * found * abs(value) / 100
    moves = abs(found) if per_pct is None or value == 0 else abs(per_pct)
    if not math.isfinite(found) or moves < LEAST_K:
        return None
    return Sensitivity(
        path=".".join(path),
        value=value,
        unit=unit_of(path),
        margin_per_pct_k=per_pct,
        margin_per_unit_k=sign * found,
        installation=_is_installation(path),
        route="adjoint" if route == "adjoint" else "rebuilt",
    )


def _rank(row: Sensitivity) -> float:
    """Give what ranks a number first: a percent of it, a kelvin of a temperature."""
    by = row.margin_per_unit_k if row.margin_per_pct_k is None else row.margin_per_pct_k
    return -abs(by)


def _by_adjoint(own: Bands, variation: Variation, path: Key, value: float) -> float | None:
    """Derivative by a number that is one thing in the case [K/unit]; None for any other."""
    about = meaning(variation.document, path).about
    by_key = {quantity.key: quantity for quantity in own.quantities}
    if not about or any(key not in by_key for key in about) or value == 0:
        return None
    unit = ToleranceCase(path, value, 1.0, None, about, about)
    turns: Sequence[tuple[int, float]] = [
        turn for key in about for turn in stated_turns(by_key[key], unit)
    ]
    gradient = own.gradient[:, 0]
    return float(np.sum([share * gradient[knob] for knob, share in turns]))


def _is_installation(path: Key) -> bool:
    return path[0] in _INSTALLATION or path[-1] in ("surface_c", "surface_emissivity")
