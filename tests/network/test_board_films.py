"""Films of a board as a body: its rim is the edge of its layers, its sides take the rest."""

import numpy as np
import pytest

from enclosure_check.network.board_films import (
    AIR_K,
    EDGE,
    SHELTER_RISE_K,
    board_shelter,
    free_films,
    rim_film,
)
from enclosure_check.physics.air import air
from enclosure_check.physics.bodies import cuboid_film
from enclosure_check.physics.box import box_film, box_geometry
from enclosure_check.physics.plates import inclined_plate

UP = (0.0, 0.0, 1.0)
FLAT = ((0.15, 0.15, 0.002), 2)
UPRIGHT = ((0.15, 0.002, 0.15), 1)
PRESSURE_PA = 101325.0


def box_heat(size, up=UP):
    """Heat of a box of the board's size, warm by the nominal rise [W/K]."""
    geometry = box_geometry(size, up, np.ones(6, dtype=bool))
    film = box_film(np.full(6, AIR_K + SHELTER_RISE_K), AIR_K, PRESSURE_PA, geometry)
    return float(film.coefficient @ geometry.area)


def own_heat(size, axis, up=UP):
    warm, _ = free_films(size, up, axis)
    across, along = (size[other] for other in range(3) if other != axis)
    rim = 2 * (across + along) * size[axis] * warm.rim
    return float(across * along * warm.sides.sum()) + rim


def test_a_flat_board_has_the_heat_of_the_body():
    size, axis = FLAT
    assert own_heat(size, axis) == pytest.approx(box_heat(size), rel=1e-9)


def test_no_side_is_better_than_a_plate_alone_and_then_the_body_has_less():
    size, axis = UPRIGHT
    warm, cold = free_films(size, UP, axis)
    for films in (warm, cold):
        np.testing.assert_allclose(films.sides, films.alone, rtol=1e-12)
    assert own_heat(size, axis) < box_heat(size)
    assert board_shelter(size, UP, axis, 1) == pytest.approx((1.0, 1.0))


def test_what_the_rim_leaves_goes_to_the_sheltered_side():
    size, axis = FLAT
    geometry = box_geometry(size, UP, np.ones(6, dtype=bool))
    box = box_film(np.full(6, AIR_K + SHELTER_RISE_K), AIR_K, PRESSURE_PA, geometry).coefficient
    warm, cold = free_films(size, UP, axis)
    assert warm.sides[0] == pytest.approx(box[4])  # looks down, not sheltered
    assert box[5] < warm.sides[1] < warm.alone[1]
    # A cold board is the warm one upside down, but for the air.
    assert cold.sides[::-1] == pytest.approx(warm.sides, rel=0.03)


@pytest.mark.parametrize("thickness", [0.0005, 0.0016, 0.01])
def test_rim_is_half_the_edges_of_two_layers(thickness):
    size = (0.15, 0.1, thickness)
    warm, _ = free_films(size, UP, 2)
    conductivity = float(air(AIR_K + 0.5 * SHELTER_RISE_K, PRESSURE_PA).conductivity)
    geometry = box_geometry(size, UP, np.ones(6, dtype=bool))
    box = box_film(np.full(6, AIR_K + SHELTER_RISE_K), AIR_K, PRESSURE_PA, geometry).coefficient
    layers = 0.5 * (box[4] + box[5])
    per_length = EDGE * conductivity + thickness * layers
    assert warm.rim * thickness == pytest.approx(per_length, rel=1e-9)


def test_shares_give_the_films_back():
    size, axis = FLAT
    warm, _ = free_films(size, UP, axis)
    film_k = AIR_K + 0.5 * SHELTER_RISE_K
    alone = inclined_plate(SHELTER_RISE_K, film_k, PRESSURE_PA, 0.15, 0.0375, 1.0).coefficient
    assert board_shelter(size, UP, axis, 1)[0] * alone == pytest.approx(warm.sides[1], rel=1e-6)
    area, gravity, share, _ = rim_film(size, UP, axis)
    whole = cuboid_film(SHELTER_RISE_K, AIR_K + 0.5 * SHELTER_RISE_K, PRESSURE_PA, area, gravity)
    assert share * float(whole.coefficient) == pytest.approx(warm.rim)
