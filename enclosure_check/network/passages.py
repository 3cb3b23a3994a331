"""What boards in the box do to air that passes them on its way up: contractions and channels.

The way up is taken along the box axis nearest to up. A board that lies across it leaves a free
share of the section; one that stands along it makes channels of the air beside it.
"""

from collections.abc import Sequence
from itertools import pairwise

import numpy as np

from enclosure_check.description.frames import Vector
from enclosure_check.network.links import FloatArray
from enclosure_check.physics.openings import plate_loss
from enclosure_check.records import dataclass

# A board that fills the section leaves at least this share of it: something always leaks.
LEAST_FREE_SHARE = 1e-3


@dataclass(frozen=True)
class Obstacle:
    """A board as the air sees it; lengths in the box frame [m]."""

    axis: int
    low: Vector
    high: Vector


def passage_losses(
    boards: Sequence[Obstacle], inside: Vector, up: Vector, steps: int
) -> tuple[FloatArray, FloatArray]:
    """Give what boards cost the air between one air node and the next.

    Parameters
    ----------
    boards
        Boards, as boxes in the box frame.
    inside
        Inner size of the box [m].
    up
        Direction of up in the box frame, of length one.
    steps
        Number of steps between air nodes.

    Returns
    -------
    quadratic : ndarray
        ``sum K / (2 A^2)`` of the contractions in each step [1/m4], shape (steps,).
    friction : ndarray
        ``12 L / sum(w_k d_k^3)`` of the channels of each step, d wide and w across [1/m3], shape
        (steps,): times the kinematic viscosity and the mass flow the pressure that laminar flow
        between parallel plates loses.
    """
    along = int(np.argmax(np.abs(up)))
    forward = up[along] > 0
    length = inside[along]
    edges = np.linspace(0.0, length, steps + 1)
    quadratic, friction = np.zeros(steps), np.zeros(steps)
    first, second = (axis for axis in range(3) if axis != along)
    section = inside[first] * inside[second]
    for at, group in _levels(boards, along):
        shadow = sum(_area(board, first, second) for board in group)
        free = max(1.0 - shadow / section, LEAST_FREE_SHARE)
        step = min(int(at / length * steps), steps - 1)
        quadratic[step] += float(plate_loss(free)) / (2.0 * (free * section) ** 2)
    for across, other in ((first, second), (second, first)):
        upright = [board for board in boards if board.axis == across]
        for step in range(steps):
            low, high = edges[step], edges[step + 1]
            friction[step] += _channels(upright, inside, along, across, other, low, high)
    if not forward:
        quadratic, friction = quadratic[::-1], friction[::-1]
    return quadratic, friction


def _levels(boards: Sequence[Obstacle], along: int) -> list[tuple[float, list[Obstacle]]]:
    """Group the boards that lie across the way up by height; those side by side count as one."""
    groups: list[tuple[float, list[Obstacle]]] = []
    lying = sorted((b for b in boards if b.axis == along), key=lambda b: b.low[along])
    for board in lying:
        if groups and board.low[along] < groups[-1][1][0].high[along]:
            groups[-1][1].append(board)
        else:
            groups.append((0.5 * (board.low[along] + board.high[along]), [board]))
    return groups


def _area(board: Obstacle, first: int, second: int) -> float:
    return (board.high[first] - board.low[first]) * (board.high[second] - board.low[second])


def _channels(
    boards: Sequence[Obstacle],
    inside: Vector,
    along: int,
    across: int,
    other: int,
    low: float,
    high: float,
) -> float:
    """Friction of the channels that upright boards make of one step [1/m3].

    The section is cut into strips at the boards' edges; in each strip the boards that pass it make
    channels of the width between them. Strips lie side by side.
    """
    passing = [b for b in boards if b.low[along] < high and b.high[along] > low]
    if not passing:
        return 0.0
    cuts = sorted(
        {0.0, inside[other], *(e for b in passing for e in (b.low[other], b.high[other]))}
    )
    conductance = 0.0
    longest = 0.0
    for start, end in pairwise(cuts):
        middle = 0.5 * (start + end)
        there = sorted(
            (b for b in passing if b.low[other] <= middle <= b.high[other]),
            key=lambda b: b.low[across],
        )
        sides = [0.0]
        for board in there:
            sides += [board.low[across], board.high[across]]
            overlap = min(board.high[along], high) - max(board.low[along], low)
            longest = max(longest, overlap)
        sides.append(inside[across])
        for near, far in zip(sides[::2], sides[1::2], strict=True):
            width = max(far - near, 0.0)
            conductance += (end - start) * width**3
    return 12.0 * longest / max(conductance, 1e-15)
