"""Hand formulas of buoyant flow, and the losses of openings where they reduce to them."""

import numpy as np
import pytest
from scipy.optimize import brentq

from enclosure_check.physics.air import GRAVITY, air
from enclosure_check.physics.openings import loss_of_discharge, pressure_loss, velocity_of_loss
from enclosure_check.physics.stack import area_in_series, one_opening_discharge, stack_flow

NU = 1.6e-5


def test_worked_numbers():
    """Recomputed from the formula: 0.65 of 0.010 m2 over 0.40 m at 318.15 and 298.15 K."""
    assert stack_flow(0.010, 0.65, 0.40, 20.0, 318.15) == pytest.approx(4.566e-3, rel=1e-3)
    equal = stack_flow(area_in_series(0.010, 0.010), 0.61, 0.40, 20.0, 308.15)
    larger = stack_flow(area_in_series(0.010, 0.020), 0.61, 0.40, 20.0, 308.15)
    assert equal == pytest.approx(3.078e-3, rel=1e-3)
    assert larger == pytest.approx(3.894e-3, rel=1e-3)


@pytest.mark.parametrize(("second", "published"), [(0.010, 3.078e-3), (0.020, 3.894e-3)])
def test_losses_reduce_to_the_series_formula(second, published):
    """Two openings of K = 1/Cd^2 that share the pressure of the column, solved for their flow."""
    density, loss = 1.146, float(loss_of_discharge(0.61))
    column = density * GRAVITY * 0.40 * 20.0 / 308.15

    def unmet(flow):
        each = [
            pressure_loss(flow / area, density, NU, 0.1, loss, 12 * np.pi)
            for area in (0.010, second)
        ]
        return float(sum(each)) - column

    assert brentq(unmet, 0.0, 0.1) == pytest.approx(published, rel=0.01)


@pytest.mark.parametrize(
    ("power", "area", "height", "rise"),
    [(20, 20e-4, 0.25, 30.19), (50, 50e-4, 0.40, 25.63), (100, 100e-4, 1.0, 18.68)],
)
def test_well_mixed_boxes(power, area, height, rise):
    """Two equal vents of Cd 0.6, all power into the air, 25 C: recomputed independently."""
    outside = air(298.15, 101325.0)
    loss = float(loss_of_discharge(0.60))

    def unmet(difference):
        inside = air(298.15 + difference, 101325.0)
        head = (float(outside.density) - float(inside.density)) * GRAVITY * height

        def lost_less_head(flow):
            lost = sum(
                float(pressure_loss(flow / (density * area), density, NU, 1.0, loss, 0.0))
                for density in (float(outside.density), float(inside.density))
            )
            return lost - head

        return brentq(lost_less_head, 0.0, 1.0) * 1006.5 * difference - power

    assert brentq(unmet, 1.0, 100.0) == pytest.approx(rise, rel=0.01)


def test_series_is_the_narrower_one_when_the_other_is_wide():
    assert area_in_series(0.01, 100.0) == pytest.approx(0.01, rel=1e-6)
    assert area_in_series(0.01, 0.01) == pytest.approx(0.01 / np.sqrt(2))


def test_one_opening_is_the_orifice_law_with_its_own_coefficient():
    """Half an opening of 0.2 m, air both ways: 0.49 at 20 K of either sign."""
    coefficient = one_opening_discharge([20.0, -20.0])
    np.testing.assert_allclose(coefficient, [0.49, 0.49])
    head = 1.2 * GRAVITY * 0.05 * 20.0 / 300.0
    v = velocity_of_loss(head, 1.2, NU, 0.1, loss_of_discharge(coefficient[0]), 0.0)
    assert stack_flow(1.0, coefficient[0], 0.05, 20.0, 300.0) == pytest.approx(float(v))
