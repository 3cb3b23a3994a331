"""Mean air of a level slice of a box, films and gaps counted, as a flow solver averages it.

The model's air is that away from the films. A slice of the box also holds the films along walls and
boards, and the air of narrow gaps. A laminar film holds ``int (T - T_air) dy = 0.633 (k/h) (T_face -
T_air)``: the similarity solution of Ostrach (1953) at Pr 0.71, solved anew in the tests. A gap
keeps the share p of its films, and for the rest is as warm as the mean of its two faces, as the
model's gaps are. Plumes over a board's upper edge are not counted.
"""

import numpy as np

from enclosure_check.findings.solved import Solved
from enclosure_check.network.inside_air import InsideAir
from enclosure_check.network.network import Network
from enclosure_check.physics.air import air
from enclosure_check.solve.steady import Solution

FILM_CONTENT = 0.633


class Slices:
    """Films and gaps of one solved box with one board that is parallel to the back or the bottom."""

    def __init__(self, network: Network, solution: Solution) -> None:
        kind = next(each for each in network.kinds if isinstance(each, InsideAir))
        rise, reference = solution.rise, network.reference_k
        audit = kind.audit(rise, reference)
        conductivity = air(audit.film_temperature, kind.pressure_pa).conductivity
        thickness = FILM_CONTENT * conductivity / audit.coefficient
        names = kind.surfaces.names
        self.thickness = dict(zip(names, thickness[:, 0].tolist(), strict=True))
        self.rise = dict(zip(names, rise[kind.surfaces.node, 0].tolist(), strict=True))
        mean, layer = rise[kind.surfaces.node], rise[kind.air]
        film = audit.coefficient
        pairs = kind._pair_values(film, film, mean, mean, layer, reference)
        faces = [
            frozenset((names[a], names[b]))
            for a, b in zip(kind.pairs.first, kind.pairs.second, strict=True)
        ]
        self.kept = dict(zip(faces, pairs.share[:, 0].tolist(), strict=True))
        self.layer = layer[:, 0]

    def core(self, height: float) -> float:
        """Rise of the air away from films at a share of the height [K]."""
        return float(np.interp(height, np.linspace(0.0, 1.0, len(self.layer)), self.layer))

    def film(self, face: str, core: float) -> float:
        """What the film along a face holds per length of it [K m]."""
        return self.thickness[face] * (self.rise[face] - core)

    def gap(self, one: str, other: str, width: float, core: float) -> float:
        """Mean of the air between two faces [K]."""
        kept = self.kept[frozenset((one, other))]
        films = (self.film(one, core) + self.film(other, core)) / width
        straight = 0.5 * (self.rise[one] + self.rise[other])
        return kept * (core + films) + (1.0 - kept) * straight

    def level_gap(self, above: bool, core: float) -> float:
        """How much warmer the air over or under a flat board is than that away from it [K].

        Nothing for an upright board, which has no such gap.
        """
        faces = ("board board, top side", "wall top inside")
        if not above:
            faces = ("board board, bottom side", "wall bottom inside")
        if frozenset(faces) not in self.kept:
            return 0.0
        straight = 0.5 * sum(self.rise[face] for face in faces)
        return (1.0 - self.kept[frozenset(faces)]) * (straight - core)


def slice_mean(
    slices: Slices, inside: tuple[float, float, float], board: dict[str, float], height: float
) -> float:
    """Mean rise of the air in the slice at a share of the height [K].

    Parameters
    ----------
    slices
        The solved box.
    inside
        Width, depth and height [m].
    board
        Extent of the board in the middle: ``along``, ``thickness``, ``low`` and ``high`` [m]; a flat
        one has its thickness along the height, and is ``across`` deep.
    height
        Share of the height.
    """
    width, depth, tall = inside
    core, at = slices.core(height), height * tall
    sides = sum(depth * slices.film(f"wall {wall} inside", core) for wall in ("left", "right"))
    between = slices.gap("wall front inside", "wall back inside", depth, core)
    within = board["low"] <= at <= board["high"]
    footprint = board["along"] * board.get("across", 0.0)
    if not within:
        gap = slices.level_gap(at > board["high"], core)
        return between + (sides + gap * footprint) / (width * depth)
    if "across" in board:
        rim = 2 * (board["along"] + board["across"]) * slices.film("board board, rim", core)
        area = width * depth - footprint
        return (between * width * depth + sides + rim - core * (width * depth - area)) / area
    gap = 0.5 * (depth - board["thickness"])
    one = slices.gap("wall front inside", "board board, front side", gap, core)
    other = slices.gap("wall back inside", "board board, back side", gap, core)
    beside = (width - board["along"]) * depth
    beyond = board["along"] * gap
    total = beside * between + beyond * (one + other) + sides
    return total / (beside + 2 * beyond)


def slice_of_vented(
    solved: Solved, inside: tuple[float, float, float], board: dict[str, float], height: float
) -> float:
    """Mean rise of the air in a slice of a box whose walls let no heat through [K].

    Such walls are as warm as their air at every height and hold no film. The board, parallel to
    left and right, has its own temperature at every height.

    Parameters
    ----------
    solved
        The box with one board named ``board``.
    inside, board, height
        As `slice_mean`, the board ``along`` the depth.
    """
    slices = Slices(solved.network, solved.solution)
    width, depth, tall = inside
    core, at = slices.core(height), height * tall
    if not board["low"] <= at <= board["high"]:
        return core
    rows = solved.solution.rise[solved.network.places.boards["board"].cells, 0].mean(axis=0)
    steps = (np.arange(rows.size) + 0.5) / rows.size
    face = np.interp((at - board["low"]) / (board["high"] - board["low"]), steps, rows)
    thickness = sum(slices.thickness[f"board board, {side} side"] for side in ("left", "right"))
    area = width * depth - board["along"] * board["thickness"]
    return float(core + board["along"] * thickness * (face - core) / area)
