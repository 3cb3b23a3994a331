"""Plates, joints, boards and spreading, against exact solutions."""

import numpy as np
import pytest

from enclosure_check.physics.conduction import (
    azar_graebner,
    contact,
    disc_source_on_infinite_plate,
    effective_conductivity,
    plate_source_rise,
    slab,
    spreading_resistance,
)

PRINTED = 0.001  # one unit of the last digit printed; both series are cut off somewhere [K]
SERIES_TOLERANCE = 1e-3  # truncation promised


def test_slab_and_contact():
    assert slab(0.01, 0.002, 200.0) == pytest.approx(1000.0)
    assert contact(8e-4, 42000.0) == pytest.approx(33.6)
    assert slab(np.full((2, 1), 0.01), np.full(3, 0.01), 1.0).shape == (2, 3)


def test_contact_as_a_length_of_metal():
    """Cengel, Heat Transfer, example 3-4: 11000 W/(m2 K) on aluminium is 2.15 cm of metal."""
    assert float(slab(1.0, 0.0215, 237.0)) == pytest.approx(float(contact(1.0, 11000.0)), rel=0.003)


# Boards of 1.6 mm with copper of 385 and laminate of 0.3 W/(m K): the two sums worked by hand, and
# the fit of Azar & Graebner beside them.
BOARDS = {
    "one signal layer": ([70], [0.2], 3.67, 3.86),
    "two signal, two planes": ([70, 35, 35, 70], [0.2, 1, 1, 0.2], 23.9, 22.2),
    "two layers": ([35, 35], [0.5, 0.5], 8.72, 8.46),
    "four layers": ([35, 35, 35, 35], [0.3, 1, 1, 0.3], 22.2, 20.7),
}


@pytest.mark.parametrize("board", BOARDS)
def test_effective_conductivity_of_boards(board):
    copper_um, coverage, in_plane, fit = BOARDS[board]
    copper = np.array(copper_um) * 1e-6
    laminate = 1.6e-3 - copper.sum()
    ours = effective_conductivity(
        np.r_[copper, laminate], np.r_[np.full(copper.size, 385.0), 0.3], np.r_[coverage, 1.0]
    )
    assert ours.in_plane == pytest.approx(in_plane, rel=2e-3)  # printed to three digits
    other = azar_graebner(float(np.sum(copper * coverage)), 1.6e-3)
    assert other.in_plane == pytest.approx(fit, rel=3e-3)
    assert ours.in_plane == pytest.approx(float(other.in_plane), rel=0.08)  # the two agree so far
    # Across, copper hardly counts.
    assert ours.through == pytest.approx(0.3 * 1.6e-3 / laminate, rel=0.01)


def test_azar_graebner_worked_number():
    """Worked numbers published with the fit: 7 µm copper in 50 mm gives 0.849 and 0.592."""
    fit = azar_graebner(7e-6, 0.05)
    assert fit.in_plane == pytest.approx(0.849, abs=6e-4)
    assert fit.through == pytest.approx(0.592, abs=6e-4)


def test_effective_conductivity_limits_and_shape():
    same = effective_conductivity([1e-3, 2e-3], [5.0, 5.0])
    assert same.in_plane == pytest.approx(5.0)
    assert same.through == pytest.approx(5.0)
    many = effective_conductivity(np.full((3, 7), 1e-4), np.arange(1.0, 22.0).reshape(3, 7))
    assert many.in_plane.shape == many.through.shape == (7,)
    assert (many.in_plane > many.through).all()


# Thin plate with loss and adiabatic edges, double cosine series with 600 terms either way:
# 100 x 100 mm, 20 x 20 mm source of 1 W in the middle; centre, middle of an edge, corner [K].
PLATES = [
    (20.0 * 1.6e-3, 20.0, (11.244, 4.268, 3.633), PRINTED),
    (40.0 * 1.6e-3, 20.0, (8.256, 4.615, 4.247), PRINTED),
    (0.3 * 1.6e-3, 20.0, (96.99, 0.017, 0.0005), 0.006),
    (205.0 * 2e-3, 12.0, (8.863, 8.270, 8.204), PRINTED),
]


@pytest.mark.parametrize(("kt", "h", "expected", "tolerance"), PLATES)
def test_plate_with_central_source(kt, h, expected, tolerance):
    rise = plate_source_rise(
        [0.05, 0.05, 0.0], [0.05, 0.0, 0.0], 0.02, 0.02, 0.05, 0.05, 0.1, 0.1, kt, h
    )
    np.testing.assert_allclose(rise, expected, rtol=0, atol=tolerance)


def test_plate_with_offset_source():
    """20 x 10 mm source of 2 W at (30, 25) mm, k 20, t 1.6 mm, h 20: as above."""
    place = (0.02, 0.01, 0.03, 0.025, 0.1, 0.1, 0.032, 20.0, 2.0)
    at = plate_source_rise([0.03, 0.1], [0.025, 0.1], *place)
    np.testing.assert_allclose(at, [28.900, 3.938], rtol=0, atol=PRINTED)
    grid = (np.arange(200) + 0.5) / 2000
    x, y = np.meshgrid(grid, grid)
    assert plate_source_rise(x, y, *place).mean() == pytest.approx(10.0, rel=1e-3)


def test_strip_is_the_exact_fin():
    """1 W into the end of a fin 50 x 100 x 1.6 mm, k 20, h 20: 14.736 K there, 7.803 K at the tip."""
    line = 1e-7
    rise = plate_source_rise(
        [0.03, 0.03], [0.0, 0.05], 0.1, line, 0.05, line / 2, 0.1, 0.05, 0.032, 20.0
    )
    np.testing.assert_allclose(rise, [14.736, 7.803], rtol=0, atol=PRINTED)


@pytest.mark.parametrize(("k", "centre", "edge"), [(20.0, 13.439, 11.003), (40.0, 7.574, 6.345)])
def test_disc_source(k, centre, edge):
    """1 W on a disc of 5 mm radius, t 1.6 mm, h 20: the Bessel solution evaluated independently."""
    ours = disc_source_on_infinite_plate(5e-3, k * 1.6e-3, 20.0)
    np.testing.assert_allclose(ours, [centre, edge], rtol=0, atol=PRINTED)


def test_square_source_on_a_large_plate_is_like_a_disc():
    side = np.sqrt(np.pi) * 5e-3
    centre = plate_source_rise(0.3, 0.3, side, side, 0.3, 0.3, 0.6, 0.6, 0.032, 20.0)
    assert centre == pytest.approx(disc_source_on_infinite_plate(5e-3, 0.032, 20.0)[0], rel=0.01)


def double_series(a, b, cx, cy, length, width, kt, h, terms=3000):
    """Mean of the source over the mean of the plate by the double cosine series."""
    m = np.arange(terms)
    weight = np.where(m == 0, 1.0, 2.0)
    x, y = m * np.pi / length, m * np.pi / width
    u = weight * (np.cos(x * cx) * np.sinc(a * x / 2 / np.pi)) ** 2
    v = weight * (np.cos(y * cy) * np.sinc(b * y / 2 / np.pi)) ** 2
    total = u[:, None] * v / (kt * (x[:, None] ** 2 + y**2) + h)
    return (total.sum() - 1 / h) / (length * width)


SOURCES = [
    (0.02, 0.02, 0.05, 0.05, 0.1, 0.1, 0.032, 20.0),
    (0.005, 0.005, 0.03, 0.02, 0.2, 0.15, 0.032, 20.0),
    (0.002, 0.04, 0.03, 0.07, 0.2, 0.15, 0.032, 20.0),
    (0.04, 0.002, 0.03, 0.07, 0.2, 0.15, 0.4, 12.0),
    (0.02, 0.003, 0.01, 0.0015, 0.2, 0.15, 0.4, 12.0),
    (0.001, 0.001, 0.1, 0.07, 0.2, 0.15, 0.03, 20.0),
    (0.01, 0.01, 0.02, 0.02, 0.1, 0.1, 4.8e-4, 15.0),
]


@pytest.mark.parametrize("source", SOURCES)
def test_spreading_against_the_double_series(source):
    assert spreading_resistance(*source) == pytest.approx(
        double_series(*source), rel=SERIES_TOLERANCE
    )


def test_spreading_of_many_sources_at_once():
    columns = np.array(SOURCES).T
    together = spreading_resistance(*columns)
    one_by_one = [float(spreading_resistance(*source)) for source in SOURCES]
    np.testing.assert_allclose(together, one_by_one, rtol=SERIES_TOLERANCE)
    assert spreading_resistance(
        np.full((2, 1), 0.01), 0.01, 0.05, np.full(3, 0.04), 0.1, 0.1, 0.03, 20.0
    ).shape == (2, 3)


def test_spreading_limits():
    whole = spreading_resistance(0.1, 0.08, 0.05, 0.04, 0.1, 0.08, 0.032, 20.0)
    assert whole == pytest.approx(0.0, abs=1e-9)
    place = (0.01, 0.01, 0.03, 0.03, 0.1, 0.08)
    assert spreading_resistance(*place, 1e6, 20.0) == pytest.approx(0.0, abs=1e-5)
    # No lateral conduction: the source alone loses its heat.
    # What leaks over its rim is decay length times perimeter over twice the area, 0.5 %.
    alone = spreading_resistance(*place, 1e-8, 20.0)
    assert alone == pytest.approx((1 / 1e-4 - 1 / 8e-3) / 20.0, rel=0.01)
    # No loss: what is left is finite, and the limit of a small loss.
    none, little = (
        spreading_resistance(*place, 0.032, 0.0),
        spreading_resistance(*place, 0.032, 0.01),
    )
    assert none == pytest.approx(float(little), rel=1e-3)
    # Turning the plate round changes nothing.
    turned = spreading_resistance(0.01, 0.02, 0.03, 0.05, 0.08, 0.1, 0.032, 20.0)
    assert turned == pytest.approx(
        float(spreading_resistance(0.02, 0.01, 0.05, 0.03, 0.1, 0.08, 0.032, 20.0)), rel=1e-9
    )


def test_spreading_falls_with_conduction_and_size():
    kt = np.logspace(-3, 1, 30)
    assert (np.diff(spreading_resistance(0.01, 0.01, 0.05, 0.05, 0.1, 0.1, kt, 20.0)) < 0).all()
    size = np.linspace(0.002, 0.09, 30)
    assert (np.diff(spreading_resistance(size, size, 0.05, 0.05, 0.1, 0.1, 0.03, 20.0)) < 0).all()
