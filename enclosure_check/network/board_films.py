"""Films of a board as a body with air all round: how its sides and its rim shelter each other."""

from functools import lru_cache
from typing import NamedTuple

import numpy as np

from enclosure_check.description.frames import Vector
from enclosure_check.network.links import FloatArray
from enclosure_check.physics.air import air
from enclosure_check.physics.bodies import cuboid_film
from enclosure_check.physics.box import BoxGeometry, box_film, box_geometry
from enclosure_check.physics.plates import inclined_plate

# Rise at which the shelter of a board by its own sides is taken. [K]
SHELTER_RISE_K = 10.0
# Of the air there. [K]
AIR_K = 305.0
# Edge of a layer, in thicknesses: Langmuir, Adams & Meikle.
EDGE = 0.54
# Warm and cold.
_SIGNS = (1.0, -1.0)


@lru_cache(maxsize=256)
def board_shelter(size: Vector, up: Vector, axis: int, sign: int) -> tuple[float, float]:
    """Share of its plate law that a side of a free board keeps, warm and cold.

    A board is a body with air all round, whose sides shelter each other as those of a box do
    outside (see `physics.box`), taken isothermal at a nominal rise. What its rim does not take of
    the body's film goes to the sides, as far as they are sheltered. Kept, as the same come again
    under every condition.
    """
    index = 0 if sign < 0 else 1
    kept = [films.sides[index] / films.alone[index] for films in free_films(size, up, axis)]
    return float(kept[0]), float(kept[1])


@lru_cache(maxsize=128)
def rim_film(size: Vector, up: Vector, axis: int) -> tuple[float, float, float, float]:
    """Area and gravity function of a board as a body, and its rim's film over the body's mean.

    The two shares, warm and cold, are those of the rim's film at a nominal rise. Kept as those of
    `board_shelter`.
    """
    geometry = _geometry(size, up)
    shares = []
    for warm, films in zip(_SIGNS, free_films(size, up, axis), strict=True):
        rise = warm * SHELTER_RISE_K
        whole = cuboid_film(
            rise, AIR_K + 0.5 * rise, 101325.0, geometry.body_area, geometry.gravity_function
        )
        shares.append(films.rim / float(whole.coefficient))
    return geometry.body_area, geometry.gravity_function, shares[0], shares[1]


class FreeFilms(NamedTuple):
    """Films of a board with air all round [W/m2K]."""

    sides: FloatArray
    """Of the low and the high side, shape (2,)."""
    alone: FloatArray
    """What they would be as plates alone, shape (2,)."""
    rim: float


def _geometry(size: Vector, up: Vector) -> BoxGeometry:
    return box_geometry(size, up, np.ones(6, dtype=bool))


@lru_cache(maxsize=128)
def free_films(size: Vector, up: Vector, axis: int) -> tuple[FreeFilms, FreeFilms]:
    """Give the films of a board with air all round, warm and cold.

    The rim of a board is thinner than the films: it is the edge of the layers on both sides, of
    ``k (0.54 + t h / k)`` per length, half of what the two edges of a layer k/h thick add
    (Langmuir, Adams & Meikle 1913, see `physics.cavity.corner_factor`) and its own thickness t.
    The other halves are in the laws of the sides. The body as a whole keeps the film of a box of
    its size.
    """
    geometry = _geometry(size, up)
    own = np.array([2 * axis, 2 * axis + 1])
    others = np.array([index for index in range(6) if index // 2 != axis])
    both = []
    for warm in _SIGNS:
        film_temperature = AIR_K + 0.5 * warm * SHELTER_RISE_K
        film = box_film(np.full(6, AIR_K + warm * SHELTER_RISE_K), AIR_K, 101325.0, geometry)
        sides = film.coefficient[own]
        alone = inclined_plate(
            warm * SHELTER_RISE_K,
            film_temperature,
            101325.0,
            geometry.fall_length[own],
            geometry.area_perimeter_length[own],
            geometry.up_cosine[own],
        ).coefficient
        conductivity = float(air(film_temperature, 101325.0).conductivity)
        rim = EDGE * conductivity / size[axis] + float(sides.mean())
        left = float(np.sum(film.coefficient[others] * geometry.area[others]))
        left -= rim * float(np.sum(geometry.area[others]))
        # The sides take it by what they are sheltered; none becomes better than a plate alone.
        sheltered = np.maximum(alone - sides, 0.0)
        taken = np.clip(left / max(geometry.area[own[0]] * float(sheltered.sum()), 1e-300), 0, 1)
        both.append(FreeFilms(sides + taken * sheltered, alone, rim))
    return both[0], both[1]
