"""Doubt about laminar or turbulent flow along upright plates: where it begins and ends, and its size."""

import numpy as np
import pytest

from enclosure_check.physics.plates import churchill_chu, churchill_chu_laminar, vertical_plate
from enclosure_check.physics.transition import transition_distance

PRANDTL = 0.71


@pytest.mark.parametrize("ra", [0.0, 1e4, 1e7, 9.9e7, 1e8, 1e10, 3e10, 1e12])
def test_none_where_the_flow_is_known(ra):
    assert transition_distance(ra, PRANDTL) == pytest.approx(0.0, abs=1e-12)


def test_the_whole_distance_where_the_authors_change_over():
    full, laminar = churchill_chu(1e9, PRANDTL), churchill_chu_laminar(1e9, PRANDTL)
    found = transition_distance(1e9, PRANDTL)
    assert found == pytest.approx(float(full / laminar - 1.0), rel=1e-12)
    # As the register says.
    assert found == pytest.approx(0.33, abs=0.01)


def test_from_there_on_up_to_the_full_law():
    ra = np.geomspace(1e9, 1e10, 30)
    raised = vertical_plate(ra, PRANDTL) * (1.0 + transition_distance(ra, PRANDTL))
    np.testing.assert_allclose(raised, churchill_chu(ra, PRANDTL), rtol=1e-12)


def test_it_comes_and_goes_without_a_step():
    ra = np.geomspace(5e7, 2e10, 4000)
    found = transition_distance(ra, PRANDTL)
    assert (found > -1e-12).all()
    assert np.abs(np.diff(found)).max() < 0.002
    peak = int(np.argmax(found))
    assert 8e8 < ra[peak] < 2e9
    assert (np.diff(found[:peak]) >= -1e-12).all()
    assert (np.diff(found[peak:]) <= 1e-12).all()
