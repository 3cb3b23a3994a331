"""Dense systems in which some blocks of unknowns are not linked with each other.

The cells of a board are linked with each other, with the parts on it, with the faces they look at
and with a few nodes that touch everything; hardly with those of another board. Blocks that stand
apart are eliminated one by one (static condensation, R. J. Guyan, AIAA Journal 3, 1965, from
memory; block elimination by Schur complements), and what is left is far smaller: a factorisation
costs the cube of its size.
"""

from collections.abc import Sequence
from typing import NamedTuple

import numpy as np
import numpy.typing as npt

from enclosure_check.network.links import FloatArray, IntArray

BoolArray = npt.NDArray[np.bool_]

# A node joins the block it is linked with if it has no more links than this: one with many belongs
# to no block more than to another.
MOST_LINKS = 30
# How often nodes linked with what has joined before may join.
_ROUNDS = 3


class Block(NamedTuple):
    """Unknowns that are eliminated together."""

    own: IntArray
    """Their places."""
    rows: IntArray
    """Places among the rest of the balances they enter."""
    columns: IntArray
    """Places among the rest of the unknowns that enter their balances."""

    def turned(self) -> "Block":
        """Give the block of the transposed matrix."""
        return Block(self.own, self.columns, self.rows)


class Blocks(NamedTuple):
    """Blocks without links between them, and the places of what is left."""

    blocks: tuple[Block, ...]
    rest: IntArray

    def turned(self) -> "Blocks":
        """Give those of the transposed matrix."""
        return Blocks(tuple(block.turned() for block in self.blocks), self.rest)


def find_blocks(row: IntArray, column: IntArray, size: int, groups: Sequence[IntArray]) -> Blocks:
    """Find blocks that stand apart.

    Parameters
    ----------
    row, column
        Places of the entries of a matrix, shape (d,); those outside are negative.
    size
        Its rows and columns.
    groups
        Unknowns that may be the core of a block each, like the cells of a plate. The largest are
        taken first, those linked with one that is taken stay out.

    Returns
    -------
    Blocks
        The cores, with what is linked with one of them only.
    """
    inside = (row >= 0) & (column >= 0)
    linked = np.zeros((size, size), dtype=np.bool_)
    linked[row[inside], column[inside]] = True
    either = linked | linked.T
    of = np.full(size, -1)
    count = 0
    for group in sorted(groups, key=len, reverse=True):
        if not either[group][:, of >= 0].any():
            of[group] = count
            count += 1
    numbers = np.arange(count)
    links = either.astype(np.float32)
    few = links.sum(axis=1) <= MOST_LINKS
    for _ in range(_ROUNDS):
        beside = links @ (of[:, None] == numbers).astype(np.float32) > 0
        joins = (of < 0) & few & (beside.sum(axis=1) == 1)
        to = np.where(joins, beside.argmax(axis=1), -1)
        joining = to[:, None] == numbers
        # Those that would link one block with another stay out.
        joins &= ~((links @ joining.astype(np.float32) > 0) & ~joining).any(axis=1)
        if not joins.any():
            break
        of[joins] = to[joins]
    rest = np.flatnonzero(of < 0)
    blocks = []
    for number in range(count):
        own = np.flatnonzero(of == number)
        entered: BoolArray = np.asarray(linked[:, own].any(axis=1))
        entering: BoolArray = np.asarray(linked[own].any(axis=0))
        rows, columns = np.flatnonzero(entered[rest]), np.flatnonzero(entering[rest])
        blocks.append(Block(own, rows, columns))
    return Blocks(tuple(blocks), rest)


def solve(matrix: FloatArray, parts: Blocks, right: FloatArray) -> FloatArray:
    """Solve for right sides, shape (u, k).

    Raises
    ------
    numpy.linalg.LinAlgError
        When a block, or the whole, is singular.
    """
    rest = parts.rest
    schur, left = matrix[np.ix_(rest, rest)], right[rest]
    found = []
    for own, rows, columns in parts.blocks:
        beyond = matrix[np.ix_(own, rest[columns])]
        within = matrix[np.ix_(own, own)]
        inner = np.asarray(np.linalg.solve(within, np.hstack((beyond, right[own]))), np.float64)
        back = matrix[np.ix_(rest[rows], own)] @ inner
        count = len(columns)
        schur[np.ix_(rows, columns)] -= back[:, :count]
        left[rows] -= back[:, count:]
        found.append((inner[:, :count], inner[:, count:]))
    outer = np.linalg.solve(schur, left)
    result = np.empty_like(right)
    result[rest] = outer
    for (own, _, columns), (beyond, alone) in zip(parts.blocks, found, strict=True):
        result[own] = alone - beyond @ outer[columns]
    return result


def inverse(matrix: FloatArray, parts: Blocks) -> FloatArray:
    """Give the inverse, shape (u, u).

    Raises
    ------
    numpy.linalg.LinAlgError
        When a block, or the whole, is singular.
    """
    rest = parts.rest
    schur = matrix[np.ix_(rest, rest)]
    found = []
    for own, rows, columns in parts.blocks:
        inner = np.asarray(np.linalg.inv(matrix[np.ix_(own, own)]), dtype=np.float64)
        beyond = inner @ matrix[np.ix_(own, rest[columns])]
        back = matrix[np.ix_(rest[rows], own)]
        schur[np.ix_(rows, columns)] -= back @ beyond
        found.append((inner, beyond, back @ inner))
    outer = np.linalg.inv(schur)
    result = np.empty_like(matrix)
    result[np.ix_(rest, rest)] = outer
    for (own, rows, columns), (inner, beyond, back) in zip(parts.blocks, found, strict=True):
        spread = beyond @ outer[columns]
        result[np.ix_(own, rest)] = -spread
        result[np.ix_(rest, own)] = -(outer[:, rows] @ back)
        for (other, others, _), (_, _, beside) in zip(parts.blocks, found, strict=True):
            between = spread[:, others] @ beside
            result[np.ix_(own, other)] = between + inner if other is own else between
    return result
