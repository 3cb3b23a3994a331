"""Linear systems of a network: dense up to some hundred unknowns, bordered sparse above.

A few nodes (air, means, patches) touch every cell; in a plain sparse factorisation they fill it.
They are kept as a border: the cells are factorised alone, the border by its Schur complement.
"""

from contextlib import suppress
from functools import cached_property
from typing import Any, Protocol

import numpy as np

from enclosure_check.network import condense
from enclosure_check.network.condense import Blocks, find_blocks
from enclosure_check.network.links import FloatArray, IntArray
from enclosure_check.records import dataclass

# Unknowns up to which dense factorisation is used; below, importing a sparse library costs more.
DENSE_UP_TO = 1200
# From so many on, blocks that stand apart are eliminated first; below, finding them costs more.
CONDENSED_FROM = 400
# A node with more derivatives in its row and column than this belongs to the border.
BORDER_DEGREE = 120


class Factor(Protocol):
    """A factorised matrix."""

    def solve(self, right: FloatArray) -> FloatArray:
        """Solve for right sides, shape (u, k).

        Raises
        ------
        numpy.linalg.LinAlgError
            When the matrix is singular.
        """

    def solve_transposed(self, right: FloatArray) -> FloatArray:
        """Solve the transposed system for right sides, shape (u, k)."""


@dataclass(frozen=True, eq=False)
class Entries:
    """Where derivatives stand in a matrix; several at one place add up."""

    row: IntArray
    """Shape (d,), negative for what lies outside."""
    column: IntArray
    size: int
    """Rows and columns of the matrix."""
    groups: tuple[IntArray, ...] = ()
    """Unknowns linked mostly with each other; see `condense.find_blocks`."""

    @cached_property
    def blocks(self) -> Blocks | None:
        """Blocks that are eliminated first; None where that saves nothing."""
        if self.size < CONDENSED_FROM or not self.groups:
            return None
        return find_blocks(self.row, self.column, self.size, self.groups)

    @cached_property
    def _flat(self) -> IntArray:
        """Place in the matrix read row by row, its end for what lies outside, shape (d,)."""
        outside = (self.row < 0) | (self.column < 0)
        return np.where(outside, self.size * self.size, self.row * self.size + self.column)

    def dense(self, values: FloatArray) -> FloatArray:
        """Add derivatives (d,) up at their places: shape (size, size)."""
        size = self.size
        total = np.bincount(self._flat, values, size * size + 1)
        return np.asarray(total[: size * size], dtype=np.float64).reshape(size, size)


def factorise(entries: Entries, values: FloatArray, shift: float = 0.0) -> Factor:
    """Factorise the matrix of derivatives added up at their places.

    Parameters
    ----------
    entries
        Their places.
    values
        Derivatives [W/K], shape (d,).
    shift
        Adds this share of its size to every diagonal entry.
    """
    if entries.size <= DENSE_UP_TO:
        return DenseFactor(entries.dense(values), shift, entries.blocks)
    return BorderedFactor(entries, values, shift)


class DenseFactor:
    """A dense matrix, factorised anew for every solve: one is what a Newton step takes."""

    def __init__(
        self, matrix: FloatArray, shift: float = 0.0, blocks: Blocks | None = None
    ) -> None:
        self.matrix, self.blocks = matrix, blocks
        if shift:
            diagonal = np.arange(len(matrix))
            matrix[diagonal, diagonal] += shift * np.abs(matrix[diagonal, diagonal])

    def solve(self, right: FloatArray) -> FloatArray:
        """Solve for right sides, shape (u, k)."""
        if self.blocks is not None:
            with suppress(np.linalg.LinAlgError):  # a block alone may be singular
                return condense.solve(self.matrix, self.blocks, right)
        return np.asarray(np.linalg.solve(self.matrix, right))

    def solve_transposed(self, right: FloatArray) -> FloatArray:
        """Solve the transposed system for right sides, shape (u, k)."""
        blocks = None if self.blocks is None else self.blocks.turned()
        return DenseFactor(self.matrix.T, blocks=blocks).solve(right)

    def inverse(self) -> FloatArray:
        """Give the inverse, shape (u, u).

        Raises
        ------
        numpy.linalg.LinAlgError
            When the matrix is singular.
        """
        if self.blocks is not None:
            with suppress(np.linalg.LinAlgError):
                return condense.inverse(self.matrix, self.blocks)
        return np.asarray(np.linalg.inv(self.matrix))


class BorderedFactor:
    """A sparse matrix with a dense border: ``[[A, B], [C, D]]``."""

    def __init__(self, entries: Entries, values: FloatArray, shift: float) -> None:
        # Slow to import, and only large networks come here.
        from scipy.sparse import csc_array, diags_array

        row, column, size = entries.row, entries.column, entries.size
        inside = (row >= 0) & (column >= 0)
        row, column, values = row[inside], column[inside], values[inside]
        matrix = csc_array((values, (row, column)), shape=(size, size))
        if shift:
            matrix = matrix + diags_array(shift * np.abs(matrix.diagonal()))
        pattern = csc_array((np.ones(len(row)), (row, column)), shape=(size, size))
        degree = np.diff(pattern.tocsr().indptr) + np.diff(pattern.indptr)
        self._cells = np.flatnonzero(degree <= BORDER_DEGREE)
        self._border = np.flatnonzero(degree > BORDER_DEGREE)
        rows = matrix.tocsr()
        self._a = rows[self._cells][:, self._cells].tocsc()
        self._b = rows[self._cells][:, self._border].toarray()
        self._c = rows[self._border][:, self._cells].tocsr()
        self._d = rows[self._border][:, self._border].toarray()

    @cached_property
    def _lu(self) -> Any:
        from scipy.sparse.linalg import splu

        try:
            return splu(self._a)
        except RuntimeError as error:
            raise np.linalg.LinAlgError(str(error)) from error

    @cached_property
    def _beyond(self) -> FloatArray:
        """``A^-1 B``, shape (cells, border)."""
        return np.asarray(self._lu.solve(self._b))

    @cached_property
    def _schur(self) -> FloatArray:
        return np.asarray(self._d - self._c @ self._beyond)

    def solve(self, right: FloatArray) -> FloatArray:
        """Solve for right sides, shape (u, k)."""
        first = self._lu.solve(np.ascontiguousarray(right[self._cells]))
        border = np.linalg.solve(self._schur, right[self._border] - self._c @ first)
        result = np.empty_like(right)
        result[self._cells] = first - self._beyond @ border
        result[self._border] = border
        return result

    def solve_transposed(self, right: FloatArray) -> FloatArray:
        """Solve the transposed system for right sides, shape (u, k)."""
        cells, border = right[self._cells], right[self._border]
        last = np.linalg.solve(self._schur.T, border - self._beyond.T @ cells)
        result = np.empty_like(right)
        left = np.ascontiguousarray(cells - self._c.T @ last)
        result[self._cells] = self._lu.solve(left, trans="T")
        result[self._border] = last
        return result
