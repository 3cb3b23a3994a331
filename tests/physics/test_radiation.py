"""Grey exchange through a mean radiant node, against exact enclosures."""

import ht
import numpy as np
import pytest

from enclosure_check.physics.correlation import CORRELATIONS
from enclosure_check.physics.radiation import (
    EXCHANGE_LIMIT,
    STEFAN_BOLTZMANN,
    grey_exchange,
    grey_exchange_by_emissivity,
    mean_radiant_exchange_areas,
    parallel_plates,
    radiation_coefficient,
    sky_temperature_clear,
    sky_view_factor,
)

CUBE_TOLERANCE = 0.001  # exact view factors of a cube are 0.19982 and 0.20004
SOLVED = 1e-10  # bisection to rounding
BOXES = [(1, 1, 1), (2, 1, 1), (2, 2, 1), (5, 5, 1), (5, 3, 1), (1, 1, 5)]


def opposed(a, b, gap):
    """View factor of two equal directly opposed rectangles (Howell's catalogue C-11)."""
    x, y = a / gap, b / gap
    return (
        2
        / (np.pi * x * y)
        * (
            0.5 * np.log((1 + x * x) * (1 + y * y) / (1 + x * x + y * y))
            + x * np.sqrt(1 + y * y) * np.arctan(x / np.sqrt(1 + y * y))
            + y * np.sqrt(1 + x * x) * np.arctan(y / np.sqrt(1 + x * x))
            - x * np.arctan(x)
            - y * np.arctan(y)
        )
    )


def adjoining(depth, other, common):
    """View factor of a rectangle to one at right angles along a common edge (C-14)."""
    w, h = (depth / common) ** 2, (other / common) ** 2
    log = (
        np.log((1 + w) * (1 + h) / (1 + w + h))
        + w * np.log(w * (1 + w + h) / ((1 + w) * (w + h)))
        + h * np.log(h * (1 + w + h) / ((1 + h) * (w + h)))
    )
    return (
        np.sqrt(w) * np.arctan(1 / np.sqrt(w))
        + np.sqrt(h) * np.arctan(1 / np.sqrt(h))
        - np.sqrt(w + h) * np.arctan(1 / np.sqrt(w + h))
        + 0.25 * log
    ) / (np.pi * np.sqrt(w))


def cuboid(dims):
    """Areas and exact view factors of the inside of a cuboid."""
    axis = [0, 0, 1, 1, 2, 2]
    view = np.zeros((6, 6))
    area = np.array([np.prod(dims) / dims[k] for k in axis])
    for i in range(6):
        for j in range(6):
            rest = [dims[k] for k in range(3) if k != axis[i]]
            if i != j and axis[i] == axis[j]:
                view[i, j] = opposed(*rest, dims[axis[i]])
            elif i != j:
                k = 3 - axis[i] - axis[j]
                view[i, j] = adjoining(dims[axis[j]], dims[axis[i]], dims[k])
    return area, view


def mesh(area):
    """Exchange areas between pairs that the star stands for [m2]."""
    x = mean_radiant_exchange_areas(area)
    pairs = np.outer(x, x) / x.sum()
    np.fill_diagonal(pairs, 0.0)
    return pairs


def opposite_exchange(pairs, area, emissivity, face):
    """Heat from one face to the opposite one, the others adiabatic; unit difference in E."""
    matrix, right = np.diag(pairs.sum(axis=1)) - pairs, np.zeros(6)
    surface = emissivity / (1 - emissivity) * area
    for i in (face, face + 1):
        matrix[i, i] += surface[i]
    right[face] = surface[face]
    return surface[face] * (1 - np.linalg.solve(matrix, right)[face])


def test_view_factors_of_this_test_are_complete():
    for dims in BOXES:
        np.testing.assert_allclose(cuboid(dims)[1].sum(axis=1), 1.0, rtol=1e-12)


def test_two_parallel_plates_are_exact():
    x = mean_radiant_exchange_areas([1.0, 1.0])
    np.testing.assert_allclose(x, 2.0, rtol=1e-6)
    for e1, e2 in ((1.0, 1.0), (0.9, 0.9), (0.1, 0.9)):
        series = 1 / (1 / grey_exchange(1.0, x[0], e1) + 1 / grey_exchange(1.0, x[1], e2))
        assert series == pytest.approx(1 / (1 / e1 + 1 / e2 - 1), rel=SOLVED)


def test_small_body_in_a_large_enclosure():
    for count in (1, 2, 6):
        area = np.r_[np.full(count, 0.01), 10.0]
        x = mean_radiant_exchange_areas(area)
        small = grey_exchange(area[:-1], x[:-1], 0.7)
        large = grey_exchange(area[-1], x[-1], 0.9)
        total = 1 / (1 / small.sum() + 1 / large)
        assert total == pytest.approx(count * 0.01 * 0.7, rel=0.001)


def test_cube():
    pairs = mesh(np.full(6, 0.04)) / 0.04
    np.testing.assert_allclose(pairs[~np.eye(6, dtype=bool)], 0.2, rtol=1e-12)
    _, view = cuboid((1, 1, 1))
    np.testing.assert_allclose(pairs, view, rtol=CUBE_TOLERANCE)


@pytest.mark.parametrize("dims", BOXES)
def test_cuboids_within_the_stated_accuracy(dims):
    area, view = cuboid(dims)
    stated = CORRELATIONS["carroll_mrt"].accuracy_pct / 100
    for face in (0, 2, 4):
        exact = opposite_exchange(area[:, None] * view, area, 0.9, face)
        ours = opposite_exchange(mesh(area), area, 0.9, face)
        assert ours == pytest.approx(exact, rel=stated)
        # With bare metal the surfaces' own resistance rules: ten times closer.
        exact = opposite_exchange(area[:, None] * view, area, 0.1, face)
        assert opposite_exchange(mesh(area), area, 0.1, face) == pytest.approx(exact, rel=0.005)


@pytest.mark.parametrize("count", [2, 3, 5, 17, 60])
def test_rows_sum_to_one_and_are_reciprocal(count):
    generator = np.random.default_rng(count)
    for _ in range(20):
        area = generator.uniform(0.01, 1.0, count)
        # The largest surface smaller than the others together: else it cannot be flat.
        largest = np.argmax(area)
        most = np.delete(area, largest).sum() * (1.0 if count == 2 else 0.95)
        area[largest] = min(area[largest], most)
        pairs = mesh(area)
        np.testing.assert_allclose(pairs.sum(axis=1) / area, 1.0, rtol=SOLVED)
        np.testing.assert_allclose(pairs, pairs.T, rtol=1e-15)


def test_continuous_where_the_largest_surface_stops_being_flat():
    """Largest from below to above the sum of the others: the exchange of the others stays."""
    small = np.array([0.5, 0.3, 0.2])
    largest = np.concatenate([np.linspace(0.9, 1.0, 200), np.linspace(1.0, 1.1, 200)[1:]])
    x = np.array([mean_radiant_exchange_areas([*small, a]) for a in largest])
    conductance = grey_exchange(small, x[:, :3], 0.8)
    assert np.abs(np.diff(conductance, axis=0) / conductance[1:]).max() < 0.002
    np.testing.assert_allclose(x[-1, :3], small)
    assert x[-1, 3] == pytest.approx(EXCHANGE_LIMIT * 1.1)
    through = grey_exchange(largest, x[:, 3], 0.8)
    assert np.abs(np.diff(through) / through[1:]).max() < 0.1


def test_large_root_of_the_largest_surface():
    area = np.array([1.0, 0.6, 0.55])
    x = mean_radiant_exchange_areas(area)
    assert x[0] > 0.5 * x.sum()
    np.testing.assert_allclose(x * (1 - x / x.sum()), area, rtol=SOLVED)


def test_a_lone_surface_sees_nothing():
    np.testing.assert_array_equal(mean_radiant_exchange_areas([0.3]), [0.0])


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
