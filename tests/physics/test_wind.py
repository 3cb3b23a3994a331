"""Wind along plane faces: exact laminar film, library, worked examples, and how it joins in."""

import ht
import numpy as np
import pytest
from scipy.integrate import solve_ivp

from enclosure_check.physics.air import air
from enclosure_check.physics.correlation import CORRELATIONS
from enclosure_check.physics.wind import (
    CRITICAL_REYNOLDS,
    ONSET_SHARE,
    PLATE_IN_WIND,
    Wind,
    combined_film,
    flat_plate_in_wind,
    regime,
    wind_film,
    wind_past_box,
)

PRESSURE = 101_325.0
ROUNDED = 0.005  # sources print three digits
PROPERTIES = 0.01  # the source's own table of air


# The law ------------------------------------------------------------------------------------


def blasius() -> float:
    """Slope f''(0) of the similarity solution f''' + f f'' / 2 = 0, f'(far) = 1.

    Any slope gives a solution that ends at some f'(far) = c; scaled by c^(-3/2) it ends at 1.
    """
    found = solve_ivp(
        lambda _, f: [f[1], f[2], -f[0] * f[2] / 2], (0, 12), [0, 0, 1.0], rtol=1e-10, atol=1e-12
    )
    return float(found.y[1, -1] ** -1.5)


@pytest.mark.parametrize("pr", [0.68, 0.71, 0.73])
def test_laminar_film_against_the_similarity_solution(pr):
    """The energy equation on Blasius's stream, integrated here; the cube root is an approximation."""
    slope = blasius()
    assert slope == pytest.approx(0.33206, rel=1e-4)  # H. Blasius 1908, to five digits everywhere

    def change(_, y):
        f, first, second, _, heat = y
        return [first, second, -f * second / 2, heat, -pr * f * heat / 2]

    found = solve_ivp(change, (0, 15), [0, 0, slope, 0, 1.0], rtol=1e-10, atol=1e-12)
    local = 1 / float(found.y[3, -1])  # Nu_x / Re_x^(1/2)
    # Pohlhausen's cube root is within 1 % of the solution from Pr 0.6 to 10.
    assert flat_plate_in_wind(1e4, pr) == pytest.approx(2 * local * 100, rel=0.01)


@pytest.mark.parametrize("pr", [0.65, 0.71, 5.0])
@pytest.mark.parametrize("re", [1.0, 1e3, 1e5, 4.99e5])
def test_laminar_law_against_library(re, pr):
    assert flat_plate_in_wind(re, pr) == pytest.approx(
        ht.Nu_horizontal_plate_laminar_Baehr(re, pr), rel=1e-9
    )


@pytest.mark.parametrize("re", [2e6, 1e7, 1e8])
def test_turbulent_part_against_library(re):
    """A plate turbulent from its edge on, less what the laminar start takes off, by two laws."""
    laminar_start = 871 * 0.71 ** (1 / 3)
    kreith = ht.Nu_horizontal_plate_turbulent_Kreith(re, 0.71) - laminar_start
    schlichting = ht.Nu_horizontal_plate_turbulent_Schlichting(re, 0.71) - laminar_start
    found = flat_plate_in_wind(re, 0.71)
    assert found == pytest.approx(kreith, rel=0.05)  # 0.036 for 0.037, and 871 in the less
    assert 1.10 < found / schlichting < 1.16  # documented


def test_plate_at_low_pressure():
    """Incropera & DeWitt, example 7.1 (from memory): 10 m/s, 300 C, 6 kPa, plate 0.5 m at 27 C.

    Re 9597, Nu 57.4, h 4.18 W/m2K, 570 W per metre of width.
    """
    nu, k, pr = 30.84e-6 * 101_325 / 6e3, 36.4e-3, 0.687
    re = 10 * 0.5 / nu
    assert re == pytest.approx(9597, rel=ROUNDED)
    nusselt = flat_plate_in_wind(re, pr)
    assert nusselt == pytest.approx(57.4, rel=ROUNDED)
    assert nusselt * k / 0.5 == pytest.approx(4.18, rel=ROUNDED)
    wind = Wind(10.0, np.full(6, 0.5))
    found = wind_film(np.full(6, -273.0), np.full(6, 436.65), 6e3, wind)
    assert found.coefficient[0] == pytest.approx(4.18, rel=PROPERTIES)
    assert found.coefficient[0] * 0.5 * 273 == pytest.approx(570, rel=PROPERTIES)


# Cengel, example 7-2 (from memory): 83.4 kPa, air 20 C at 8 m/s, plate 1.5 x 6 m at 140 C.
@pytest.mark.parametrize(
    ("length", "re", "nusselt", "film", "heat"),
    [(6.0, 1.884e6, 2687, 13.2, 1.43e4), (1.5, 4.71e5, 408, 8.03, 8670)],
)
def test_plate_at_high_altitude(length, re, nusselt, film, heat):
    assert flat_plate_in_wind(re, 0.7154) == pytest.approx(nusselt, rel=ROUNDED)
    found = wind_film(np.full(6, 120.0), np.full(6, 353.15), 83.4e3, Wind(8.0, np.full(6, length)))
    assert found.reynolds[0] == pytest.approx(re, rel=PROPERTIES)
    # Beyond transition a film goes as Re^0.8 and more: its error in the properties likewise.
    assert found.coefficient[0] == pytest.approx(film, rel=2 * PROPERTIES)
    assert found.coefficient[0] * 9 * 120 == pytest.approx(heat, rel=2 * PROPERTIES)


def test_gr_over_re2_of_a_worked_example():
    """Sukhatme, example 6.6: length 40 mm, 70 and 30 C, 0.3 m/s: Gr/Re^2 0.540."""
    found = wind_film(np.full(6, 40.0), np.full(6, 323.15), PRESSURE, Wind(0.3, np.full(6, 0.04)))
    assert found.gr_over_re2[0] == pytest.approx(0.540, rel=ROUNDED)
    at = air(323.15, PRESSURE)
    grashof = 9.80665 / 323.15 * 40 * 0.04**3 / at.kinematic_viscosity**2
    assert found.gr_over_re2[0] == pytest.approx(grashof / found.reynolds[0] ** 2, rel=1e-12)


def test_value_and_slope_are_continuous():
    onset, full = CRITICAL_REYNOLDS, CRITICAL_REYNOLDS * (1 + ONSET_SHARE)
    for at in (onset, full):
        step = at * 1e-5
        below, here, above = (flat_plate_in_wind(at + side * step, 0.71) for side in (-1, 0, 1))
        assert abs(above / below - 1) < 1e-4
        # The slope of the law itself changes there from 0.5 to 2.3 Nu/Re.
        slopes = (here - below, above - here)
        assert abs(slopes[1] - slopes[0]) < 0.01 * slopes[1]
    re = np.logspace(0, 8, 20001)
    nusselt = flat_plate_in_wind(re, 0.71)
    assert (np.diff(nusselt) > 0).all()
    between = np.linspace(onset, full, 201)
    kinked = (0.037 * between**0.8 - 871.3) * 0.71 ** (1 / 3)
    less = 1 - flat_plate_in_wind(between, 0.71) / kinked
    assert less.min() > -1e-4
    assert 0.05 < less.max() < 0.08  # documented
    assert flat_plate_in_wind(2 * full, 0.71) == pytest.approx(
        (0.037 * (2 * full) ** 0.8 - 871.3) * 0.71 ** (1 / 3), rel=1e-4
    )


def test_no_wind_no_film_and_shapes():
    assert flat_plate_in_wind(0.0, 0.71) == 0.0
    assert flat_plate_in_wind(np.zeros((2, 0)), 0.71).shape == (2, 0)
    assert flat_plate_in_wind(np.full((2, 1), 1e6), np.full(3, 0.71)).shape == (2, 3)


def test_on_a_box_across_the_wind_within_the_stated_accuracy():
    """Square cylinders across the wind, Nu = 0.158 Re^0.66 Pr^(1/3), Re 5e3 to 6e4 (from memory).

    Sparrow, Abraham & Tong 2004. All four faces have the edge of the square as their length.
    """
    row = CORRELATIONS[PLATE_IN_WIND]
    re = np.geomspace(5e3, 6e4, 30)
    ratio = flat_plate_in_wind(re, 0.71) / (0.158 * re**0.66 * 0.71 ** (1 / 3))
    assert abs(ratio - 1).max() <= row.accuracy_pct / 100
    assert ratio[0] == pytest.approx(1.08, abs=0.005)
    assert ratio[-1] == pytest.approx(0.72, abs=0.005)


def test_faces_across_the_wind_have_at_least_their_shorter_edges_film():
    """A strip across the wind (from memory): windward 0.667 Re^(1/2), leeward 0.191 Re^(2/3)."""
    windward = np.geomspace(1e4, 5e4, 20)
    np.testing.assert_allclose(
        flat_plate_in_wind(windward, 1.0), 0.667 * windward**0.5, rtol=ROUNDED
    )
    leeward = np.geomspace(7e3, 8e4, 20)
    assert (flat_plate_in_wind(leeward, 1.0) < 0.191 * leeward ** (2 / 3)).all()


# Lengths ------------------------------------------------------------------------------------

WIDE, DEEP, HIGH = DIMS = (0.3, 0.1, 0.2)


@pytest.mark.parametrize(
    ("axis", "left_right", "front_back", "bottom_top"),
    [
        (0, DEEP, WIDE, WIDE),
        (1, DEEP, HIGH, DEEP),
        (2, HIGH, HIGH, DEEP),
        (None, HIGH, WIDE, WIDE),
    ],
)
def test_lengths_along_the_wind(axis, left_right, front_back, bottom_top):
    wind = wind_past_box(DIMS, 2.0, axis)
    assert wind.speed == 2.0
    assert wind.length.tolist() == [left_right] * 2 + [front_back] * 2 + [bottom_top] * 2


def test_wind_from_any_side_gives_the_least_film():
    """While the film is laminar."""
    rise, film_k = np.full(6, 10.0), np.full(6, 305.0)
    any_side = wind_film(rise, film_k, PRESSURE, wind_past_box(DIMS, 5.0, None)).coefficient
    for axis in range(3):
        other = wind_film(rise, film_k, PRESSURE, wind_past_box(DIMS, 5.0, axis)).coefficient
        assert (other >= any_side).all()


# Together with free convection --------------------------------------------------------------


def test_wind_never_lessens_a_film_and_adds_a_quarter_at_most():
    free, forced = np.meshgrid(np.geomspace(0.01, 100, 40), np.geomspace(0.01, 100, 40))
    film = combined_film(free, forced)
    larger = np.maximum(free, forced)
    assert (film >= larger).all()
    assert (film <= larger * 2 ** (1 / 3) * (1 + 1e-15)).all()
    np.testing.assert_allclose(film**3, free**3 + forced**3, rtol=1e-12)
    assert (np.diff(film, axis=0) >= 0).all()
    assert (np.diff(film, axis=1) >= 0).all()


def test_either_alone_is_left_exactly():
    film = np.array([0.0, 0.3, 4.7, 1234.5])
    assert (combined_film(film, 0.0) == film).all()
    assert (combined_film(0.0, film) == film).all()


@pytest.mark.parametrize(
    ("ratio", "name"),
    [(0.0, "forced"), (0.099, "forced"), (0.1, "mixed"), (10.0, "mixed"), (10.1, "natural")],
)
def test_regimes(ratio, name):
    assert regime(ratio) == name


@pytest.mark.parametrize(("ratio", "smaller"), [(0.1, "free"), (10.0, "forced")])
def test_outside_the_mixed_regime_the_weaker_adds_little(ratio, smaller):
    """Upright face: laminar laws of both with one length; what leaving the weaker out would cost."""
    rise, length, film_k = 10.0, 0.2, 305.0
    at = air(film_k, PRESSURE)
    speed = (9.80665 / film_k * rise * length / ratio) ** 0.5
    forced = flat_plate_in_wind(speed * length / at.kinematic_viscosity, at.prandtl)
    free = ht.Nu_vertical_plate_Churchill(
        float(at.prandtl), ratio * float(speed * length / at.kinematic_viscosity) ** 2
    )
    assert (free < forced) == (smaller == "free")
    assert combined_film(free, forced) < 1.12 * max(free, forced)
