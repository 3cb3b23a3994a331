"""Rung 4: numerical experiments made for this project, X outside and B, C, D inside.

Bands: of faces and shares the accuracies of our own forms; of totals and air what the program's
bands say of the temperatures, with the experiments' own numbers exact.
"""

import numpy as np
from published import sources as by
from published.accuracies import NARROW, accuracies
from published.evidence_row import Row, accuracy, row
from published.experiments_inside import CASES, FACES_W, HEIGHTS, Sealed, ours, solved
from published.experiments_outside import CASES as BOXES
from published.experiments_outside import parts
from published.faces import heat_by_face

from enclosure_check.findings.confidence import bands

BOARD_RISE_K = 20.0


def _with(law: str, form: str) -> float:
    """Accuracy of a law and of how one of our forms shares its film out, together [%]."""
    return float(np.hypot(accuracy(law), accuracies()[form].half_width_pct))


def outside_rows() -> list[Row]:
    """Heat of isothermal boxes, X: total and by faces."""
    rows = []
    sides = accuracies()["faces"].half_width_pct
    widths = {"top": _with("box_shelter", "top_share"), "sides": sides, "bottom": sides}
    for case in BOXES:
        found = parts(case)
        for face in ("total", "top", "sides", "bottom"):
            theirs = getattr(case, f"{face}_w")
            if theirs is not None:
                pct = widths.get(face, accuracy("box_shelter"))
                rows.append(
                    row(4, "numerical experiment", case.name, by.EXPERIMENT, "X", "seen",
                        f"{face}, W", theirs, found[face], pct=pct, own=face != "total")
                )  # fmt: skip
    return rows


def _theirs(case: Sealed) -> dict[str, float]:
    """Shares of the experiment by wall."""
    return {
        "ceiling": case.ceiling,
        "floor": case.floor,
        **({} if case.facing is None else {"walls facing the board": case.facing}),
        "other walls": case.other,
    }


_RIM = "half the edge of a layer of air, which may well be the whole of it where a wall is near"
_PLUME = "the plume over the board is not counted in our slice, and our air there is colder"
_NARROW = (
    "ours lets more heat rise out of gaps of 10 mm than the experiment, and less straight across"
)
_LOW = "a box 30 mm high: ours gives its low walls too much and the ceiling too little"
_WHY = {
    ("B20", "0.75"): _PLUME,
    ("B20", "0.9"): _PLUME,
    ("B10", "total"): _NARROW,
    ("B10", "0.1"): _NARROW,
    ("B10", "0.5"): _NARROW,
    ("C", "0.75"): _PLUME,
    ("C", "0.9"): _PLUME,
    ("C", "mean"): _PLUME,
    ("D", "rim"): _RIM,
    ("D", "ceiling"): _LOW,
    ("D", "other walls"): _LOW,
}


def inside_rows() -> list[Row]:
    """Heat, its shares, and the air of sealed boxes, B, C and D."""
    rows = []
    share = accuracies()["shares"].half_width_pct / 100.0
    films = {
        "bottom side": accuracy("raithby_hollands_hot_down"),
        "top side": _with("lloyd_moran_hot_up", "board_top"),
        "rim": _with("yovanovich_cuboid", "board_rim"),
    }
    for case in CASES:
        got = ours(case.name)
        answer = solved(case, got.total_w)
        places = answer.network.places
        board = places.boards["board"].mean
        band = bands(answer, [board, places.air, *places.air_nodes])
        assert band is not None
        # Heat goes with the rise of the board to this power near here.
        more = float(solved(case, 1.02 * got.total_w).solution.rise[board, 0])
        power = np.log(1.02) / np.log(more / BOARD_RISE_K)
        total = got.total_w * power * band.band_k(board) / BOARD_RISE_K
        name = f"{case.name}: board 20 K over its walls, {case.about}"
        rows.append(
            row(4, "numerical experiment", name, by.EXPERIMENT, case.name, "seen", "total, W",
                case.total_w, got.total_w, band=float(total), why=_why(case.name, "total"),
                own=case.name in NARROW)
        )  # fmt: skip
        other = 1.0 - got.ceiling - got.floor - (got.facing if case.facing is not None else 0.0)
        shares = {
            "ceiling": got.ceiling,
            "floor": got.floor,
            "walls facing the board": got.facing,
            "other walls": other,
        }
        for wall, theirs in _theirs(case).items():
            rows.append(
                row(4, "numerical experiment", name, by.EXPERIMENT, case.name, "seen",
                    f"share, {wall}", theirs, shares[wall], band=share, scale=1.0,
                    why=_why(case.name, wall), own=True)
            )  # fmt: skip
        faces = heat_by_face(answer)
        for side, theirs in FACES_W.get(case.name, {}).items():
            found = faces[f"board board, {side}"]
            rows.append(
                row(4, "numerical experiment", name, by.EXPERIMENT, case.name, "seen",
                    f"{side} of the board, W", theirs, found, pct=films[side],
                    why=_why(case.name, side), own=side != "bottom side")
            )  # fmt: skip
        if case.profile_k is None:
            continue
        at = places.air_heights / places.air_heights[-1]
        layer = [band.band_k(int(node)) for node in places.air_nodes]
        for height, theirs, found in zip(HEIGHTS, case.profile_k, got.slices_k, strict=True):
            width = float(np.interp(height, at, layer))
            rows.append(
                row(4, "numerical experiment", name, by.EXPERIMENT, case.name, "seen",
                    f"slice of air at {height:g} of the height, K", theirs, found, band=width,
                    scale=BOARD_RISE_K, why=_why(case.name, f"{height:g}"), own=True)
            )  # fmt: skip
        rows.append(
            row(4, "numerical experiment", name, by.EXPERIMENT, case.name, "seen",
                "mean of all air, K", case.mean_k, got.mean_k, band=band.band_k(places.air),
                scale=BOARD_RISE_K, why=_why(case.name, "mean"), own=True)
        )  # fmt: skip
    return rows


def _why(case: str, what: str) -> str:
    return _WHY.get((case, what), "")


def experiment_rows() -> list[Row]:
    """All rows of this file."""
    return [*outside_rows(), *inside_rows()]
