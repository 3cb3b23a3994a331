"""The heat of all convection inside a box: films, gaps, streams and the air's profile.

See `physics.cavity` for the laws. Air nodes stand at even heights along gravity, the profile is
linear between them. A film link takes heat from a cell to the two air nodes around its height; a
straight link carries it across a gap from cell to cell; a lift link carries heat up from one air
node to the next, with the stream of a warm face that rises or of a cold one that falls;
neighbouring air nodes mix.
"""

from functools import cached_property
from typing import ClassVar

import numpy as np

from enclosure_check.network.air_records import Pairs, Surfaces
from enclosure_check.network.films import FilmAudit
from enclosure_check.network.links import (
    FloatArray,
    IntArray,
)
from enclosure_check.network.streams import march
from enclosure_check.physics import cavity
from enclosure_check.physics.air import GRAVITY, air
from enclosure_check.physics.bodies import cuboid_film
from enclosure_check.physics.plates import inclined_parts, plate_audit
from enclosure_check.physics.smooth import soft_abs
from enclosure_check.records import dataclass

BODY_LAW = 3


@dataclass(frozen=True, eq=False)
class InsideAirHeat:
    """All convection inside one box; see the module.

    Attributes
    ----------
    air
        Air nodes from the bottom up, shape (n,).
    conduct_w_per_k
        Molecular conduction between neighbouring air nodes [W/K].
    spacing
        Their distance along gravity [m].
    cell, side, area, hat
        Film entries: cell node, its side (below), bare area [m2] (e, 1), shares of the air nodes in
        the air at its height (e, n).
    side_surface, side_pair, side_second
        Sides: a surface inside one gap, or outside any (pair -1), and whether it is the second
        face of the pair; shape (f,).
    cell_a, cell_b, pair, straight_area
        Entries that carry heat straight across: cells, pair, area [m2] (q, 1).
    factor
        Multiplies every film and straight conductance of a surface; shape (s, 1).
    offset
        How much warmer than each air node the air is to which films give heat there; streams, and
        the coefficients of films, see the node; shape (n, 1), or one for all [K].
    stirring
        Conductance added between neighbouring air nodes [W/K]; none in an answer.
    """

    air: IntArray
    conduct_w_per_k: float
    spacing: float
    surfaces: Surfaces
    pairs: Pairs
    cell: IntArray
    side: IntArray
    area: FloatArray
    hat: FloatArray
    side_surface: IntArray
    side_pair: IntArray
    side_second: IntArray
    cell_a: IntArray
    cell_b: IntArray
    pair: IntArray
    straight_area: FloatArray
    straight_label: IntArray
    film_label: IntArray
    lift_label: int
    mixing_label: int
    pressure_pa: float
    factor: FloatArray
    offset: FloatArray | float = 0.0
    stirring: float = 0.0

    PARAMETERS: ClassVar[tuple[str, ...]] = ("factor",)

    # Shape of the links ------------------------------------------------------------------

    @cached_property
    def _near(self) -> tuple[IntArray, FloatArray]:
        """Air node below each film entry and the share of the one above it, shapes (e,), (e, 1)."""
        low = np.argmax(self.hat > 0, axis=1)
        low = np.minimum(low, len(self.air) - 2) if len(self.air) > 1 else low
        high = np.minimum(low + 1, len(self.air) - 1)
        share = np.take_along_axis(self.hat, high[:, None], axis=1)
        return low, share if len(self.air) > 1 else np.zeros_like(share)

    @cached_property
    def _lifts(self) -> int:
        return len(self.surfaces.node) * (len(self.air) - 1)

    @cached_property
    def a(self) -> IntArray:
        """Node the heat leaves, shape (m,)."""
        lower = self.air[:-1]
        count = len(self.surfaces.node)
        return np.concatenate(
            (
                self.cell,
                self.cell,
                self.cell_a,
                np.tile(lower, 2 * count),
                lower,
            )
        )

    @cached_property
    def b(self) -> IntArray:
        """Node the heat enters, shape (m,)."""
        low, _ = self._near
        upper = self.air[1:]
        count = len(self.surfaces.node)
        return np.concatenate(
            (
                self.air[low],
                self.air[np.minimum(low + 1, len(self.air) - 1)],
                self.cell_b,
                np.tile(upper, 2 * count),
                upper,
            )
        )

    @cached_property
    def label(self) -> IntArray:
        """Number of each link's label, shape (m,)."""
        return np.concatenate(
            (
                self.film_label,
                self.film_label,
                self.straight_label,
                np.full(2 * self._lifts, self.lift_label, dtype=np.intp),
                np.full(len(self.air) - 1, self.mixing_label, dtype=np.intp),
            )
        )

    # Laws --------------------------------------------------------------------------------

    def _films(self, mean: FloatArray, layer: FloatArray, reference: FloatArray) -> FilmAudit:
        """Films of the surfaces from their means (s, c) and the air nodes (n, c)."""
        s = self.surfaces
        difference = mean[:, None] - s.samples @ layer
        size = soft_abs(difference, cavity.DIFFERENCE_WIDTH_K).mean(axis=1)
        signed = difference.mean(axis=1)
        film_temperature = reference + mean - 0.5 * signed
        properties = air(film_temperature, self.pressure_pa)
        # Films run along the face with the size of the difference, across it with its mean.
        _, upright, level, ra_v, ra_h = inclined_parts(
            size,
            properties,
            s.fall_length,
            s.area_perimeter_length,
            s.up_cosine,
            level_rise=signed,
            level_width=cavity.LEVEL_WIDTH_K,
        )
        stratification = np.maximum(s.over_height @ layer, 0.0) / size
        boost = cavity.stratified_factor(s.stratified * stratification)
        upright = upright * boost
        largest = np.maximum(upright, level)
        ratio = (np.minimum(upright, level) / largest) ** 2
        film = largest * (1.0 + ratio**5) ** 0.1
        warm = 0.5 + 0.5 * signed / soft_abs(size, cavity.SIGN_WIDTH_K)
        film = film * (s.warm_factor * warm + s.cold_factor * (1.0 - warm))
        film = film * cavity.corner_factor(film, properties.conductivity, s.edge_a, s.edge_b)
        audit = plate_audit(
            film,
            upright,
            level,
            ra_v,
            ra_h,
            properties.conductivity,
            s.fall_length,
            s.area_perimeter_length,
        )
        coefficient, ra, nu = film, audit.rayleigh, audit.nusselt
        length, law = np.array(audit.length), np.array(audit.law)
        if len(s.body):
            body = cuboid_film(
                size[s.body],
                film_temperature[s.body],
                self.pressure_pa,
                s.body_area,
                s.gravity_function,
            )
            coefficient, ra, nu = (np.array(x) for x in (coefficient, ra, nu))
            kept = (s.warm_factor * warm + s.cold_factor * (1.0 - warm))[s.body]
            coefficient[s.body], ra[s.body], nu[s.body] = kept * body[0], body[1], kept * body[2]
            length[s.body], law[s.body] = body.length, BODY_LAW
        return FilmAudit(signed, film_temperature, coefficient, ra, nu, length, law)

    def _retained(self, mean: FloatArray, layer: FloatArray) -> tuple[FloatArray, FloatArray]:
        """Share of a stream carried from each air node on, up and down, shape (s, n - 1, c)."""
        s = self.surfaces
        step = layer[1:] - layer[:-1]
        wall = mean[:, None]
        up = cavity.stream_retention(wall, layer[None, 1:], step[None], s.decay_up[:, 1:, None])
        down = cavity.stream_retention(
            -wall, -layer[None, :-1], step[None], s.decay_down[:, :-1, None]
        )
        return up, down

    # What the solver asks ----------------------------------------------------------------

    def evaluate(self, rise: FloatArray, reference_k: FloatArray) -> FloatArray:
        """Heat through every link [W], shape (m, v)."""
        mean, layer = rise[self.surfaces.node], rise[self.air]
        film = self.factor * self._films(mean, layer, reference_k).coefficient
        keep, straight = self._pair_values(film, film, mean, mean, layer, reference_k)
        entering = self._side_films(film, keep, keep)[self.side] * self.area
        entering = entering * (rise[self.cell] - self.hat @ (layer + self.offset))
        return self._links(rise, layer, mean, entering, straight)

    def _pair_values(
        self,
        film_a: FloatArray,
        film_b: FloatArray,
        mean_a: FloatArray,
        mean_b: FloatArray,
        layer: FloatArray,
        reference: FloatArray,
    ) -> cavity.GapExchange:
        """Share of its film each face of a pair keeps, and what goes straight [W/m2K], (p, c)."""
        p = self.pairs
        one, other = mean_a[p.first], mean_b[p.second]
        around = p.air @ layer
        return cavity.gap_exchange(
            film_a[p.first],
            film_b[p.second],
            one - around,
            other - around,
            reference + 0.5 * (one + other),
            self.pressure_pa,
            p.width,
            p.length,
            p.gravity,
            p.up_cosine,
            p.closed,
        )

    def _side_films(self, film: FloatArray, keep_a: FloatArray, keep_b: FloatArray) -> FloatArray:
        """Film to the air of each side [W/m2K], shape (f, c)."""
        values = film[self.side_surface]
        if not len(self.pairs.first):
            return values
        kept = np.where(
            self.side_second[:, None] > 0, keep_b[self.side_pair], keep_a[self.side_pair]
        )
        return np.where(self.side_pair[:, None] >= 0, values * kept, values)

    def _pickups(self, entering: FloatArray) -> FloatArray:
        """Add film heat (e, c) up by surface and air node, shape (s, n, c)."""
        _, share = self._near
        count, size = len(self.surfaces.node), len(self.air)
        halves = np.concatenate((entering * (1.0 - share), entering * share))
        sums = [
            np.bincount(self._pickup_place, half, count * size).reshape(count, size)
            for half in np.ascontiguousarray(halves.T)
        ]
        return np.stack(sums, axis=2)

    @cached_property
    def _pickup_place(self) -> IntArray:
        """Flat place (surface, air node) of the shares of every entry, the lower nodes first."""
        low, _ = self._near
        first = self._surface_of_entry * len(self.air) + low
        return np.concatenate((first, first + min(1, len(self.air) - 1)))

    @cached_property
    def _surface_of_entry(self) -> IntArray:
        return self.side_surface[self.side]

    @cached_property
    def _by_surface(self) -> FloatArray:
        """Which entries belong to each surface, shape (s, e)."""
        matrix = np.zeros((len(self.surfaces.node), len(self.cell)))
        matrix[self._surface_of_entry, np.arange(len(self.cell))] = 1.0
        return matrix

    def _links(
        self,
        rise: FloatArray,
        layer: FloatArray,
        mean: FloatArray,
        entering: FloatArray,
        straight: FloatArray,
    ) -> FloatArray:
        _, share = self._near
        across = straight[self.pair] * self.straight_area * (rise[self.cell_a] - rise[self.cell_b])
        up, down = self._retained(mean, layer)
        lifted = march(self._pickups(np.maximum(entering, 0.0)), up)
        fallen = march(self._pickups(np.maximum(-entering, 0.0))[:, ::-1], down[:, ::-1])[:, ::-1]
        c = rise.shape[1]
        return np.concatenate(
            (
                entering * (1.0 - share),
                entering * share,
                across,
                lifted.reshape(-1, c),
                fallen.reshape(-1, c),
                self._mixed(layer, rise),
            )
        )

    def _mixed(self, layer: FloatArray, rise: FloatArray) -> FloatArray:
        """Heat from each air node to the next above by conduction and overturning (n - 1, c)."""
        down = layer[:-1] - layer[1:]
        return (self.conduct_w_per_k * (1.0 + self._overturning(down)) + self.stirring) * down

    def _overturning(self, inverted: FloatArray) -> FloatArray:
        """Nusselt number less one of air that is warmer below, Hollands' law at large Ra."""
        size = np.maximum(inverted, 0.0)
        properties = air(300.0, self.pressure_pa)
        per_volume = GRAVITY / 300.0 * properties.prandtl / properties.kinematic_viscosity**2
        return np.asarray(np.cbrt(per_volume * size * self.spacing**3 / 5830.0))
