"""Worked numbers for plates and cylinders.

First the laws themselves with the source's own properties, to the rounding of the source; then
what our films give with our own air, which differs where the source chose another law.
"""

import numpy as np
import pytest

from enclosure_check.physics.air import air, rayleigh_number
from enclosure_check.physics.bodies import horizontal_cylinder, morgan_cylinder
from enclosure_check.physics.plates import (
    churchill_chu,
    churchill_chu_laminar,
    hot_side_up,
    hot_side_up_laminar,
    inclined_plate,
    mcadams_down,
    vertical_plate,
)
from enclosure_check.physics.radiation import STEFAN_BOLTZMANN, radiation_coefficient

ZERO = 273.15
PRESSURE = 101325.0
ROUNDED = 0.005  # sources print three digits
PROPERTIES = 0.03  # sources' own tables of air and their zero at 273 K; see the air tests
OTHER_LAW = 0.10  # accuracy stated for the vertical plate in the registry


def vertical(rise, film_k, height):
    film = inclined_plate(rise, film_k, PRESSURE, height, 0.25 * height, 0.0)
    return float(film.coefficient)


# Vertical plates, Churchill & Chu 1975 --------------------------------------------------------


@pytest.mark.parametrize(
    ("law", "film_k", "rise", "height", "nu", "alpha", "k", "area", "nusselt", "watts"),
    [
        # Incropera & DeWitt, example 9.2: 0.71 x 1.02 m, 232 and 23 degrees Celsius.
        (churchill_chu, 400, 209, 0.71, 26.4e-6, 38.3e-6, 0.0338, 0.7242, 147, 1060),
        # Cengel, example 9-2a: 0.6 x 0.6 m, 90 and 30 degrees Celsius, Pr 0.7202.
        (churchill_chu, 333, 60, 0.6, 1.896e-5, 1.896e-5 / 0.7202, 0.02808, 0.36, 113.3, 114.6),
        # Holman, example 7-2: 4 x 10 m, 60 and 10 degrees Celsius, Pr 0.7. (With our whole law.)
        (vertical_plate, 308, 50, 4.0, 16.5e-6, 16.5e-6 / 0.7, 0.02685, 40.0, 715, 9603),
    ],
)
def test_vertical_plate_with_given_properties(
    law, film_k, rise, height, nu, alpha, k, area, nusselt, watts
):
    ra = 9.81 * rise * height**3 / (film_k * nu * alpha)
    ours = law(ra, nu / alpha)
    assert ours == pytest.approx(nusselt, rel=ROUNDED)
    assert ours * k / height * area * rise == pytest.approx(watts, rel=ROUNDED)


def test_vertical_plate_laminar_law():
    """Sukhatme, example 6.1: 0.5 m, 100 and 40 degrees Celsius; 71.89 by Churchill & Chu laminar."""
    ra = 9.81 / 343.0 * 60.0 * 0.5**3 / 20.02e-6**2 * 0.694
    assert churchill_chu_laminar(ra, 0.694) == pytest.approx(71.89, rel=ROUNDED)
    assert vertical_plate(ra, 0.694) == pytest.approx(71.89, rel=ROUNDED)
    # His other laws: exact similarity solution 72.62, integral method 76.07.
    assert vertical_plate(ra, 0.694) == pytest.approx(72.62, rel=0.02)
    assert vertical_plate(ra, 0.694) == pytest.approx(76.07, rel=0.06)


@pytest.mark.parametrize(
    ("height", "total_w", "area", "tolerance"),
    [
        # Kreith, example 5.2: 130 and 20 degrees Celsius, radiation coefficient 8.5 W/(m2 K),
        # both sides of a plate 0.15 m high; then 4.5 m, where the book has a turbulent law of its
        # own.
        (0.15, 50.8, 0.03, PROPERTIES),
        (4.5, 1465.0, 0.9, OTHER_LAW),
    ],
)
def test_vertical_plate_with_radiation(height, total_w, area, tolerance):
    ours = (vertical(110.0, 348.15, height) + 8.5) * area * 110.0
    assert ours == pytest.approx(total_w, rel=tolerance)


def test_vertical_plate_by_other_laws():
    """Lienhard, example 8.1 (Squire-Eckert law): 0.4 m, 313 and 287 K, h 4.06 W/(m2 K).

    Janna, example 8.3 (full law at Ra 4.9e9, inside our blend): 5.5 x 2.33 ft, 90 and 70 degrees
    Fahrenheit, 142 Btu/h.
    """
    assert vertical(26.0, 300.0, 0.4) == pytest.approx(4.06, rel=OTHER_LAW)
    rise, height, area = 20 / 1.8, 5.5 * 0.3048, 5.5 * 2.33 * 0.3048**2
    properties = air(299.8, PRESSURE)
    ra = rayleigh_number(rise, height, properties)
    watts = 142 * 0.29307
    full = churchill_chu(ra, properties.prandtl) * properties.conductivity / height * area * rise
    assert full == pytest.approx(watts, rel=PROPERTIES)
    assert vertical(rise, 299.8, height) * area * rise == pytest.approx(watts, rel=OTHER_LAW)


def test_full_law_lies_above_ours_near_transition():
    """Known miss: two textbooks use the full law at Ra 8e8 and 2e9, where ours is still laminar.

    The authors give their laminar law for Ra below 1e9; the two part by 24 % in both examples.
    """
    for ra, pr, published in ((7.649e8, 0.7202, 113.3), (1.81e9, 0.69, 147.0)):
        assert vertical_plate(ra, pr) / published == pytest.approx(0.763, abs=0.005)


# Horizontal plates -----------------------------------------------------------------------------


def test_horizontal_plate_numbers():
    """Cengel, example 9-2 b and c (from memory, recomputed): Ra 1.195e7 with L = 0.15 m.

    The book stays with 0.54 Ra^(1/4) beyond 1e7; taking the larger law gives 8 % more.
    """
    assert hot_side_up_laminar(1.195e7) == pytest.approx(31.7, rel=ROUNDED)
    assert hot_side_up(1.195e7) == pytest.approx(34.3, rel=ROUNDED)
    assert mcadams_down(1.195e7) == pytest.approx(15.9, rel=ROUNDED)


def test_hot_horizontal_plate():
    """Kreith, example 5.3: 1 x 1 m, 227 and 27 degrees Celsius; Nu 63.4 above and 25.2 below."""
    ra = rayleigh_number(200.0, 0.25, air(400.15, PRESSURE))
    assert hot_side_up(ra) == pytest.approx(63.4, rel=PROPERTIES)
    assert mcadams_down(ra) == pytest.approx(25.2, rel=PROPERTIES)


BOARD = (0.15, 0.20)
BOARD_CASES = [("upright", 0.0, 46.6), ("hot side up", 1.0, 42.6), ("hot side down", -1.0, 50.7)]


def board_temperature(coefficient):
    """Surface of a board giving off 8 W on one side at emissivity 0.8 in 20 degrees Celsius."""
    low, high = 20.0, 100.0
    for _ in range(60):
        mid = 0.5 * (low + high)
        radiation = radiation_coefficient(mid + ZERO, 20 + ZERO, 0.8)
        heat = (coefficient(mid) + radiation) * (mid - 20.0) * BOARD[0] * BOARD[1]
        low, high = (mid, high) if heat < 8.0 else (low, mid)
    return mid


def test_board_film_hot_side_up():
    """Cengel, problem 9-33: h 6.696 W/(m2 K) at an assumed 45 degrees Celsius, L = A/P."""
    properties = air(305.65, PRESSURE)
    ra = rayleigh_number(25.0, 0.03 / 0.7, properties)
    ours = hot_side_up(ra) * properties.conductivity / (0.03 / 0.7)
    assert ours == pytest.approx(6.696, rel=PROPERTIES)


@pytest.mark.parametrize(("name", "up", "published"), BOARD_CASES)
def test_board_in_three_attitudes_with_the_books_laws(name, up, published):
    """Cengel, problem 9-33: film at an assumed 45 degrees Celsius, full vertical law, 0.27 down."""
    properties = air(305.65, PRESSURE)
    if up == 0.0:
        ra = rayleigh_number(25.0, 0.2, properties)
        h = float(churchill_chu(ra, properties.prandtl) * properties.conductivity / 0.2)
    else:
        law = hot_side_up if up > 0 else mcadams_down
        h = float(
            law(rayleigh_number(25.0, 0.03 / 0.7, properties))
            * properties.conductivity
            * 0.7
            / 0.03
        )
    assert board_temperature(lambda _: h) == pytest.approx(published, abs=0.5)


@pytest.mark.parametrize(("name", "up", "published"), BOARD_CASES)
def test_board_in_three_attitudes_with_our_films(name, up, published):
    """The same by our plate film: 5 % of the rise covers the choice of laws."""

    def coefficient(surface):
        mean = 0.5 * (surface + 20.0) + ZERO
        film = inclined_plate(surface - 20.0, mean, PRESSURE, 0.2, 0.03 / 0.7, up)
        return float(film.coefficient)

    ours = board_temperature(coefficient)
    assert ours - 20.0 == pytest.approx(published - 20.0, rel=0.05)


def test_transistors_on_an_upright_plate():
    """Cengel, problem 9-129: 25 x 1.5 W, black anodized 0.9, 50 and 30 degrees: 43 x 43 cm."""
    flux = radiation_coefficient(323.15, 303.15, 0.9) * 20.0
    low, high = 0.1, 2.0
    for _ in range(60):
        side = 0.5 * (low + high)
        heat = side**2 * (vertical(20.0, 313.15, side) * 20.0 + flux)
        low, high = (side, high) if heat < 37.5 else (low, side)
    assert side == pytest.approx(0.43, abs=0.01)


@pytest.mark.parametrize(
    ("length", "published"), [(0.02, 9.32), (0.1, 6.39), (1.0, 4.99), (5.0, 4.66)]
)
def test_tilted_roof(length, published):
    """Janna, example 8.4: roof at 45 degrees, 65 and 20 degrees Celsius, h along its length.

    The printed numbers are those of the full vertical law with all of gravity. Our film for the
    upper side of a warm roof is unstable and lies above them by 10 to 33 %.
    """
    properties = air(315.65, PRESSURE)
    ra = rayleigh_number(45.0, length, properties)
    law = churchill_chu(ra, properties.prandtl) * properties.conductivity / length
    assert law == pytest.approx(published, rel=PROPERTIES)
    tilted = inclined_plate(45.0, 315.65, PRESSURE, length, length / 4, np.sqrt(0.5)).coefficient
    assert 1.10 <= tilted / published <= 1.33


# Cylinders -------------------------------------------------------------------------------------


def test_cylinder_nusselt_number():
    """Cengel, example 9-1 (from memory, recomputed): Ra 1.867e6, Nu 17.4."""
    assert horizontal_cylinder(1.867e6, 0.7228) == pytest.approx(17.4, rel=ROUNDED)
    assert morgan_cylinder(1.867e6) == pytest.approx(17.74, rel=ROUNDED)


@pytest.mark.parametrize(
    ("diameter", "length", "surface_c", "air_c", "emissivity", "watts"),
    [
        (0.1, 1.0, 165.0, 23.0, 0.85, 763.0),  # Incropera & DeWitt, example 9.4, with radiation
        (0.08, 6.0, 70.0, 20.0, 0.0, 443.0),  # Cengel, example 9-1 (from memory, recomputed)
        (0.15, 4.0, 50.0, 5.0, 0.0, 477.0),  # Janna, example 8.6
    ],
)
def test_horizontal_cylinder(diameter, length, surface_c, air_c, emissivity, watts):
    rise = surface_c - air_c
    properties = air(0.5 * (surface_c + air_c) + ZERO, PRESSURE)
    nusselt = horizontal_cylinder(rayleigh_number(rise, diameter, properties), properties.prandtl)
    area = np.pi * diameter * length
    radiation = emissivity * STEFAN_BOLTZMANN
    radiation *= (surface_c + ZERO) ** 4 - (air_c + ZERO) ** 4
    ours = area * (nusselt * properties.conductivity / diameter * rise + radiation)
    assert ours == pytest.approx(watts, rel=PROPERTIES)


def test_thin_wire():
    """Kreith, example 5.1: wire of 1 mm, 127 and 27 degrees Celsius, 12.1 W/m: Morgan's table.

    At this small Rayleigh number (4.6) Churchill & Chu lie 20 % below it.
    """
    properties = air(350.15, PRESSURE)
    ra = rayleigh_number(100.0, 1e-3, properties)
    per_nusselt = np.pi * properties.conductivity * 100.0
    assert morgan_cylinder(ra) * per_nusselt == pytest.approx(12.1, rel=PROPERTIES)
    assert horizontal_cylinder(ra, properties.prandtl) * per_nusselt == pytest.approx(
        0.80 * 12.1, rel=PROPERTIES
    )
