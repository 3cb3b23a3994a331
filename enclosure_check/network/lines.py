"""Lines along plates, where cans stand and clamped edges lead: pieces of them, joined to cells."""

import math
from collections.abc import Iterator, Sequence
from functools import lru_cache
from typing import NamedTuple

import numpy as np
from numpy.typing import ArrayLike

from enclosure_check.description.frames import Vector
from enclosure_check.network.builder import NetworkBuilder
from enclosure_check.network.grid import SPREADING_FILM_W_PER_M2K, PlateGrid
from enclosure_check.network.links import FloatArray, IntArray, LinkLabel

# How wide a line is taken where the rise around it matters. (common practice, no source) [m]
LINE_WIDTH = 1e-3


class Segment(NamedTuple):
    """A piece of a line on a plate, between two rows of cells: their places and its shares."""

    places: tuple[tuple[int, int], tuple[int, int]]
    shares: tuple[float, float]
    length: float
    """[m]."""
    held: float
    """What the plate holds between the cells' mean and the piece, times its length [K m/W]."""
    between: float
    """Conductance of the plate from the one cell to the other along the piece [W/K]."""
    ends: tuple[tuple[float, float], tuple[float, float]]
    """A strip as narrow as lines are, by the plate's axes from its corner [m]."""


@lru_cache(maxsize=4096)
def line_segments(
    grid: PlateGrid,
    across: int,
    at: float,
    start: float,
    end: float,
    film: float = SPREADING_FILM_W_PER_M2K,
) -> tuple[Segment, ...]:
    """Cut a line along a plate into pieces, one per cell that it runs along.

    Its heat is shared out by the distances to the rows of cells on both sides, so that it is met
    where it lies; beyond the last row that row takes it all. What they do not resolve is
    `line_held`. Kept, as the same lines come again under every condition.

    Parameters
    ----------
    grid
        The cells.
    across
        Which of the plate's axes the line is across.
    at
        Its place along that axis [m].
    start, end
        Where it begins and ends along the other [m]; all in the box frame.
    film
        Film coefficient of both faces of the plate together [W/(m2 K)].
    """
    lengths = _on_cells(grid.edges[1 - across], start, end)
    sheet = np.moveaxis(grid.sheet[across], across, 0)
    centres, step = grid.centres[across], grid.steps[across]
    place = (at - float(centres[0])) / step
    first = min(max(math.floor(place), 0), centres.size - 2)
    share = min(max(place - first, 0.0), 1.0)
    beyond = max(first - place, place - first - 1.0, 0.0)
    corner = [grid.low[grid.axes[index]] for index in (across, 1 - across)]
    middle = min(max(at - corner[0], LINE_WIDTH / 2), grid.size[grid.axes[across]] - LINE_WIDTH / 2)
    strip = middle - LINE_WIDTH / 2, middle + LINE_WIDTH / 2
    pieces = []
    for cell in np.flatnonzero(lengths > 0).tolist():
        kt = float((1.0 - share) * sheet[first, cell] + share * sheet[first + 1, cell])
        one, other = (first, cell), (first + 1, cell)
        edges = grid.edges[1 - across][cell : cell + 2]
        ends = (
            strip,
            (max(float(edges[0]), start) - corner[1], min(float(edges[1]), end) - corner[1]),
        )
        piece = Segment(
            (one, other) if across == 0 else (one[::-1], other[::-1]),
            (1.0 - share, share),
            float(lengths[cell]),
            line_held(kt, step, share, film, beyond),
            kt / step * float(lengths[cell]),
            ends if across == 0 else ends[::-1],
        )
        pieces.append(piece)
    return tuple(pieces)


def line_held(kt: float, step: float, share: float, film: float, beyond: float = 0.0) -> float:
    """Rise of a long line source over the mean of the rows of cells beside it [K m/W].

    The exact rise ``1 / (2 sqrt(h k t))`` of a line on a plate without end, less the same on rows
    of cells that share its heat out by f and 1 - f, as the mean so weighted tells it:

    ``s/(k t) (f (1 - f) (1 - r) + r / (4 + 4 sqrt(1 + u)))``, ``r = sqrt(u / (1 + u))``,
    ``u = h s**2 / (4 k t)``.

    Without a film, ``s f (1 - f) / (k t)``. Beyond the last row the same with the images of line
    and row at the adiabatic edge; without a film the distance from the row over ``k t``.

    Parameters
    ----------
    kt
        Sheet conductance of the plate [W/K].
    step
        Distance of the rows s [m].
    share
        Share f of that distance at which the line runs; 0 or 1 beyond the last row.
    film
        Film coefficient h of both faces together [W/(m2 K)].
    beyond
        How far beyond the last row it lies, of the distance of the rows, at most 0.5.
    """
    u = film * step * step / (4.0 * kt)
    root = math.sqrt(1.0 + u)
    lost = math.sqrt(u) / root
    alone = 0.25 * lost / (1.0 + root)
    if beyond == 0.0:
        return step / kt * (share * (1.0 - share) * (1.0 - lost) + alone)
    edge = 0.5 - beyond
    exponent = 4.0 * math.sqrt(u) * edge
    fallen = -math.expm1(-exponent) / exponent if exponent > 0 else 1.0
    return step / kt * (2.0 * alone + 0.5 * (1.0 - lost) - edge * fallen)


def outline_segments(grid: PlateGrid, low: Vector, size: Vector) -> Iterator[Segment]:
    """Cut the four lines of a rectangle's outline into pieces; see `line_segments`."""
    first, second = grid.axes
    for across, axis, along in ((0, first, second), (1, second, first)):
        for at in (low[axis], low[axis] + size[axis]):
            yield from line_segments(grid, across, at, low[along], low[along] + size[along])


def join_pieces(
    builder: NetworkBuilder,
    cells: IntArray,
    pieces: Sequence[Segment],
    nodes: ArrayLike,
    per_metre: ArrayLike,
    labels: tuple[LinkLabel, LinkLabel],
    share: float = 1.0,
) -> None:
    """Join nodes to a plate along pieces of lines.

    A piece follows the mean ``w_1 T_1 + w_2 T_2`` of its two cells, over ``1/g = 1/per_metre +
    held``. Written out, ``g (w_1 T_1 + w_2 T_2 - T)^2`` is that of conductances ``w_1 g`` and
    ``w_2 g`` to the node and of ``-w_1 w_2 g`` between the cells: part of what the plate conducts
    between them goes by the line instead. Never more than all of it.

    Parameters
    ----------
    builder
        Where the links go.
    cells
        Nodes of the plate.
    pieces
        What to join.
    nodes
        To what, one for all or one for each.
    per_metre
        By what conductance [W/(m K)], likewise.
    labels
        Of the links to the nodes, and of those between cells.
    share
        Share of the plate's sheet conductance that these cells have.
    """
    first, second = (
        np.array([cells[piece.places[end]] for piece in pieces], dtype=np.intp) for end in (0, 1)
    )
    one, other = (np.array([piece.shares[end] for piece in pieces]) for end in (0, 1))
    length, held, between = (
        np.array([getattr(piece, name) for piece in pieces])
        for name in ("length", "held", "between")
    )
    each = length / (1.0 / np.asarray(per_metre) + held)
    to = np.broadcast_to(nodes, first.shape)
    both = np.minimum(one * other * each, share * between)
    for start, end, conductance, label in (
        (to, first, one * each, labels[0]),
        (to, second, other * each, labels[0]),
        (first, second, -both, labels[1]),
    ):
        some = conductance != 0
        builder.conduct(start[some], end[some], conductance[some], label)


def _on_cells(edges: FloatArray, start: float, end: float) -> FloatArray:
    """Length of an interval on each cell of a row [m]."""
    lengths = np.minimum(edges[1:], end) - np.maximum(edges[:-1], start)
    return np.asarray(np.maximum(lengths, 0.0))
