"""Free convection inside the box as one kind of link: films, gaps, streams and the air's profile.

See `physics.cavity` for the laws. Air nodes stand at even heights along gravity, the profile is
linear between them. A film link takes heat from a cell to the two air nodes around its height; a
straight link carries it across a gap from cell to cell; a lift link carries heat up from one air
node to the next, with the stream of a warm face that rises or of a cold one that falls;
neighbouring air nodes mix.
"""

from dataclasses import dataclass, replace
from functools import cached_property
from typing import ClassVar

import numpy as np

from enclosure_check.network.air_records import Pairs, Surfaces
from enclosure_check.network.films import DIFFERENCE_K, FilmAudit
from enclosure_check.network.links import (
    DIFFERENCE_SHARE,
    NOMINAL_RISE_K,
    FloatArray,
    IntArray,
)
from enclosure_check.network.streams import march, passing
from enclosure_check.physics import cavity
from enclosure_check.physics.air import GRAVITY, air
from enclosure_check.physics.bodies import cuboid_film
from enclosure_check.physics.plates import inclined_parts, plate_audit
from enclosure_check.physics.smooth import soft_abs, soft_sign

# Film coefficient that the first guess takes. [W/m2K]
NOMINAL_FILM = 5.0
# Stirring of the first guess, over the sum of all films: close to one body of air.
NOMINAL_STIRRING = 3.0
BODY_LAW = 3


@dataclass(frozen=True, eq=False)
class InsideAir:
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
        sign = soft_sign(signed, cavity.DIFFERENCE_WIDTH_K)
        _, upright, level, ra_v, ra_h = inclined_parts(
            size * sign, properties, s.fall_length, s.area_perimeter_length, s.up_cosine
        )
        stratification = np.maximum(s.over_height @ layer, 0.0) / size
        boost = cavity.stratified_factor(s.stratified * stratification)
        upright = upright * boost
        largest = np.maximum(upright, level)
        ratio = (np.minimum(upright, level) / largest) ** 2
        film = largest * (1.0 + ratio**5) ** 0.1
        warm = 0.5 + 0.5 * sign
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
                signed[s.body],
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
        entering = entering * (rise[self.cell] - self.hat @ layer)
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

    @cached_property
    def pattern(self) -> tuple[IntArray, IntArray]:
        """Link and node of every derivative that `slopes` gives, shapes (d,)."""
        n, count = len(self.air), len(self.surfaces.node)
        films, straights, lifts = len(self.cell), len(self.cell_a), self._lifts
        first, second = self.pairs.first, self.pairs.second
        node = self.surfaces.node
        film = np.arange(films)
        link: list[IntArray] = []
        nodes: list[IntArray] = []

        def add(links: IntArray, at: IntArray) -> None:
            one, other = np.broadcast_arrays(links, at)
            link.append(one.ravel())
            nodes.append(other.ravel())

        for offset in (0, films):
            add(film + offset, self.cell)
            add(film + offset, node[self._surface_of_entry])
            add(film + offset, self._partner[self.side])
            add((film + offset)[:, None], self.air[None])
        own = np.arange(straights) + 2 * films
        add(own, self.cell_a)
        add(own, self.cell_b)
        add(own, node[first][self.pair] if straights else self.cell_a)
        add(own, node[second][self.pair] if straights else self.cell_a)
        add(own[:, None], self.air[None])
        start = 2 * films + straights
        for offset in (start, start + lifts):
            base = offset + np.arange(count)[:, None] * (n - 1) + np.arange(n - 1)[None]
            add(base[self._surface_of_entry], self.cell[:, None])
            add(base, node[:, None])
            add(base[self.side_surface], self._partner[:, None])
            add(base[:, :, None], self.air[None, None])
        mixing = start + 2 * lifts + np.arange(n - 1)
        add(mixing, self.air[:-1])
        add(mixing, self.air[1:])
        return np.concatenate(link), np.concatenate(nodes)

    @cached_property
    def _partner(self) -> IntArray:
        """Mean node of the face each side looks at, its own outside any gap, shape (f,)."""
        own = self.surfaces.node[self.side_surface]
        if not len(self.pairs.first):
            return own
        facing = np.where(
            self.side_second > 0,
            self.pairs.first[self.side_pair],
            self.pairs.second[self.side_pair],
        )
        return np.where(self.side_pair >= 0, self.surfaces.node[facing], own)

    def slopes(self, rise: FloatArray, reference_k: FloatArray) -> FloatArray:
        """Derivatives of `evaluate` in the order of `pattern` [W/K], shape (d, v)."""
        variants = rise.shape[1]
        factors = np.broadcast_to(self.factor, (len(self.factor), variants)).T[:, :, None]
        return np.concatenate(
            [
                self._slopes_of_one(rise[:, v : v + 1], reference_k[v : v + 1], factor)
                for v, factor in enumerate(factors)
            ],
            axis=1,
        )

    def _slopes_of_one(
        self, rise: FloatArray, reference: FloatArray, factor: FloatArray
    ) -> FloatArray:
        n = len(self.air)
        mean, layer = rise[self.surfaces.node], rise[self.air]
        # Columns: as it is, all means warmer, each air node warmer.
        warm_mean = np.repeat(mean, n + 2, axis=1)
        warm_mean[:, 1] += DIFFERENCE_K
        warm_layer = np.repeat(layer, n + 2, axis=1)
        warm_layer[np.arange(n), np.arange(n) + 2] += DIFFERENCE_K
        film = factor * self._films(warm_mean, warm_layer, reference).coefficient
        # The same for pairs, whose two faces warm one at a time: base, first, second, air nodes.
        pick_a = np.concatenate(([0, 1, 0], np.arange(2, n + 2)))
        pick_b = np.concatenate(([0, 0, 1], np.arange(2, n + 2)))
        pick_air = np.concatenate(([0, 0, 0], np.arange(2, n + 2)))
        keep, straight = self._pair_values(
            film[:, pick_a],
            film[:, pick_b],
            warm_mean[:, pick_a],
            warm_mean[:, pick_b],
            warm_layer[:, pick_air],
            reference,
        )
        # Film of each side: base, own mean, facing mean, air nodes; shape (f, n + 3).
        own, facing = [0, 1, 2, *range(3, n + 3)], [0, 2, 1, *range(3, n + 3)]
        by_surface = film[:, [0, 1, 0, *range(2, n + 2)]]
        side = self._side_films(by_surface, keep[:, own], keep[:, facing])
        change = (side[:, 1:] - side[:, :1]) / DIFFERENCE_K
        difference = rise[self.cell] - self.hat @ layer
        flow = self.area * difference
        entering = side[self.side, :1] * flow
        # Derivatives of the film heat by cell, own mean, facing mean, air nodes; (e, n + 3).
        by = np.concatenate((side[self.side, :1] * self.area, change[self.side] * flow), axis=1)
        by[:, 3:] -= side[self.side, :1] * self.area * self.hat
        _, share = self._near
        parts = []
        for part in (1.0 - share, share):
            parts += [
                (part * by[:, :1]).ravel(),
                (part * by[:, 1:2]).ravel(),
                (part * by[:, 2:3]).ravel(),
                (part * by[:, 3:]).ravel(),
            ]
        # Straight across.
        gap = rise[self.cell_a] - rise[self.cell_b]
        conductance = straight[self.pair, :1] * self.straight_area
        by_gap = (straight[:, 1:] - straight[:, :1])[self.pair] / DIFFERENCE_K
        by_gap = by_gap * self.straight_area * gap
        parts += [
            conductance.ravel(),
            -conductance.ravel(),
            by_gap[:, 0],
            by_gap[:, 1],
            by_gap[:, 2:].ravel(),
        ]
        # Lifts: by what they pick up, and by what they keep.
        up, down = self._retained(warm_mean, warm_layer)
        for sign, keep_on in ((1.0, up), (-1.0, down)):
            active = (sign * entering > 0).astype(np.float64)
            parts += self._lift_slopes(sign, active, entering, by, keep_on)
        inverted = layer[:-1] - layer[1:]
        slope = self.conduct_w_per_k * (1.0 + 4.0 / 3.0 * self._overturning(inverted))
        mixing = (slope + self.stirring).ravel()
        parts += [mixing, -mixing]
        return np.concatenate(parts)[:, None]

    def _lift_slopes(
        self,
        sign: float,
        active: FloatArray,
        entering: FloatArray,
        by: FloatArray,
        keep: FloatArray,
    ) -> list[FloatArray]:
        """Derivatives of the lifts by cells, own means, facing means and air nodes."""
        n = len(self.air)

        def flip(values: FloatArray) -> FloatArray:
            return values if sign > 0 else values[:, ::-1]

        hat = self.hat if sign > 0 else self.hat[:, ::-1]
        picked = np.stack(
            [self._by_surface @ (hat[:, j : j + 1] * active * sign * entering) for j in range(n)],
            axis=1,
        )
        kept = flip(keep)
        lifts = march(np.repeat(picked, keep.shape[2], axis=2), kept)
        # What a watt picked up at node i gives at each lift j: products of what is kept.
        passed = passing(kept[:, :, 0])
        per_entry = np.einsum("ei,eij->ej", hat, passed[self._surface_of_entry])
        per_entry = per_entry * active * sign
        by_cell = per_entry * by[:, :1]
        if sign < 0:
            by_cell = by_cell[:, ::-1]
        kept_by = flip((lifts[:, :, 1:] - lifts[:, :, :1]) / DIFFERENCE_K)
        own = flip(self._by_surface @ (per_entry * by[:, 1:2])) + kept_by[:, :, 0]
        facing = self._by_side @ (per_entry * by[:, 2:3])
        facing = facing[:, ::-1] if sign < 0 else facing
        layers = np.stack(
            [flip(self._by_surface @ (per_entry * by[:, 3 + i : 4 + i])) for i in range(n)], axis=2
        )
        return [by_cell.ravel(), own.ravel(), facing.ravel(), (layers + kept_by[:, :, 1:]).ravel()]

    @cached_property
    def _by_side(self) -> FloatArray:
        matrix = np.zeros((len(self.side_surface), len(self.cell)))
        matrix[self.side, np.arange(len(self.cell))] = 1.0
        return matrix

    def nominal(self, reference_k: FloatArray) -> FloatArray:
        """Factors of a linear network close to one body of air, in the order of `pattern`."""
        n, films = len(self.air), len(self.cell)
        _, share = self._near
        film = NOMINAL_FILM * self.area
        parts = []
        for part in (1.0 - share, share):
            zero = np.zeros(films)
            parts += [(part * film).ravel(), zero, zero, (-part * film * self.hat).ravel()]
        conductivity = float(air(reference_k[0] + NOMINAL_RISE_K, self.pressure_pa).conductivity)
        narrow = np.minimum(conductivity / self.pairs.width, NOMINAL_FILM)[self.pair]
        straight = (narrow * self.straight_area).ravel()
        zero = np.zeros(len(self.cell_a))
        parts += [straight, -straight, zero, zero, np.zeros(len(self.cell_a) * n)]
        start = sum(len(part) for part in parts)
        rest = len(self.pattern[0]) - start - 2 * (n - 1)
        mixing = np.full(n - 1, NOMINAL_STIRRING * float(film.sum()))
        return np.concatenate([*parts, np.zeros(rest), mixing, -mixing])[:, None]

    # Parameters --------------------------------------------------------------------------

    def audit(self, rise: FloatArray, reference_k: FloatArray) -> FilmAudit:
        """Give the films of the surfaces with the groups of their laws, shape (s, v)."""
        return self._films(rise[self.surfaces.node], rise[self.air], reference_k)

    def weighted_by_parameter(
        self, rise: FloatArray, reference_k: FloatArray, weight: FloatArray, name: str
    ) -> FloatArray:
        """Derivative of the weighted sum of heat rates by each surface's factor, shape (s,)."""
        count = len(self.factor)
        step = DIFFERENCE_SHARE * self.factor[:, 0]
        moved = np.repeat(self.factor, count + 1, axis=1)
        moved[np.arange(count), np.arange(count) + 1] += step
        many = self.with_parameter(name, moved)
        copies = np.repeat(rise, count + 1, axis=1)
        heat = weight @ many.evaluate(copies, np.repeat(reference_k, count + 1))
        return np.asarray((heat[1:] - heat[0]) / step)

    def with_parameter(self, name: str, value: FloatArray) -> "InsideAir":
        """Give the same links with other factors of the films, shape (s, 1) or (s, v)."""
        if name != "factor":
            raise KeyError(f"InsideAir has no parameter {name!r}")
        return replace(self, factor=value)

    def stirred(self, share: float) -> "InsideAir":
        """Give the links with more mixing between neighbouring air nodes.

        Parameters
        ----------
        share
            Conductance between neighbours over that of all films at a nominal coefficient [-].
        """
        return replace(self, stirring=share * NOMINAL_FILM * float(self.area.sum()))
