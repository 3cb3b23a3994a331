"""Grey exchange, radiation between plates, to surroundings and to the sky."""

import ht
import numpy as np
import pytest

from enclosure_check.physics.radiation import (
    STEFAN_BOLTZMANN,
    grey_exchange,
    grey_exchange_by_emissivity,
    parallel_plates,
    radiation_coefficient,
    sky_temperature_clear,
    sky_view_factor,
)


def test_grey_exchange_limits_and_derivative():
    a, x = np.array([0.04, 0.1]), np.array([0.05, 0.11])
    np.testing.assert_array_equal(grey_exchange(a, x, 0.0), 0.0)
    np.testing.assert_allclose(grey_exchange(a, x, 1.0), x, rtol=1e-15)
    np.testing.assert_allclose(grey_exchange(a, x, 0.3), 1 / (1 / x + 0.7 / (0.3 * a)), rtol=1e-14)
    for eps in (0.05, 0.5, 0.95):
        numeric = (grey_exchange(a, x, eps + 1e-6) - grey_exchange(a, x, eps - 1e-6)) / 2e-6
        np.testing.assert_allclose(grey_exchange_by_emissivity(a, x, eps), numeric, rtol=1e-8)
    np.testing.assert_allclose(grey_exchange_by_emissivity(a, x, 0.0), a, rtol=1e-15)


def test_surroundings_as_large_as_needed_leave_the_emissivity():
    assert grey_exchange(0.2, 0.2, 0.85) == pytest.approx(0.17, rel=1e-14)


@pytest.mark.parametrize(
    ("e1", "e2", "flux"),
    # Parallel grey plates at 60 and 30 degrees Celsius, computed from the textbook equation.
    [(0.9, 0.9, 179.68), (0.1, 0.9, 21.72)],
)
def test_parallel_plate_numbers(e1, e2, flux):
    assert parallel_plates(333.15, 303.15, e1, e2) == pytest.approx(flux, abs=0.006)


def test_parallel_plates_without_emission():
    assert parallel_plates(333.15, 303.15, 0.0, 0.0) == 0.0
    assert parallel_plates(333.15, 303.15, 0.0, 0.9) == 0.0


def test_radiation_coefficient_number_and_library():
    """6.440 W/(m2 K) for emissivity 0.9 between 60 and 25 degrees Celsius (textbook equation)."""
    assert radiation_coefficient(333.15, 298.15, 0.9) == pytest.approx(6.440, abs=6e-4)
    flux = radiation_coefficient(400.0, 305.0, 0.85) * 95.0
    assert flux == pytest.approx(ht.q_rad(0.85, 400, 305), rel=2e-6)  # older constant there
    assert radiation_coefficient(300.0, 300.0) == pytest.approx(4 * STEFAN_BOLTZMANN * 300.0**3)


@pytest.mark.parametrize(
    ("absorptance", "emissivity", "expected"),
    # Holman, Heat Transfer, example 8-20: 700 W/m2, surroundings at 25 degrees Celsius, no
    # convection; white paint and flat black lacquer. The book has its zero at 273 K.
    [(0.12, 0.90, 39.5), (0.96, 0.95, 104.8)],
)
def test_solar_equilibrium(absorptance, emissivity, expected):
    surface = expected + 273.0
    loss = radiation_coefficient(surface, 298.0, emissivity) * (surface - 298.0)
    per_kelvin = 4 * emissivity * STEFAN_BOLTZMANN * surface**3
    assert loss == pytest.approx(absorptance * 700.0, abs=0.06 * per_kelvin)  # printed to 0.1 K


def test_sky():
    """Swinbank 1963: 0.0552 T^1.5; 283.15 K air has a sky of 263 K (from memory)."""
    assert sky_temperature_clear(283.15) == pytest.approx(263.0, abs=0.2)
    assert sky_temperature_clear(np.array([275.0, 303.0])) == pytest.approx([251.7, 291.1], abs=0.2)
    np.testing.assert_allclose(sky_view_factor([1.0, 0.0, -1.0, 0.5]), [1.0, 0.5, 0.0, 0.75])
