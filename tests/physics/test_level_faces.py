"""The horizontal law of a face that is about as warm as its air in the mean."""

import numpy as np
import pytest

from enclosure_check.physics.air import air
from enclosure_check.physics.plates import inclined_parts


def level_film(rise, width, up=1.0):
    properties = air(305.0, 101_325.0)
    return inclined_parts(
        np.asarray(rise, dtype=float),
        properties,
        0.2,
        0.05,
        up,
        level_rise=np.asarray(rise, dtype=float),
        level_width=width,
    )[2]


@pytest.mark.parametrize("up", [1.0, -1.0, 0.6])
def test_level_law_has_a_finite_slope_where_the_face_is_as_warm_as_its_air(up):
    width, step = 0.05, 1e-6
    slope = np.diff(level_film([-step, 0.0, step], width, up)) / step
    assert np.isfinite(slope).all()
    assert slope[0] == pytest.approx(slope[1], rel=1e-3)
    # Without a width the film goes to none with a slope that knows no bound.
    bare = level_film([0.0, step], 0.0, up)
    assert bare[1] / step > 100 * abs(slope).max()


def test_level_law_at_no_difference_is_that_of_half_the_width():
    """Half a face that much warmer, half colder: the unstable one has the larger film."""
    assert level_film(0.0, 0.05) == pytest.approx(float(level_film(0.025, 0.0)), rel=1e-12)


@pytest.mark.parametrize("rise", [-20.0, -2.0, 2.0, 20.0])
def test_level_law_far_from_there_is_untouched(rise):
    near = abs(float(level_film(rise, 0.05) / level_film(rise, 0.0)) - 1.0)
    # The difference is larger by (width / 2)^2 over itself, its fourth root by a quarter of that.
    assert near < 0.25 * (0.025 / rise) ** 2 * 1.01
