"""Plates on a grid of cells: geometry, shares of a footprint, and what cells do not resolve."""

from functools import cached_property, lru_cache

import numpy as np

from enclosure_check.description.frames import Vector
from enclosure_check.network.links import FloatArray, IntArray
from enclosure_check.physics.conduction import plate_source_rise, spreading_resistance
from enclosure_check.records import dataclass

# Film coefficient of both faces of a plate together for the spreading terms, which have to assume
# one: still air and radiation, two faces of 10 W/m2K. (common practice, no source)
SPREADING_FILM_W_PER_M2K = 20.0


@dataclass(frozen=True)
class GridOptions:
    """How finely plates are divided: cells per plate, near enough."""

    board_cells: int = 64
    wall_cells: int = 16


@dataclass(frozen=True, eq=False)
class PlateGrid:
    """A rectangular plate in the box frame divided into equal cells.

    Attributes
    ----------
    axes
        Its two axes in the box frame, in rising order.
    low, size
        Its extent in the box frame [m].
    counts
        Cells along each axis.
    sheet
        Conductivity times thickness of each cell along each axis [W/K], shape (2, n, m).
    """

    axes: tuple[int, int]
    low: Vector
    size: Vector
    counts: tuple[int, int]
    sheet: FloatArray

    @cached_property
    def edges(self) -> tuple[FloatArray, FloatArray]:
        """Box coordinates of the cells' edges along each axis [m]."""
        first, second = (
            self.low[axis] + np.linspace(0.0, self.size[axis], count + 1)
            for axis, count in zip(self.axes, self.counts, strict=True)
        )
        return first, second

    @cached_property
    def centres(self) -> tuple[FloatArray, FloatArray]:
        """Box coordinates of the cells' centres along each axis [m]."""
        first, second = (0.5 * (edge[1:] + edge[:-1]) for edge in self.edges)
        return first, second

    @property
    def steps(self) -> tuple[float, float]:
        """Sizes of a cell along each axis [m]."""
        first, second = (
            self.size[axis] / count for axis, count in zip(self.axes, self.counts, strict=True)
        )
        return first, second

    @property
    def cell_area(self) -> float:
        """Area of a cell [m2]."""
        first, second = self.steps
        return first * second

    @cached_property
    def between(self) -> tuple[FloatArray, FloatArray]:
        """Conductances between neighbouring cells [W/K], (n - 1, m) and, turned, (m - 1, n)."""
        step_first, step_second = self.steps
        one, other = self.sheet[0], self.sheet[1].T
        return (
            2.0 * one[1:] * one[:-1] / (one[1:] + one[:-1]) * step_second / step_first,
            2.0 * other[1:] * other[:-1] / (other[1:] + other[:-1]) * step_first / step_second,
        )

    def overlap(self, low: Vector, size: Vector) -> FloatArray:
        """Area of a rectangle that lies on each cell [m2], shape ``counts``, not to be written."""
        return _overlap(self, low, size)

    def shares(self, low: Vector, size: Vector) -> FloatArray:
        """Share of a rectangle that lies on each cell, summing to one, shape ``counts``."""
        area = self.overlap(low, size)
        return np.asarray(area / area.sum())

    def taken(self, low: Vector, size: Vector) -> FloatArray:
        """Share of the heat of a rectangle that each cell takes, summing to one, shape ``counts``.

        Not to be written. Those of its area, 1/12 of the second differences added along either
        axis: the right side of the compact difference scheme of fourth order (L. Collatz, The
        Numerical Treatment of Differential Equations, 3rd ed., 1960, from memory). Heat put in by
        area alone arrives too weak far from a source as narrow as a cell, by an eighth of
        ``h s**2 / (k t)``.
        """
        return _taken(self, low, size)

    def sub_cell(self, low: Vector, size: Vector) -> tuple[float, float]:
        """Resistances a source adds to what the cells tell of it [K/W].

        The exact mean rise of an even source on a plate of the sheet conductance under it, less
        the same on this grid, so that spreading is counted once whatever the cells; and how much
        hotter the middle of the source is than its mean. The first can be negative, where the
        source just fills cells that hold it concentrated in their centres.
        """
        return _sub_cell(self, low, size)

    def told(
        self, shares: FloatArray, along: FloatArray, first: IntArray, second: IntArray
    ) -> FloatArray:
        """Rise over one source above that of the plate per watt into another, as cells tell it.

        Parameters
        ----------
        shares
            Shares of the sources on the cells, shape (sources, n, m).
        along
            Sheet conductance between the two along either axis [W/K], shape (pairs, 2).
        first, second
            Which sources, shape (pairs,).

        Returns
        -------
        ndarray
            Resistances of the plate on these cells [K/W], shape (pairs,).
        """
        n, m = self.counts
        step_first, step_second = self.steps
        spectrum = _cosines(n) @ shares @ _cosines(m).T
        spectrum[:, 0, 0] = 0.0
        along_first = along[:, :1] * (step_second / step_first * _eigenvalues(n))
        along_second = along[:, 1:] * (step_first / step_second * _eigenvalues(m))
        loss = along_first[:, :, None] + along_second[:, None, :]
        loss = loss + SPREADING_FILM_W_PER_M2K * self.cell_area
        return np.asarray(np.sum(spectrum[first] * spectrum[second] / loss, axis=(1, 2)))


def shared_grid(
    axes: tuple[int, int], low: Vector, size: Vector, counts: tuple[int, int], sheet: FloatArray
) -> PlateGrid:
    """Give the grid of these values; see `PlateGrid`.

    The same one whenever they come again, as under every condition, so that what was found on it
    before serves again.
    """
    return _grid(axes, low, size, counts, sheet.tobytes())


@lru_cache(maxsize=128)
def _grid(
    axes: tuple[int, int], low: Vector, size: Vector, counts: tuple[int, int], sheet: bytes
) -> PlateGrid:
    return PlateGrid(axes, low, size, counts, np.frombuffer(sheet).reshape(2, *counts))


def kept(values: FloatArray) -> FloatArray:
    """Give an array that is kept for later, made safe from being written to."""
    values.flags.writeable = False
    return values


def _lengths(grid: PlateGrid, low: Vector, size: Vector) -> list[FloatArray]:
    """Length of a rectangle on each row of cells, by axis [m]."""
    lengths = []
    for axis, edge in zip(grid.axes, grid.edges, strict=True):
        from_, to = low[axis], low[axis] + size[axis]
        lengths.append(np.maximum(np.minimum(edge[1:], to) - np.maximum(edge[:-1], from_), 0.0))
    return lengths


# What is found about a rectangle on a grid is kept, as the same come again under every condition.


@lru_cache(maxsize=4096)
def _overlap(grid: PlateGrid, low: Vector, size: Vector) -> FloatArray:
    first, second = _lengths(grid, low, size)
    return kept(first[:, None] * second)


@lru_cache(maxsize=4096)
def _taken(grid: PlateGrid, low: Vector, size: Vector) -> FloatArray:
    lengths = _lengths(grid, low, size)
    for length in lengths:
        passed = (length[1:] - length[:-1]) / 12.0
        length[:-1] += passed
        length[1:] -= passed
        length /= length.sum()
    return kept(np.asarray(lengths[0][:, None] * lengths[1]))


@lru_cache(maxsize=4096)
def _sub_cell(grid: PlateGrid, low: Vector, size: Vector) -> tuple[float, float]:
    first, second = grid.axes
    shares = grid.shares(low, size)
    kt = [float(np.sum(sheet * shares)) for sheet in grid.sheet]
    mean = (kt[0] * kt[1]) ** 0.5
    # An orthotropic plate is an isotropic one with its lengths scaled.
    stretch = ((mean / kt[0]) ** 0.5, (mean / kt[1]) ** 0.5)
    shape = (
        size[first] * stretch[0],
        size[second] * stretch[1],
        (low[first] + size[first] / 2 - grid.low[first]) * stretch[0],
        (low[second] + size[second] / 2 - grid.low[second]) * stretch[1],
        grid.size[first] * stretch[0],
        grid.size[second] * stretch[1],
        mean,
    )
    exact, peak = _exact(*(float(value) for value in shape))
    taken = grid.taken(low, size)
    told = grid.told(taken[None], np.array([kt]), *np.zeros((2, 1), dtype=np.intp))
    return exact - float(told[0]), peak - exact


@lru_cache(maxsize=4096)
def _exact(
    a: float, b: float, x: float, y: float, plate_a: float, plate_b: float, sheet: float
) -> tuple[float, float]:
    """Mean and centre rise of a source over its plate's mean, per watt [K/W].

    Kept, as the same shapes come again under every condition.
    """
    film = SPREADING_FILM_W_PER_M2K
    mean = float(spreading_resistance(a, b, x, y, plate_a, plate_b, sheet, film))
    centre = float(plate_source_rise(x, y, a, b, x, y, plate_a, plate_b, sheet, film))
    return mean, centre - 1.0 / (film * plate_a * plate_b)


@lru_cache(maxsize=64)
def _cosines(count: int) -> FloatArray:
    """Orthonormal modes of a row of cells with adiabatic ends, shape (count, count)."""
    modes, places = np.arange(count)[:, None], np.arange(count)[None, :]
    matrix = np.cos(np.pi * modes * (places + 0.5) / count) * np.sqrt(2.0 / count)
    matrix[0] *= np.sqrt(0.5)
    return np.asarray(matrix)


@lru_cache(maxsize=64)
def _eigenvalues(count: int) -> FloatArray:
    """Eigenvalues of the second difference of a row of cells with adiabatic ends."""
    return np.asarray(4.0 * np.sin(0.5 * np.pi * np.arange(count) / count) ** 2)


def cell_counts(length: float, width: float, cells: int) -> tuple[int, int]:
    """Divide a rectangle into about so many cells, as square as can be, an even number a side."""
    edge = (length * width / cells) ** 0.5
    return max(2 * round(length / edge / 2), 2), max(2 * round(width / edge / 2), 2)
