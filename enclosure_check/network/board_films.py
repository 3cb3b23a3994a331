"""Films of a board as a body with air all round: how its sides and its rim shelter each other."""

from functools import lru_cache

import numpy as np

from enclosure_check.description.frames import Vector
from enclosure_check.network.builder import PlaneFace
from enclosure_check.network.links import FloatArray
from enclosure_check.physics.bodies import cuboid_film
from enclosure_check.physics.box import BoxGeometry, box_film, box_geometry
from enclosure_check.physics.plates import inclined_plate

# Rise at which the shelter of a board by its own sides is taken. [K]
SHELTER_RISE_K = 10.0
# Of the air there. [K]
AIR_K = 305.0
# Warm and cold.
_SIGNS = (1.0, -1.0)


@lru_cache(maxsize=256)
def board_shelter(
    size: Vector, up: Vector, axis: int, sign: int, face: PlaneFace
) -> tuple[float, float]:
    """Share of its plate law that a side of a free board keeps, warm and cold.

    A board is a body with air all round, whose sides shelter each other as those of a box do
    outside (see `physics.box`), taken isothermal at a nominal rise. Kept, as the same come again
    under every condition.
    """
    index = 2 * axis + (1 if sign > 0 else 0)
    kept = []
    for warm, film in zip(_SIGNS, _free_films(size, up)[1], strict=True):
        alone = inclined_plate(
            warm * SHELTER_RISE_K,
            AIR_K + 0.5 * warm * SHELTER_RISE_K,
            101325.0,
            face.fall_length,
            face.area_perimeter_length,
            face.up_cosine,
        ).coefficient
        kept.append(float(film[index] / alone))
    return kept[0], kept[1]


@lru_cache(maxsize=128)
def rim_film(size: Vector, up: Vector, axis: int) -> tuple[float, float, float, float]:
    """Area and gravity function of a board as a body, and its rim's film over the body's mean.

    The two shares, warm and cold, come from the films of a box of the board's size with air all
    round (see `physics.box`), taken isothermal at a nominal rise. Kept as those of
    `board_shelter`.
    """
    geometry, films = _free_films(size, up)
    rim = np.array([index // 2 != axis for index in range(6)])
    shares = []
    for warm, film in zip(_SIGNS, films, strict=True):
        rise = warm * SHELTER_RISE_K
        narrow = float(np.sum((film * geometry.area)[rim]) / np.sum(geometry.area[rim]))
        whole = cuboid_film(
            rise, AIR_K + 0.5 * rise, 101325.0, geometry.body_area, geometry.gravity_function
        )
        shares.append(narrow / float(whole.coefficient))
    return geometry.body_area, geometry.gravity_function, shares[0], shares[1]


@lru_cache(maxsize=128)
def _free_films(size: Vector, up: Vector) -> tuple[BoxGeometry, tuple[FloatArray, ...]]:
    """Films of a box with air all round [W/(m2 K)], face by face, warm and cold."""
    geometry = box_geometry(size, up, np.ones(6, dtype=bool))
    return geometry, tuple(
        box_film(np.full(6, AIR_K + warm * SHELTER_RISE_K), AIR_K, 101325.0, geometry).coefficient
        for warm in _SIGNS
    )
