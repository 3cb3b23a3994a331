"""All convection inside a box as one kind of link: `inside_air_heat` with its derivatives."""

from functools import cached_property
from typing import ClassVar

import numpy as np

from enclosure_check.network.films import DIFFERENCE_K, FilmAudit
from enclosure_check.network.inside_air_heat import InsideAirHeat
from enclosure_check.network.links import (
    NOMINAL_RISE_K,
    FloatArray,
    IntArray,
)
from enclosure_check.network.streams import march, passing
from enclosure_check.physics.air import air
from enclosure_check.records import dataclass, replace

# Film coefficient that the first guess takes. [W/m2K]
NOMINAL_FILM = 5.0
# Stirring of the first guess, over the sum of all films: close to one body of air.
NOMINAL_STIRRING = 3.0


@dataclass(frozen=True, eq=False)
class InsideAir(InsideAirHeat):
    """All convection inside one box, as assembly and solve ask for it."""

    PARAMETERS: ClassVar[tuple[str, ...]] = ("factor",)

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
        turned = (_columns(each, variants) for each in (self.factor, self.offset))
        return np.concatenate(
            [
                self._slopes_of_one(rise[:, v : v + 1], reference_k[v : v + 1], *own)
                for v, own in enumerate(zip(*turned, strict=True))
            ],
            axis=1,
        )

    def _slopes_of_one(
        self,
        rise: FloatArray,
        reference: FloatArray,
        factor: FloatArray,
        offset: FloatArray,
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
        difference = rise[self.cell] - self.hat @ (layer + offset)
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
            parts += self._lift_slopes(sign, entering, by, keep_on)
        inverted = layer[:-1] - layer[1:]
        slope = self.conduct_w_per_k * (1.0 + 4.0 / 3.0 * self._overturning(inverted))
        mixing = (slope + self.stirring).ravel()
        parts += [mixing, -mixing]
        return np.concatenate(parts)[:, None]

    def _lift_slopes(
        self, sign: float, entering: FloatArray, by: FloatArray, keep: FloatArray
    ) -> list[FloatArray]:
        """Derivatives of the lifts by cells, own means, facing means and air nodes."""
        n = len(self.air)

        def flip(values: FloatArray) -> FloatArray:
            return values if sign > 0 else values[:, ::-1]

        # Only what heats the air lifts it, only what cools it lets it fall.
        active = np.flatnonzero(sign * entering[:, 0] > 0)
        hat, by = flip(self.hat)[active], by[active]
        by_surface = self._by_surface[:, active]
        picked = (by_surface @ (hat * (sign * entering[active])))[:, :, None]
        kept = flip(keep)
        lifts = march(np.repeat(picked, keep.shape[2], axis=2), kept)
        # What a watt picked up at node i gives at each lift j: products of what is kept.
        passed = passing(kept[:, :, 0])[self._surface_of_entry[active]]
        per_entry = sign * (hat[:, None] @ passed)[:, 0]
        by_cell = np.zeros((len(self.cell), n - 1))
        by_cell[active] = flip(per_entry * by[:, :1])
        kept_by = flip((lifts[:, :, 1:] - lifts[:, :, :1]) / DIFFERENCE_K)
        own = flip(by_surface @ (per_entry * by[:, 1:2])) + kept_by[:, :, 0]
        facing = flip(self._by_side[:, active] @ (per_entry * by[:, 2:3]))
        each = per_entry[:, :, None] * by[:, None, 3:]
        layers = by_surface @ each.reshape(len(each), (n - 1) * n)
        layers = flip(layers.reshape(len(layers), n - 1, n))
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


def _columns(value: FloatArray | float, variants: int) -> FloatArray:
    """Give a parameter variant by variant, each as a column, shape (variants, ..., 1)."""
    array = np.atleast_2d(value)
    return np.broadcast_to(array, (len(array), variants)).T[:, :, None]
