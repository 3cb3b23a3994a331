"""Sealed boxes with one isothermal board: numerical experiments made for this project, and ours.

Laminar free convection without radiation, walls at 300 K, board at 320 K, solved on fine grids with
a general-purpose flow solver; not measurements. Their uncertainty: totals 2 % (C 3 %). The cases
were seen while the form of the model was chosen; none of its constants was fitted to them.

Run it as ``python tests/published/experiments_inside.py`` for a table of all.
"""

import json
import sys
from collections.abc import Sequence
from dataclasses import dataclass, replace
from functools import cache
from pathlib import Path
from typing import Any

if __name__ == "__main__":
    sys.path[:0] = [str(Path(__file__).resolve().parents[at]) for at in (2, 1)]

import numpy as np
from published.slices import Slices, slice_mean
from support.cases import solved_as

from enclosure_check.description.document import Document
from enclosure_check.description.numbers import stated_tolerances
from enclosure_check.description.resolve import resolve
from enclosure_check.description.yaml_nodes import read_yaml
from enclosure_check.findings.solved import Solved
from enclosure_check.network.build import build_network
from enclosure_check.network.network import Network
from enclosure_check.solve.steady import Solution, solve_steady

WALL_C, BOARD_RISE_K = 26.85, 20.0
HEIGHTS = (0.1, 0.25, 0.5, 0.75, 0.9)


@dataclass(frozen=True)
class Sealed:
    """One box: sizes [mm], and what the experiment gave."""

    name: str
    about: str
    inside: tuple[float, float, float]
    """Width, depth, height."""
    board: dict[str, Any]
    total_w: float
    ceiling: float
    floor: float
    facing: float | None
    """Share of the two walls that an upright board faces."""
    profile_k: tuple[float, ...] | None
    """Rise of the air at `HEIGHTS`."""
    other: float
    """Share of the walls not named before."""
    mean_k: float
    """Mean rise of all air."""


_UPRIGHT = {"parallel_to": "back", "length_mm": 150.0, "width_mm": 150.0, "thickness_mm": 2.0}
_FLAT = {**_UPRIGHT, "parallel_to": "bottom"}
_LOW = {
    "parallel_to": "bottom",
    "length_mm": 100.0,
    "width_mm": 60.0,
    "thickness_mm": 1.6,
    "from_walls_mm": {"bottom": 6.0},
}

CASES = (
    Sealed(
        "B", "upright, gaps 49 mm", (200.0, 100.0, 200.0), _UPRIGHT,
        3.69, 0.376, 0.005, 0.442, (0.67, 2.61, 4.74, 7.47, 8.74), 0.177, 4.81,
    ),
    Sealed(
        "B20", "upright, gaps 20 mm", (200.0, 42.0, 200.0), _UPRIGHT,
        3.35, 0.170, 0.002, 0.696, (0.71, 4.04, 6.63, 9.90, 12.85), 0.132, 6.64,
    ),
    Sealed(
        "B10", "upright, gaps 10 mm", (200.0, 22.0, 200.0), _UPRIGHT,
        3.24, 0.079, 0.006, 0.877, (1.41, 7.07, 8.56, 8.75, 6.95), 0.037, 6.91,
    ),
    Sealed(
        "C", "flat, gaps 49 mm", (200.0, 200.0, 100.0), _FLAT,
        2.71, 0.583, 0.017, None, (0.42, 1.09, 4.03, 6.51, 7.19), 0.393, 4.56,
    ),
    Sealed(
        "D", "flat, 6 mm over the floor", (120.0, 80.0, 30.0), _LOW,
        1.182, 0.400, 0.442, None, None, 0.158, 7.19,
    ),
)  # fmt: skip

FACES_W = {
    "C": {"bottom side": 1.43, "top side": 1.04, "rim": 0.24},
    "D": {"bottom side": 0.616, "top side": 0.407, "rim": 0.159},
}
"""Heat of the faces of flat boards."""


@dataclass(frozen=True)
class Ours:
    """What the model gives for one of them."""

    total_w: float
    ceiling: float
    floor: float
    facing: float
    profile_k: tuple[float, ...]
    """Rise of the air away from films."""
    slices_k: tuple[float, ...]
    """Mean rise of whole slices, films and gaps counted; none without an experiment."""
    mean_k: float | None
    """Mean of many such slices."""


_EXACT = (
    "boards.board.other_power_w",
    "boards.board.conductivity_in_plane_w_per_mk",
    "finishes.mirror.emissivity",
    "materials.even.conductivity_w_per_mk",
    "surroundings.air_c",
    "walls.*.mounting.contact_w_per_m2k",
    "walls.*.mounting.surface_c",
)


def _document(case: Sealed, power_w: float) -> dict[str, Any]:
    """Isothermal walls and board: of conductivity 5000 W/mK, the walls held; nothing radiates."""
    held = {"kind": "bolted_to", "contact_w_per_m2k": 1e6, "surface_c": WALL_C}
    width, depth, height = case.inside
    return {
        "title": case.name,
        "materials": {"even": {"conductivity_w_per_mk": 5000.0}},
        "finishes": {"mirror": {"emissivity": 0.0}},
        "defaults": {"wall": {"material": "even", "thickness_mm": 2.0, "finish_outside": "mirror"}},
        "box": {"width_mm": width, "depth_mm": depth, "height_mm": height},
        "walls": {name: {"mounting": held} for name in ("left", "front", "back", "bottom", "top")},
        "boards": {
            "board": {
                **case.board,
                "conductivity_in_plane_w_per_mk": 5000.0,
                "finish": "mirror",
                "other_power_w": power_w,
            }
        },
        "surroundings": {"air_c": WALL_C},
        # The experiment's numbers are exact: what is left of a band is the model's own.
        "tolerances": {path: {"plus_minus": 0} for path in _EXACT},
    }


def solved(case: Sealed, power_w: float) -> Solved:
    """Solve a case at some power of its board."""
    data = _document(case, power_w)
    document = Document.model_validate(data)
    resolved = resolve(document, "base")
    node = read_yaml(json.dumps(data).encode(), case.name)
    tolerances = stated_tolerances(node, document)
    # A document must leave one wall open; here it is held like the others.
    right = replace(resolved.walls["right"], mounting=resolved.walls["left"].mounting)
    walls = {**resolved.walls, "right": right}
    held = replace(resolved, walls=walls, tolerances=tolerances)
    network = build_network(held)
    solution = solve_steady(network)
    assert solution.converged, case.name
    return solved_as(held, network, solution)


@cache
def ours(name: str) -> Ours:
    """Give the model's answer for a case: the power that warms its board by 20 K."""
    case = next(each for each in CASES if each.name == name)
    power, last = case.total_w, (0.0, 0.0)
    for _ in range(12):
        found = solved(case, power)
        network, solution = found.network, found.solution
        rise = float(solution.rise[network.places.boards["board"].mean, 0])
        if abs(rise - BOARD_RISE_K) < 1e-4:
            break
        slope = (power - last[0]) / (rise - last[1])
        last, power = (power, rise), power + (BOARD_RISE_K - rise) * slope
    else:
        raise AssertionError(f"{name}: the board does not come to {BOARD_RISE_K} K")
    heat = network.heat(solution.rise)[:, 0]
    by_label = np.bincount(network.link_label, heat, len(network.labels)).tolist()
    flows = dict(zip(network.labels, by_label, strict=True))
    walls = {
        wall: flows.get((f"wall:{wall}", "mounting"), 0.0)
        for wall in ("left", "right", "front", "back", "bottom", "top")
    }
    total = sum(walls.values())
    places = network.places
    height = places.air_heights / places.air_heights[-1]
    profile = np.interp(HEIGHTS, height, solution.rise[places.air_nodes, 0])
    return Ours(
        total,
        walls["top"] / total,
        walls["bottom"] / total,
        (walls["front"] + walls["back"]) / total,
        tuple(profile.tolist()),
        _slices(case, network, solution),
        _mean(case, network, solution),
    )


def _slices(
    case: Sealed,
    network: Network,
    solution: Solution,
    heights: Sequence[float] = HEIGHTS,
) -> tuple[float, ...]:
    if case.profile_k is None:
        return ()
    width, depth, tall = (1e-3 * each for each in case.inside)
    along, across, thickness = (
        1e-3 * case.board[key] for key in ("length_mm", "width_mm", "thickness_mm")
    )
    flat = case.board["parallel_to"] == "bottom"
    half = (thickness if flat else across) / 2
    board = {
        "along": along,
        "thickness": thickness,
        "low": tall / 2 - half,
        "high": tall / 2 + half,
    }
    if flat:
        board["across"] = across
    slices = Slices(network, solution)
    return tuple(slice_mean(slices, (width, depth, tall), board, at) for at in heights)


def _mean(case: Sealed, network: Network, solution: Solution) -> float | None:
    slices = _slices(case, network, solution, ((np.arange(50) + 0.5) / 50).tolist())
    return float(np.mean(slices)) if slices else None


def table() -> list[list[str]]:
    """Give the rows of the table in the page about the method."""
    return [
        [
            case.name,
            f"{' x '.join(f'{each:g}' for each in case.inside)} high, {case.about}",
            f"{case.total_w:.2f} / {got.total_w:.2f}",
            f"{100 * (got.total_w / case.total_w - 1):+.0f}",
            f"{case.ceiling:.2f} / {got.ceiling:.2f}",
            # Without a minus before what rounds to nothing.
            f"{case.floor:.2f} / {round(got.floor, 2) + 0.0:.2f}",
            "-" if case.facing is None else f"{case.facing:.2f} / {got.facing:.2f}",
        ]
        for case in CASES
        for got in (ours(case.name),)
    ]


def profile_table() -> list[list[str]]:
    """Give the rows of the table of profiles: theirs / our slices / our air at each height."""
    return [
        [case.name]
        + [
            f"{theirs:.1f} / {got:.1f} / {core:.1f}"
            for theirs, got, core in zip(
                case.profile_k, ours(case.name).slices_k, ours(case.name).profile_k, strict=True
            )
        ]
        for case in CASES
        if case.profile_k is not None
    ]


if __name__ == "__main__":
    for row in (*table(), *profile_table()):
        print(" | ".join(row))
