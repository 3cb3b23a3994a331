"""The gap between an outer wall and what stands close to it: a mounting surface or a neighbour.

The laws are those of gaps inside (see `physics.cavity`): part of the heat goes straight to the
surface, the rest with the air that rises through the gap, and the edges may be closed.
"""

from functools import cached_property
from typing import ClassVar

import numpy as np

from enclosure_check.network.films import DIFFERENCE_K
from enclosure_check.network.links import NOMINAL_RISE_K, FloatArray, IntArray, Links
from enclosure_check.physics.cavity import gap_exchange
from enclosure_check.physics.plates import inclined_plate
from enclosure_check.records import dataclass


@dataclass(frozen=True, eq=False)
class OuterGap(Links):
    """Heat of one wall's outer cells to the air around the gap, then to the surface across it.

    Attributes
    ----------
    nodes
        Mean of the wall's outside, surface, surrounding air; shape (3,).
    area
        Area of each cell, twice over: for the links to the air, then those to the surface
        [m2], shape (m, 1).
    width, length, gravity, closed
        Of the gap, see `gap_exchange`.
    fall_length, area_perimeter_length, up_cosine
        Of the wall, for its free film.
    """

    nodes: IntArray
    area: FloatArray
    width: float
    length: float
    gravity: float
    closed: float
    fall_length: float
    area_perimeter_length: float
    up_cosine: float
    pressure_pa: float

    PARAMETERS: ClassVar[tuple[str, ...]] = ("area",)

    @cached_property
    def stencil(self) -> IntArray:
        """Nodes each link depends on: its two ends and ``nodes``; shape (5, m)."""
        means = np.broadcast_to(self.nodes[:, None], (3, len(self.a)))
        return np.concatenate((np.stack((self.a, self.b)), means))

    def coefficients(self, rise: FloatArray, reference_k: FloatArray) -> FloatArray:
        """Give what goes to the air and straight across [W/m2K], shape (2, v).

        Parameters
        ----------
        rise
            Rises of ``nodes`` [K], shape (3, v).
        reference_k
            Temperature the rises count from [K], shape (v,).
        """
        differences = rise[:2] - rise[2]
        cosines = np.array([[self.up_cosine], [-self.up_cosine]])
        film = inclined_plate(
            differences,
            reference_k + 0.5 * (rise[:2] + rise[2]),
            self.pressure_pa,
            self.fall_length,
            self.area_perimeter_length,
            cosines,
        ).coefficient
        exchange = gap_exchange(
            film[0],
            film[1],
            differences[0],
            differences[1],
            reference_k + 0.5 * (rise[0] + rise[1]),
            self.pressure_pa,
            self.width,
            self.length,
            self.gravity,
            self.up_cosine,
            self.closed,
        )
        return np.stack((exchange.share * film[0], exchange.straight))

    def heat(self, rise: FloatArray, reference_k: FloatArray) -> FloatArray:
        """Heat rate from each cell to the air, then to the surface [W], shape (m, v)."""
        each = self.coefficients(rise[2:, 0], reference_k)
        heat: FloatArray = self._shared(each) * self.area * (rise[0] - rise[1])
        return heat

    def heat_by_rise(self, rise: FloatArray, reference_k: FloatArray) -> FloatArray:
        """Derivative of `heat` by each rise [W/K], shape (5, m, v)."""
        # Columns: as it is, then each of the three warmer, variant by variant.
        warmer = np.repeat(rise[2:, 0][:, None], 4, axis=1)
        warmer[np.arange(3), np.arange(1, 4)] += DIFFERENCE_K
        variants = rise.shape[2]
        each = self.coefficients(warmer.reshape(3, -1), np.tile(reference_k, 4))
        each = self._shared(each).reshape(len(self.a), 4, variants)
        direct = each[:, 0] * self.area
        flow = self.area * (rise[0] - rise[1])
        changes = (each[:, 1:] - each[:, :1]) / DIFFERENCE_K
        return np.stack((direct, -direct, *(changes[:, index] * flow for index in range(3))))

    def factors(self, reference_k: FloatArray) -> FloatArray:
        """Factors at a nominal rise [W/K], shape (5, m, 1)."""
        rise = np.array([[NOMINAL_RISE_K], [0.0], [0.0]])
        direct = self._shared(self.coefficients(rise, reference_k)) * self.area[:, :1]
        return np.concatenate((np.stack((direct, -direct)), np.zeros((3, *direct.shape))))

    def _shared(self, each: FloatArray) -> FloatArray:
        """Give the links to the air the first coefficient, those to the surface the second."""
        return np.repeat(each, len(self.a) // 2, axis=0)
