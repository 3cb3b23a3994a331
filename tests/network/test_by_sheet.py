"""What a plate does to what its cells do not resolve, beside differences of the whole resistance."""

from dataclasses import replace

import numpy as np
import pytest

from enclosure_check.network.by_sheet import sub_cells_by_sheet
from enclosure_check.network.grid import PlateGrid

COUNTS = (10, 8)
LOW, SIZE = (0.01, 0.02, 0.005), (0.10, 0.08, 0.0016)
FEET = (
    ((0.050, 0.050, 0.005), (0.010, 0.012, 0.0)),
    ((0.012, 0.022, 0.005), (0.003, 0.002, 0.0)),
    ((0.070, 0.040, 0.005), (0.030, 0.005, 0.0)),
)
STEP = 1e-3
# Either is cut off after another number of terms, with an error below 0.1 % of the resistance.
WITHIN = 2e-3


def plate(first: float, second: float) -> PlateGrid:
    """A plate whose copper grows along its first axis."""
    along = np.linspace(1.0, 1.5, COUNTS[0])[:, None] * np.ones(COUNTS)
    return PlateGrid((0, 1), LOW, SIZE, COUNTS, np.stack((first * along, second * along)))


@pytest.mark.parametrize("conductances", [(0.03, 0.03), (0.05, 0.01), (0.4, 0.4)])
def test_differences_of_the_resistance(conductances):
    grid = plate(*conductances)
    more = replace(grid, sheet=grid.sheet * (1.0 + STEP))
    found = sub_cells_by_sheet(grid, FEET)
    for foot, change in zip(FEET, found, strict=True):
        resistance = grid.sub_cell(*foot)[0]
        by_difference = (more.sub_cell(*foot)[0] - resistance) / STEP
        assert change == pytest.approx(by_difference, abs=WITHIN * abs(resistance))


def test_a_plate_that_conducts_twice_as_well_has_half_the_resistance_in_small():
    # Far below the decay length the film does not count: what cells miss goes as one over it.
    grid = plate(0.5, 0.5)
    resistance = grid.sub_cell(*FEET[1])[0]
    assert sub_cells_by_sheet(grid, FEET[1:2])[0] == pytest.approx(-resistance, rel=0.02)
