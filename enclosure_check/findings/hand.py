"""A hand calculation beside the answer: isolated-plate laws summed over an isothermal box."""

from typing import TYPE_CHECKING

import numpy as np

from enclosure_check.findings.results import HandEstimate
from enclosure_check.findings.solved import Solved
from enclosure_check.network.films import BoxFilm
from enclosure_check.network.links import FloatArray
from enclosure_check.physics.air import air, rayleigh_number
from enclosure_check.physics.box import BoxGeometry
from enclosure_check.physics.plates import (
    churchill_chu_laminar,
    hot_side_up_laminar,
    mcadams_down,
)
from enclosure_check.physics.radiation import STEFAN_BOLTZMANN

if TYPE_CHECKING:
    from enclosure_check.physics.wind import Wind

# Rises the hand calculation is tabulated at [K]; between them it goes nearly as a power.
_RISES = np.geomspace(0.01, 1000.0, 61)

# Below this rise a film coefficient says nothing. [K]
_LEAST_RISE_K = 0.01


def hand_estimate(solved: Solved) -> HandEstimate:
    """Give the heat flux, the mean film coefficient and the rise a hand calculation gives."""
    kind = next(kind for kind in solved.network.kinds if isinstance(kind, BoxFilm))
    box = kind.geometry
    walls = list(solved.case.walls.values())
    is_open = box.open_faces
    area = float(box.open_area.sum())
    reference = float(solved.network.reference_k[0])
    outside = solved.network.places.wall_outside
    rises = np.array([solved.solution.rise[outside[wall.name].mean, 0] for wall in walls])
    mean_rise = float(np.sum(rises * box.open_share))
    heat = sum(
        solved.flow(f"wall:{wall.name}", role)
        for wall, counts in zip(walls, is_open, strict=True)
        if counts
        for role in ("convection_outside", "radiation_outside")
    )
    warm = abs(mean_rise) > _LEAST_RISE_K
    emissivity = np.array([wall.finish_outside.emissivity for wall in walls])
    by_rise = plates_heat(box, emissivity, reference, kind.pressure_pa, _wind(kind))
    plates: float | None = None
    if warm and mean_rise > 0 and by_rise[0] < heat < by_rise[-1]:
        plates = float(np.exp(np.interp(np.log(heat), np.log(by_rise), np.log(_RISES))))
    return HandEstimate(
        heat_w=heat,
        area_m2=area,
        flux_w_per_m2=heat / area,
        film_w_per_m2k=heat / (area * mean_rise) if heat * mean_rise > 0 and warm else None,
        wall_rise_k=mean_rise,
        plates_wall_rise_k=plates,
    )


def _wind(kind: BoxFilm) -> "Wind | None":
    """Give the wind past the box; none in still air."""
    wind: Wind | None = getattr(kind, "wind", None)
    return wind


def plates_heat(
    box: BoxGeometry,
    emissivity: FloatArray,
    air_k: float,
    pressure_pa: float,
    wind: "Wind | None" = None,
) -> FloatArray:
    """Heat of the isothermal box by isolated plates and radiation, at each tabulated rise [W].

    Sides by Churchill & Chu (laminar) with the length along gravity, tops by ``0.54 Ra^(1/4)`` and
    bottoms by ``0.27 Ra^(1/4)`` with area over perimeter; a tilted face takes the larger of the two
    kinds with its component of gravity. In wind each is joined with the plate along it. Radiation
    to black surroundings at air temperature.
    """
    rise = _RISES[None, :]
    properties = air(air_k + rise / 2, pressure_pa)
    fall, span = box.fall_length[:, None], box.area_perimeter_length[:, None]
    cosine = box.up_cosine[:, None]
    along = np.sqrt(np.maximum(1 - cosine**2, 0.0))
    vertical = churchill_chu_laminar(
        rayleigh_number(rise, fall, properties) * along, properties.prandtl
    )
    across = rayleigh_number(rise, span, properties) * np.abs(cosine)
    horizontal = np.where(cosine > 0, hot_side_up_laminar(across), mcadams_down(across))
    upright = along > 1e-6
    film = properties.conductivity * np.maximum(
        np.where(upright, vertical / fall, 0.0), horizontal / span
    )
    if wind is not None:
        from enclosure_check.physics.wind import combined_film, wind_film

        rises = np.broadcast_to(rise, film.shape)
        film = combined_film(
            film, wind_film(rises, air_k + rises / 2, pressure_pa, wind).coefficient
        )
    fourth = (air_k + rise) ** 4 - air_k**4
    flux = film * rise + emissivity[:, None] * STEFAN_BOLTZMANN * fourth
    return np.asarray((box.open_area[:, None] * flux).sum(axis=0))
