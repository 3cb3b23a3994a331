"""Rolls of a level gap: when there are any, and how many of them do not reach its edges."""

import numpy as np
import pytest

from enclosure_check.physics import cavity


@pytest.mark.parametrize(("a", "b"), [(20.0, 5.0), (-5.0, -20.0), (-1.0, 20.0)])
def test_no_rolls_between_faces_both_off_to_one_side_of_the_air(a, b):
    assert cavity.unstable_share(a, b) < 0.01


def test_rolls_are_driven_most_about_the_mean():
    assert cavity.unstable_share(10.0, -10.0) == pytest.approx(1.0, rel=1e-3)
    assert cavity.unstable_share(15.0, -5.0) == pytest.approx(0.75, rel=1e-3)
    share = cavity.unstable_share(np.linspace(-5, 25, 3001), np.linspace(-25, 5, 3001))
    assert ((share >= 0) & (share <= 1)).all()
    assert np.abs(np.diff(share)).max() < 0.003


def test_rolls_enclosed_by_a_level_gap():
    # None before they set in, nor where every one lies at an edge.
    assert cavity.enclosed_rolls(1708.0, 0.02, 0.2, 1.0) == 0.0
    assert cavity.enclosed_rolls(1e6, 0.4, 0.2, 1.0) == 0.0
    assert cavity.enclosed_rolls(1e6, 0.5, 0.2, 1.0) == 0.0
    # A square of eight rolls by eight has six by six of them inside; strong convection.
    assert cavity.enclosed_rolls(1e12, 0.05, 0.2, 1.0) == pytest.approx((1 - 1 / 8) ** 2, rel=1e-6)
    assert cavity.enclosed_rolls(1e12, 1e-6, 0.2, 1.0) == pytest.approx(1.0, rel=1e-5)
    rayleigh = np.logspace(3, 8, 4001)
    share = cavity.enclosed_rolls(rayleigh, 0.02, 0.1, 1.0)
    assert (np.diff(share) >= 0).all()
    assert np.diff(share).max() < 0.004
    tilted = cavity.enclosed_rolls(1e6, 0.02, 0.1, np.cos(np.radians(np.linspace(0, 90, 901))))
    assert (np.diff(tilted) <= 0).all()
    assert tilted[-1] == pytest.approx(0.0, abs=1e-12)
