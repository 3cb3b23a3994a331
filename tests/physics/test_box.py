"""The box as one body: limits, continuity and symmetries."""

import numpy as np
import pytest

from enclosure_check.physics.bodies import cuboid_film, cuboid_gravity_function
from enclosure_check.physics.box import box_film, box_geometry, shelter_factor
from enclosure_check.physics.plates import inclined_plate

PRESSURE = 101325.0
DIMS = (0.2, 0.3, 0.1)
FREE = np.ones(6, bool)
UP = (0.0, 0.0, 1.0)
EXACT = 1e-11
TILTS = [UP, (1.0, 0.0, 0.0), (0.3, -0.5, 0.8), (0.0, -0.6, -0.8)]


def without(*faces):
    is_open = FREE.copy()
    is_open[list(faces)] = False
    return is_open


def heats(geometry, rise, ambient=300.0):
    face = ambient + np.asarray(rise, float)
    if face.ndim == 0:
        face = np.full(6, face)
    film = box_film(face, ambient, PRESSURE, geometry)
    area = geometry.area.reshape((6,) + (1,) * (face.ndim - 1))
    return film.coefficient * area * (face - ambient)


def cuboid_heat(dims, up, rise, share=1.0):
    a, b, c = dims
    area = 2 * (a * b + b * c + c * a)
    g = sum(
        u * u * cuboid_gravity_function(*np.delete(dims, i), dims[i]) for i, u in enumerate(up)
    ) / np.dot(up, up)
    film = cuboid_film(rise, 300 + rise / 2, PRESSURE, area, g)
    return float(film.coefficient) * area * rise * share


@pytest.mark.parametrize("up", TILTS)
@pytest.mark.parametrize("rise", [30.0, -30.0, 1.0, 0.02])
def test_isothermal_free_box_meets_the_cuboid_law(up, rise):
    total = heats(box_geometry(DIMS, up, FREE), rise).sum()
    assert total == pytest.approx(cuboid_heat(DIMS, up, rise), rel=EXACT)


# Rises that leave every face below the turbulent range of its plate law.
@pytest.mark.parametrize("rise", [30.0, -10.0, 1.0])
def test_wall_mounted_box_is_half_its_mirrored_double(rise):
    for face, doubled in ((0, (0.4, 0.3, 0.1)), (1, (0.4, 0.3, 0.1)), (3, (0.2, 0.6, 0.1))):
        total = heats(box_geometry(DIMS, UP, without(face)), rise).sum()
        assert total == pytest.approx(cuboid_heat(doubled, UP, rise, 0.5), rel=EXACT)
    corner = heats(box_geometry(DIMS, UP, without(0, 3)), rise).sum()
    assert corner == pytest.approx(cuboid_heat((0.4, 0.6, 0.1), UP, rise, 0.25), rel=EXACT)


def test_no_difference_leaves_the_conduction_of_a_cube():
    geometry = box_geometry(DIMS, UP, FREE)
    area = geometry.area.sum()
    rise = 1e-6
    k = 0.0263541  # [W/(m K)] at 300 K
    conduction = 3.388 * k * np.sqrt(area) * rise
    assert heats(geometry, rise).sum() == pytest.approx(conduction, rel=1e-5)
    assert heats(geometry, 0.0).sum() == 0.0


def test_standing_box_is_not_scaled():
    geometry = box_geometry(DIMS, UP, without(4))
    film = box_film(np.full(6, 330.0), 300.0, PRESSURE, geometry)
    plate = inclined_plate(
        30.0,
        315.0,
        PRESSURE,
        geometry.fall_length,
        geometry.area_perimeter_length,
        geometry.up_cosine,
    )
    expected = plate.coefficient * film.shelter
    np.testing.assert_allclose(film.coefficient[:4], expected[:4], rtol=EXACT)
    assert film.coefficient[5] == pytest.approx(expected[5], rel=EXACT)
    assert film.coefficient[4] == 0.0
    np.testing.assert_allclose(film.shelter[:4], 0.90, rtol=1e-12)
    assert film.shelter[5] == pytest.approx(0.33, abs=0.002)


def test_nothing_open_gives_nothing_and_two_opposite_covers_are_not_scaled():
    shut = box_film(np.full(6, 330.0), 300.0, PRESSURE, box_geometry(DIMS, UP, without(*range(6))))
    assert (shut.coefficient == 0).all()
    assert all(np.isfinite(f).all() for f in shut)
    squeezed = box_geometry(DIMS, UP, without(0, 1))
    assert squeezed.scale_weight == 0.0
    assert box_film(np.full(6, 330.0), 300.0, PRESSURE, squeezed).scale == 1.0


def test_shelter_constants():
    assert shelter_factor(0.0, 0.5) == pytest.approx(0.90)
    assert shelter_factor(-1.0, 0.5) == pytest.approx(0.95)
    assert shelter_factor(1.0, 1.0) == pytest.approx(0.33)
    assert shelter_factor(1.0, 0.0) == pytest.approx(0.68)


def test_top_alone_warm_is_sheltered_less():
    geometry = box_geometry((0.2, 0.2, 0.2), UP, FREE)
    rise = np.zeros(6)
    rise[5] = 30.0
    alone = box_film(300.0 + rise, 300.0, PRESSURE, geometry)
    assert alone.shelter[5] == pytest.approx(0.68, abs=1e-6)
    assert heats(geometry, rise)[:5].sum() == 0.0
    warmer_sides = rise + np.array([60, 60, 60, 60, 0, 0])
    assert box_film(300.0 + warmer_sides, 300.0, PRESSURE, geometry).shelter[5] == pytest.approx(
        0.33, abs=0.002
    )
    # With no side open there is no plume to stand in.
    chimney = box_geometry((0.2, 0.2, 0.2), UP, without(0, 1, 2, 3))
    assert box_film(np.full(6, 330.0), 300.0, PRESSURE, chimney).shelter[5] == pytest.approx(0.68)


@pytest.mark.parametrize("is_open", [FREE, without(4), without(3), without(0, 4)])
@pytest.mark.parametrize("rise", [20.0, [20.0, 5.0, 30.0, 10.0, -3.0, 25.0]])
def test_continuous_in_tilt(is_open, rise):
    last = None
    largest = 0.0
    for angle in np.radians(np.arange(-2.0, 184.0, 0.1)):
        up = (0.3 * np.sin(angle), np.sin(angle), np.cos(angle))
        heat = heats(box_geometry(DIMS, up, is_open), rise)
        if last is not None:
            largest = max(largest, np.abs(heat - last).max() / np.abs(heat).sum())
        last = heat
    assert largest < 0.005  # of the total, per 0.1 degree of tilt


@pytest.mark.parametrize("face", range(6))
@pytest.mark.parametrize("up", [UP, (0.3, -0.5, 0.8)])
def test_continuous_through_zero_rise_of_one_face(face, up):
    geometry = box_geometry(DIMS, up, FREE)
    x = np.linspace(-0.1, 0.1, 4001)
    rise = np.full((6, x.size), 20.0)
    rise[face] = x
    heat = heats(geometry, rise)
    own = heat[face]
    assert own[2000] == 0.0
    assert (np.diff(own) > 0).all()
    assert np.abs(np.diff(heat, axis=1)).max() < 1e-4 * heat[:, 0].sum()
    # No spike: the slope stays between conduction and that of a law with h ~ dT^(1/4) at the ends.
    slope, mean = np.gradient(own, x)[x != 0], (own[x != 0] / x[x != 0])
    assert slope.max() < 1.5 * mean.max()
    assert slope.min() > 0.9 * mean.min()


def test_total_heat_rises_with_the_rise():
    geometry = box_geometry((0.6, 0.4, 0.8), UP, FREE)  # passes the turbulent transition
    x = np.concatenate([-np.logspace(2, -4, 800), [0.0], np.logspace(-4, 2, 800)])
    total = heats(geometry, np.tile(x, (6, 1))).sum(axis=0)
    assert (np.diff(total) > 0).all()


@pytest.mark.parametrize("up", TILTS)
@pytest.mark.parametrize("is_open", [FREE, without(5), without(1, 4)])
def test_cold_box_acts_like_a_warm_one_upside_down(up, is_open):
    warm = box_geometry(DIMS, up, is_open)
    cold = box_geometry(DIMS, -np.asarray(up), is_open)
    hot_film = box_film(np.full(6, 330.0), 300.0, PRESSURE, warm)
    cold_film = box_film(np.full(6, 300.0), 330.0, PRESSURE, cold)  # same film temperature
    np.testing.assert_allclose(cold_film.coefficient, hot_film.coefficient, rtol=1e-12)
    # Uneven, with rises so small that the properties agree to 1 %.
    rise = np.array([1.0, 0.4, 0.8, 0.2, 0.9, -0.3])
    np.testing.assert_allclose(heats(cold, -rise), -heats(warm, rise), rtol=0.01)


def test_trailing_axes_and_ambient_shapes():
    geometry = box_geometry(DIMS, (0.1, 0.2, 1.0), FREE)
    generator = np.random.default_rng(7)
    face = 300 + 40 * generator.random((6, 3, 2))
    ambient = 290 + 10 * generator.random((3, 2))
    film = box_film(face, ambient, PRESSURE, geometry)
    assert film.scale.shape == (3, 2)
    assert film.coefficient.shape == film.law.shape == film.shelter.shape == (6, 3, 2)
    for i in range(3):
        for j in range(2):
            one = box_film(face[:, i, j], ambient[i, j], PRESSURE, geometry)
            np.testing.assert_allclose(film.coefficient[:, i, j], one.coefficient, rtol=1e-12)
            np.testing.assert_allclose(film.scale[i, j], one.scale, rtol=1e-12)
    spread = box_film(face[:, 0, 0], ambient[:, 0], np.full(3, 9e4), geometry)
    assert spread.coefficient.shape == (6, 3)


def test_symmetric_box_gives_a_symmetric_answer():
    film = box_film(np.full(6, 330.0), 300.0, PRESSURE, box_geometry((0.2, 0.2, 0.1), UP, FREE))
    np.testing.assert_allclose(film.coefficient[:4], film.coefficient[0], rtol=1e-14)
    turned = box_geometry((0.2, 0.1, 0.2), (0, 1, 0), FREE)
    other = box_film(np.full(6, 330.0), 300.0, PRESSURE, turned)
    np.testing.assert_allclose(other.coefficient[[0, 1, 4, 5, 2, 3]], film.coefficient, rtol=1e-12)


def test_geometry_of_the_faces():
    geometry = box_geometry((0.1, 0.2, 0.3), (0, 0, 2.0), without(0))
    np.testing.assert_allclose(geometry.area, [0.06, 0.06, 0.03, 0.03, 0.02, 0.02])
    np.testing.assert_allclose(geometry.up_cosine, [0, 0, 0, 0, -1, 1])
    np.testing.assert_allclose(geometry.fall_length[:4], 0.3)
    # The edge along the covered face is blocked for its neighbours, not for the opposite face.
    np.testing.assert_allclose(geometry.area_perimeter_length[1], 0.06 / 1.0)
    np.testing.assert_allclose(geometry.area_perimeter_length[2], 0.03 / (0.8 - 0.3))
    np.testing.assert_allclose(geometry.area_perimeter_length[5], 0.02 / (0.6 - 0.2))
    assert geometry.scale_weight == 1.0
    assert box_geometry((0.1, 0.2, 0.3), UP, without(4)).scale_weight == 0.0
    tilted = box_geometry((0.1, 0.2, 0.3), (0.0, 0.6, 0.8), without(4))
    assert tilted.scale_weight == pytest.approx(0.36)
