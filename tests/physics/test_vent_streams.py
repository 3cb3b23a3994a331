"""Outside air that falls inside a box: how it grows, and where it stays."""

import numpy as np
import pytest

from enclosure_check.physics.vent_streams import (
    ENTRAINMENT,
    SINKING_WIDTH_K,
    plume_growth,
    sinking_share,
)


def test_plume_takes_up_nothing_at_its_opening():
    assert plume_growth(0.0, 0.02) == 0.0


def test_far_from_its_opening_a_plume_grows_with_the_five_thirds_power():
    """Morton, Taylor & Turner (1956): mass flux as height to 5/3 from the virtual origin."""
    near, far = 1.0 + plume_growth(np.array([40.0, 80.0]), 0.01)
    assert far / near == pytest.approx(2 ** (5 / 3), rel=0.005)


def test_close_to_its_opening_a_plume_takes_up_as_a_jet_of_even_profile():
    """``dQ/dy = 2 e Q / b`` there, Q being ``pi b^2 w``: the definition of the coefficient e."""
    radius, step = 0.03, 1e-6
    assert plume_growth(step, radius) / step == pytest.approx(2 * ENTRAINMENT / radius, rel=1e-3)


def test_stream_falls_into_warmer_air_only():
    np.testing.assert_array_equal(sinking_share(np.array([-5.0, 0.0])), 0.0)
    assert sinking_share(SINKING_WIDTH_K) == pytest.approx(0.5)
    assert sinking_share(1.0) > 0.96
    share = sinking_share(np.linspace(0, 10, 200))
    assert (np.diff(share) > 0).all()
    assert share[-1] < 1
