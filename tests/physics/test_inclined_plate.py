"""A plane face at any tilt, warm and cold."""

import numpy as np
import pytest

from enclosure_check.physics.air import air, rayleigh
from enclosure_check.physics.plates import (
    HOT_SIDE_DOWN,
    HOT_SIDE_UP,
    VERTICAL,
    fall_length,
    hot_side_down,
    hot_side_up,
    inclined_plate,
    vertical_plate,
)

PRESSURE = 101325.0
FALL, SPAN = 0.2, 0.05
LIMIT_TOLERANCE = 0.01  # blend with exponent 10: the law that is not meant adds less than 1 %
RISES = [0.5, 5.0, 30.0, 120.0]


def film(rise, up, **changes):
    given = {"film_temperature": 320.0, "pressure": PRESSURE, "fall_length": FALL}
    given |= {"area_perimeter_length": SPAN} | changes
    return inclined_plate(rise, up_cosine=up, **given)


@pytest.mark.parametrize("rise", RISES)
@pytest.mark.parametrize("sign", [1.0, -1.0])
def test_limits_are_the_plate_laws(rise, sign):
    p = air(320.0, PRESSURE)
    upright = vertical_plate(rayleigh(rise, FALL, 320.0, PRESSURE), p.prandtl) / FALL
    ra = rayleigh(rise, SPAN, 320.0, PRESSURE)
    unstable, stable = hot_side_up(ra) / SPAN, hot_side_down(ra) / SPAN
    for up, law, expected in (
        (0.0, VERTICAL, upright),
        (sign, HOT_SIDE_UP, unstable),
        (-sign, HOT_SIDE_DOWN, stable),
    ):
        ours = film(sign * rise, up)
        assert ours.coefficient == pytest.approx(expected * p.conductivity, rel=LIMIT_TOLERANCE)
        assert ours.law == law


def test_horizontal_face_has_no_part_of_the_vertical_law():
    for up in (1.0, -1.0):
        small, large = film(20.0, up, fall_length=0.05), film(20.0, up, fall_length=5.0)
        assert small.coefficient == pytest.approx(float(large.coefficient), rel=1e-6)


@pytest.mark.parametrize("rise", [-60.0, -5.0, 0.3, 5.0, 60.0])
def test_continuous_in_tilt(rise):
    angle = np.radians(np.linspace(0, 180, 36001))
    h = film(rise, np.cos(angle)).coefficient
    # 0.005 degrees a step. The steepest places are where a law with Ra^(1/4) starts from nothing.
    assert np.abs(np.diff(h) / h[1:]).max() < 0.002
    assert h.max() / h.min() > 1.3  # tilt does matter


@pytest.mark.parametrize("up", [-1.0, -0.6, 0.0, 0.3, 1.0])
@pytest.mark.parametrize("laminar", [True, False])
def test_heat_flow_is_odd_zero_at_zero_and_monotone(up, laminar):
    rise = np.concatenate([-np.logspace(2, -5, 3000), [0.0], np.logspace(-5, 2, 3000)])
    flux = film(rise, up, laminar=laminar).coefficient * rise
    assert flux[3000] == 0.0
    assert (np.diff(flux) > 0).all()
    mirrored = film(-rise, -up, laminar=laminar).coefficient * -rise
    np.testing.assert_allclose(flux, -mirrored, rtol=1e-13)


@pytest.mark.parametrize("up", [-1.0, 0.0, 0.5, 1.0])
def test_film_has_a_finite_derivative_through_zero(up):
    rise = np.linspace(-0.02, 0.02, 40001)
    flux = film(rise, up).coefficient * rise
    slope = np.gradient(flux, rise)
    h = film(rise, up).coefficient
    assert np.isfinite(slope).all()
    # d(h dT)/d(dT) lies between h and what a local power of Ra^2 (the regularised zone) gives.
    assert (slope >= h * 0.999).all()
    assert (slope <= 3.0 * h).all()


def test_regularisation_error_of_the_film():
    """The fourth-root law itself is met within 1 % from 0.1 K on and within 0.01 % from 1 K on."""
    p = air(320.0, PRESSURE)
    for rise, tolerance in ((0.1, 0.01), (1.0, 1e-4), (10.0, 1e-5)):
        exact = vertical_plate(rayleigh(rise, FALL, 320.0, PRESSURE), p.prandtl)
        ours = film(rise, 0.0).coefficient * FALL / p.conductivity
        assert ours == pytest.approx(float(exact), rel=tolerance)


def test_no_difference_leaves_conduction():
    p = air(320.0, PRESSURE)
    for up in (-1.0, 1.0):
        h = film(0.0, up).coefficient
        assert h == pytest.approx(2 / np.pi * float(p.conductivity) / SPAN, rel=1e-3)


def test_audit_fields_describe_the_dominating_law():
    rise, up = np.array([20.0, 20.0, 20.0, -20.0]), np.array([0.05, 0.99, -0.99, -0.99])
    ours = film(rise, up)
    np.testing.assert_array_equal(ours.law, [VERTICAL, HOT_SIDE_UP, HOT_SIDE_DOWN, HOT_SIDE_UP])
    np.testing.assert_allclose(ours.length, [FALL, SPAN, SPAN, SPAN])
    share = np.where(ours.law == VERTICAL, np.sqrt(1 - up**2), np.abs(up))
    expected = rayleigh(rise, ours.length, 320.0, PRESSURE) * share
    np.testing.assert_allclose(ours.rayleigh, expected, rtol=1e-4)
    k = air(320.0, PRESSURE).conductivity
    np.testing.assert_allclose(ours.nusselt * k / ours.length, ours.coefficient, rtol=1e-12)


def test_laminar_form_differs_only_beyond_the_laminar_range():
    inside = film(20.0, [0.0, 1.0]).coefficient
    np.testing.assert_allclose(film(20.0, [0.0, 1.0], laminar=True).coefficient, inside, rtol=1e-12)
    large = {"fall_length": 3.0, "area_perimeter_length": 0.7}
    turbulent = film(20.0, [0.0, 1.0], **large).coefficient
    assert (film(20.0, [0.0, 1.0], laminar=True, **large).coefficient < 0.9 * turbulent).all()


def test_broadcasting():
    shape = inclined_plate(np.full((6, 1), 3.0), 310.0, np.full(5, 9e4), 0.2, 0.05, 0.2)
    assert {np.shape(f) for f in shape} == {(6, 5)}


def test_thinner_air_cools_less():
    """Free laminar convection goes with the square root of the pressure (common practice)."""
    ratio = film(30.0, 0.0, pressure=0.5 * PRESSURE).coefficient / film(30.0, 0.0).coefficient
    assert ratio == pytest.approx(np.sqrt(0.5), rel=0.02)  # the 0.68 in Nu does not follow


def test_fall_length():
    assert fall_length(0.3, 0.2, 0.0, -5.0) == pytest.approx(0.2)
    assert fall_length(0.3, 0.2, 2.0, 0.0) == pytest.approx(0.3)
    assert fall_length(0.3, 0.2, 0.0, 0.0) == pytest.approx(np.sqrt(0.06))
    # A square on its corner: area over its diagonal.
    assert fall_length(0.2, 0.2, 1.0, 1.0) == pytest.approx(0.04 / (0.2 * np.sqrt(2)))
    assert fall_length(np.full((2, 1), 0.2), np.full(3, 0.1), 0.0, 1.0).shape == (2, 3)
