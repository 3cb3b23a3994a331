"""Linear systems of a network: dense up to some hundred unknowns, bordered sparse above.

A few nodes (air, means, patches) touch every cell; in a plain sparse factorisation they fill it.
They are kept as a border: the cells are factorised alone, the border by its Schur complement.
"""

from functools import cached_property
from typing import Any, Protocol

import numpy as np

from enclosure_check.network.links import FloatArray, IntArray

# Unknowns up to which dense factorisation is used; below, importing a sparse library costs more.
DENSE_UP_TO = 1200
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


def factorise(
    row: IntArray, column: IntArray, values: FloatArray, size: int, shift: float = 0.0
) -> Factor:
    """Factorise the matrix of derivatives added up at their places.

    Parameters
    ----------
    row, column
        Places, negative for what lies outside; shape (d,).
    values
        Derivatives [W/K], shape (d,).
    size
        Number of unknowns.
    shift
        Adds this share of its size to every diagonal entry.
    """
    if size <= DENSE_UP_TO:
        return DenseFactor(dense(row, column, values, size), shift)
    return BorderedFactor(row, column, values, size, shift)


def dense(row: IntArray, column: IntArray, values: FloatArray, size: int) -> FloatArray:
    """Add derivatives up at their places: shape (size, size)."""
    flat = np.where((row >= 0) & (column >= 0), row * size + column, size * size)
    total = np.bincount(flat, values, size * size + 1)
    return np.asarray(total[: size * size], dtype=np.float64).reshape(size, size)


class DenseFactor:
    """A dense matrix, factorised anew for every solve: one is what a Newton step takes."""

    def __init__(self, matrix: FloatArray, shift: float = 0.0) -> None:
        self.matrix = matrix
        if shift:
            diagonal = np.arange(len(matrix))
            matrix[diagonal, diagonal] += shift * np.abs(matrix[diagonal, diagonal])

    def solve(self, right: FloatArray) -> FloatArray:
        """Solve for right sides, shape (u, k)."""
        return np.asarray(np.linalg.solve(self.matrix, right))

    def solve_transposed(self, right: FloatArray) -> FloatArray:
        """Solve the transposed system for right sides, shape (u, k)."""
        return np.asarray(np.linalg.solve(self.matrix.T, right))


class BorderedFactor:
    """A sparse matrix with a dense border: ``[[A, B], [C, D]]``."""

    def __init__(
        self, row: IntArray, column: IntArray, values: FloatArray, size: int, shift: float
    ) -> None:
        # Slow to import, and only large networks come here.
        from scipy.sparse import csc_array, diags_array

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
