"""Accuracies of the program's own forms, found from the numerical experiments by one rule.

A form of ours has no published accuracy. What stands for it is twice the root mean square of what
the numerical experiments lie off it, rounded up to a whole percent. So the rows of the evidence
page that these come from are no independent check of the bands that rest on them.

Run it as ``python tests/published/accuracies.py`` for the table in the page about the method.
"""

import math
import os
import sys
from dataclasses import dataclass
from functools import cache
from pathlib import Path

if __name__ == "__main__":
    os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")
    sys.path[:0] = [str(Path(__file__).resolve().parents[at]) for at in (2, 1)]

import numpy as np
from published.command import solved as document_solved
from published.experiments_inside import CASES, FACES_W, HEIGHTS, ours, solved
from published.experiments_outside import CASES as BOXES
from published.experiments_outside import parts
from published.faces import heat_by_face
from published.vented_slices import F_SLICES_K, slice_of_f

from enclosure_check.findings.causes import CAUSES
from enclosure_check.findings.quantities import quantities
from enclosure_check.findings.solved import Solved
from enclosure_check.network.inside_air import InsideAir

# Slices that a half of the height answers for, the middle one in both.
NARROW = ("B20", "B10")
LOWER, UPPER = (0.1, 0.25, 0.5), (0.5, 0.75, 0.9)
# What is no cause of its own, on the page about the method.
WORDS = {
    **{family: row.words for family, row in CAUSES.items()},
    "faces": "sides and bottom of a box outside, each alone",
    "shares": "shares of the walls of a sealed box",
}


@dataclass(frozen=True)
class Found:
    """What the experiments say of one form."""

    family: str
    """The row of the program's causes that has it; of what is no cause, what it is."""
    of: str
    """What a deviation is a share of."""
    deviations: dict[str, float]
    """Theirs less ours, by row [%]."""

    @property
    def rms_pct(self) -> float:
        """Root mean square of the deviations [%]."""
        return float(np.sqrt(np.mean(np.square(list(self.deviations.values())))))

    @property
    def half_width_pct(self) -> int:
        """Half-width at about 95 % by the rule [%]."""
        return math.ceil(2.0 * self.rms_pct)


def _outside(*faces: str) -> dict[str, float]:
    rows = {}
    for case in BOXES:
        got = parts(case)
        for face in faces:
            theirs = getattr(case, f"{face}_w")
            if theirs is not None:
                name = case.name.partition(" ")[0] + (f" {face}" if len(faces) > 1 else "")
                rows[name] = 100.0 * (theirs / got[face] - 1.0)
    return rows


def _faces(face: str) -> dict[str, float]:
    rows = {}
    for name, sides in FACES_W.items():
        case = next(each for each in CASES if each.name == name)
        got = heat_by_face(solved(case, ours(name).total_w))[f"board board, {face}"]
        rows[name] = 100.0 * (sides[face] / got - 1.0)
    return rows


def _slices(heights: tuple[float, ...]) -> dict[str, float]:
    """Of what warms the air over what cools it, as the program has it."""
    rows = {}
    for case in CASES:
        if case.profile_k is None:
            continue
        scale = warmer(solved(case, ours(case.name).total_w))
        got = ours(case.name).slices_k
        for at, theirs, own in zip(HEIGHTS, case.profile_k, got, strict=True):
            if at in heights:
                rows[f"{case.name} {at:g}"] = 100.0 * (theirs - own) / scale
    scale = warmer(document_solved("vented_board"))
    for at, theirs in F_SLICES_K.items():
        if at in heights:
            rows[f"F {at:g}"] = 100.0 * (theirs - slice_of_f(at)) / scale
    return rows


def _knob(answer: Solved, family: str) -> tuple[np.ndarray, np.ndarray]:
    """What the film knob of a family turns: films of surfaces, and the air."""
    knobs, found = quantities(answer)
    knob, _ = next(each for each in found if each.family == family).effects[0]
    return knobs.films[knob - knobs.starts[1]], knobs.offsets[knob - knobs.starts[1]]


def warmer(answer: Solved) -> float:
    """How much warmer is what warms the air than what cools it [K]: the cause of the air at 100 %."""
    return float(_knob(answer, "air_above")[1].max())


def _shares() -> dict[str, float]:
    rows = {}
    for case in CASES:
        got = ours(case.name)
        facing = 0.0 if case.facing is None else got.facing
        own = {
            "ceiling": (case.ceiling, got.ceiling),
            "floor": (case.floor, got.floor),
            "facing": (case.facing, got.facing),
            "others": (case.other, 1.0 - got.ceiling - got.floor - facing),
        }
        for wall, (theirs, value) in own.items():
            if theirs is not None:
                rows[f"{case.name} {wall}"] = 100.0 * (theirs - value)
    return rows


def _close() -> dict[str, float]:
    """Heat of boards in narrow gaps, over how far films fill those."""
    rows = {}
    for case in CASES:
        if case.name in NARROW:
            answer = solved(case, ours(case.name).total_w)
            faces = answer.network.kinds, _knob(answer, "gap_films")[0]
            names = next(kind for kind in faces[0] if isinstance(kind, InsideAir)).surfaces.names
            filled = faces[1][names.index("board board, front side")]
            rows[case.name] = 100.0 * (case.total_w / ours(case.name).total_w - 1.0) / filled
    return rows


@cache
def accuracies() -> dict[str, Found]:
    """All that the rule gives, by the row of the causes; of what is no cause, by what it is."""
    every = (
        Found("top_share", "the film of the top", _outside("top")),
        Found("faces", "the film of sides or bottom", _outside("sides", "bottom")),
        Found("gap_films", "the heat of the board, over how far films fill its gaps", _close()),
        Found("board_rim", "the heat of the rim", _faces("rim")),
        Found("board_top", "the heat of the upper side", _faces("top side")),
        Found("air_below", "what warms the air over what cools it", _slices(LOWER)),
        Found("air_above", "what warms the air over what cools it", _slices(UPPER)),
        Found("shares", "the whole", _shares()),
    )
    return {each.family: each for each in every}


def table() -> list[list[str]]:
    """Give the rows of the table in the page about the method."""
    return [
        [
            WORDS[each.family],
            each.of,
            ", ".join(f"{row} {value:+.1f}" for row, value in each.deviations.items()),
            f"{each.rms_pct:.1f}",
            f"{each.half_width_pct}",
        ]
        for each in accuracies().values()
    ]


if __name__ == "__main__":
    for row in table():
        print("| " + " | ".join(row) + " |")
