"""Convection of the outer faces of the box in wind: free and forced together."""

from typing import ClassVar

import numpy as np

from enclosure_check.network.films import BoxFilm, copied
from enclosure_check.network.links import FloatArray, IntArray
from enclosure_check.physics.wind import Wind, WindFilm, combined_film, wind_film
from enclosure_check.records import dataclass


@dataclass(frozen=True, eq=False)
class BoxFilmInWind(BoxFilm):
    """As `BoxFilm`, the film of each open face joined with that of the wind along it.

    Attributes
    ----------
    wind
        Speed, and length of each face along it.
    wind_factor
        Multiplies the wind's share of each face's film, as ``factor`` the free one; shape (6, 1).
    """

    wind: Wind
    wind_factor: FloatArray

    PARAMETERS: ClassVar[tuple[str, ...]] = (*BoxFilm.PARAMETERS, "wind_factor")

    def wind_audit(self, rise: FloatArray, reference_k: FloatArray) -> WindFilm:
        """Give the films of the faces in wind alone from the rises of ``nodes`` [K], (7, v)."""
        faces, air = rise[:6], rise[6]
        mean = reference_k + 0.5 * (faces + air)
        return wind_film(faces - air, mean, self.pressure_pa, self.wind)

    def films(self, rise: FloatArray, reference_k: FloatArray, copies: int = 1) -> FloatArray:
        """Film coefficients of the faces [W/m2K], see `BoxFilm.films`."""
        forced = copied(self.wind_factor, copies) * self.wind_audit(rise, reference_k).coefficient
        is_open = self.geometry.open_faces[:, None]
        film = combined_film(super().films(rise, reference_k, copies), np.where(is_open, forced, 0))
        return film

    def parameter_of(self, name: str) -> IntArray:
        """Which value of a parameter is each link's own: that of its face, or its own."""
        return super().parameter_of("factor" if name == "wind_factor" else name)
