"""What a plate's sheet conductance does to the resistances that cells do not resolve."""

from functools import lru_cache

import numpy as np

from enclosure_check.description.frames import Vector
from enclosure_check.network.grid import SPREADING_FILM_W_PER_M2K, PlateGrid, kept
from enclosure_check.network.links import FloatArray
from enclosure_check.physics.conduction import spreading_resistance

# Relative step of the difference.
_STEP = 1e-3


@lru_cache(maxsize=128)
def sub_cells_by_sheet(grid: PlateGrid, feet: tuple[tuple[Vector, Vector], ...]) -> FloatArray:
    """Change of `PlateGrid.sub_cell` per relative change of the sheet conductance [K/W].

    Parameters
    ----------
    grid
        The plate.
    feet
        Low corner and size of each source in the box frame [m].

    Returns
    -------
    ndarray
        By a one-sided difference, not to be written, shape (feet,). Kept, as the same feet come
        again under every condition.
    """
    first, second = grid.axes
    shares = np.array([grid.shares(*foot) for foot in feet])
    kt = np.einsum("aij,fij->fa", grid.sheet, shares)
    mean = np.sqrt(kt[:, 0] * kt[:, 1])
    # Lengths are scaled as in `PlateGrid.sub_cell`; a change of the whole sheet leaves them.
    along, across = np.sqrt(mean / kt[:, 0]), np.sqrt(mean / kt[:, 1])
    low, size = np.array([foot[0] for foot in feet]), np.array([foot[1] for foot in feet])
    plate = np.array(grid.low)
    centre = low + size / 2 - plate
    # Both ends of the difference in one call: cut off after the same number of terms.
    one, other = spreading_resistance(
        size[:, first] * along,
        size[:, second] * across,
        centre[:, first] * along,
        centre[:, second] * across,
        grid.size[first] * along,
        grid.size[second] * across,
        np.stack((mean, mean * (1.0 + _STEP))),
        SPREADING_FILM_W_PER_M2K,
    )
    taken = np.array([grid.taken(*foot) for foot in feet])
    own = np.arange(len(feet))
    told = grid.told(taken, kt, own, own), grid.told(taken, kt * (1.0 + _STEP), own, own)
    return kept(np.asarray((other - one - (told[1] - told[0])) / _STEP))
