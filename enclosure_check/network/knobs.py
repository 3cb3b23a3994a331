"""Knobs of a network: numbers that change many links alike, for uncertainty and sensitivities.

A heat rate is proportional to its conductance, so one factor on any set of links stands for most
that may be uncertain about them, whatever their kind: the balance changes by what flows through
them. What is no factor has a knob of its own: films inside (what streams carry follows them),
emissivities inside (reflections follow them), powers and given temperatures.
"""

from collections.abc import Callable
from functools import cached_property
from typing import Any, ClassVar, Self

import numpy as np

from enclosure_check.network.inside_air import InsideAir
from enclosure_check.network.links import (
    FloatArray,
    IntArray,
    LinkKind,
    PatchExchange,
    Radiation,
)
from enclosure_check.network.network import Network
from enclosure_check.network.site import AIR_SHARES
from enclosure_check.records import dataclass, replace

# Steps of the differenced derivatives by a factor on films [-], and by the air's temperature [K].
_STEP, _STEP_K = 1e-5, 1e-3
# An emissivity moved beyond these is held there; they keep a surface grey. [-]
LEAST_EMISSIVITY, LARGEST_EMISSIVITY = 1e-6, 1.0


@dataclass(frozen=True, eq=False)
class Scaled:
    """Links of another kind, each passing so many times its heat."""

    kind: LinkKind
    factor: FloatArray
    """Shape (m, v)."""

    PARAMETERS: ClassVar[tuple[str, ...]] = ()

    @property
    def a(self) -> IntArray:
        """Node the heat leaves, shape (m,)."""
        return self.kind.a

    @property
    def b(self) -> IntArray:
        """Node the heat enters, shape (m,)."""
        return self.kind.b

    @property
    def label(self) -> IntArray:
        """Number of each link's label in the network's table, shape (m,)."""
        return self.kind.label

    @property
    def pattern(self) -> tuple[IntArray, IntArray]:
        """Link and node of every derivative, shapes (d,)."""
        return self.kind.pattern

    def evaluate(self, rise: FloatArray, reference_k: FloatArray) -> FloatArray:
        """Heat rate from ``a`` to ``b`` [W], shape (m, v)."""
        return self.factor * self.kind.evaluate(rise, reference_k)

    def slopes(self, rise: FloatArray, reference_k: FloatArray) -> FloatArray:
        """Derivatives of `evaluate` in the order of `pattern` [W/K], shape (d, v)."""
        return self.factor[self.kind.pattern[0]] * self.kind.slopes(rise, reference_k)

    def nominal(self, reference_k: FloatArray) -> FloatArray:
        """Factors of a linear link that behaves so at a nominal rise [W/K], shape (d, 1)."""
        return self.factor[self.kind.pattern[0], :1] * self.kind.nominal(reference_k)

    def with_parameter(self, name: str, value: FloatArray) -> Self:
        """Give nothing: it has no parameters."""
        raise KeyError(f"scaled links have no parameter {name!r}")

    def stirred(self, share: float) -> "Scaled":
        """Give the links with the inside air stirred by a share of what its films carry."""
        return replace(self, kind=self.kind.stirred(share))


@dataclass(frozen=True, eq=False)
class Emitters:
    """Which finish every radiating link belongs to, and what patches on the way follow.

    ``finish`` is the number of each radiation link's finish, -1 without, shape (m,); ``mean_a``
    and ``mean_b`` the share each finish has in the mean emissivity of the two patches of each
    exchange, shape (finishes, exchanges).
    """

    finish: IntArray
    mean_a: FloatArray
    mean_b: FloatArray


@dataclass(frozen=True, eq=False)
class Knobs:
    """The knobs of a network, numbered: links first, then the others in the order given here.

    Attributes
    ----------
    network
        The network they turn, one variant.
    link
        For each kind the knob of every link, -1 without; shapes (m,).
    count
        How many link knobs there are.
    parameter
        Kind of links, by number, and the parameter of it that each parameter knob turns.
    films, offsets
        What each film knob turns inside, and how far: factors on the films of surfaces, shape
        (films, s), and how much warmer the air at each air node is to films [K], shape (films, n).
    emitters
        What each finish knob turns.
    source
        Label whose sources each source knob turns, shape (sources,).
    node
        Given node that each temperature knob turns, shape (nodes,).

    The last knob is the temperature of the surrounding air, with all that is given taken along.
    """

    network: Network
    link: tuple[IntArray, ...]
    count: int
    parameter: tuple[tuple[int, str], ...]
    films: FloatArray
    offsets: FloatArray
    emitters: Emitters
    source: IntArray
    node: IntArray

    @cached_property
    def starts(self) -> tuple[int, int, int, int, int, int]:
        """Where parameters, films, finishes, sources and given nodes start; how many all are."""
        films = self.count + len(self.parameter)
        finishes = films + len(self.films)
        sources = finishes + len(self.emitters.mean_a)
        nodes = sources + len(self.source)
        return self.count, films, finishes, sources, nodes, nodes + len(self.node) + 1

    # Gradient ----------------------------------------------------------------------------

    def gradient(
        self,
        rise: FloatArray,
        weight: FloatArray,
        derivatives: FloatArray,
        heat: FloatArray | None = None,
    ) -> FloatArray:
        """Derivatives of temperatures by every knob, shape (knobs, t).

        By factors as per 1 (100 %), by emissivities as per 1, by temperatures as per K.

        Parameters
        ----------
        rise
            Rises of all nodes at the steady state [K], shape (n, 1).
        weight
            Adjoint weights of the temperatures, see `solve.adjoint`, shape (n, t).
        derivatives
            Of all links there, kinds one after the other in the order of their patterns, (d,).
        heat
            Through all links there, where it is known [W], shape (links,).
        """
        network, size = self.network, self.network.size
        parameters, films, finishes, sources, nodes, count = self.starts
        places: list[IntArray] = []
        amounts: list[FloatArray] = []

        def push(knob: IntArray, first: int, kind: LinkKind, heat: FloatArray) -> None:
            kept = knob >= 0
            row, heat = (knob[kept] + first) * size, heat[kept]
            places.extend((row + kind.a[kept], row + kind.b[kept]))
            amounts.extend((heat, -heat))

        heats = network.heat(rise) if heat is None else heat[:, None]
        ends = np.cumsum([len(kind.a) for kind in network.kinds])[:-1]
        by_kind = np.split(heats[:, 0], ends)
        for knob, kind, heat in zip(self.link, network.kinds, by_kind, strict=True):
            push(knob, 0, kind, heat)
            if isinstance(kind, InsideAir):
                for index, change in enumerate(self._by_films(kind, rise)):
                    push(_one(kind), films + index, kind, change)
            elif isinstance(kind, Radiation):
                by = kind.heat_by_parameter(rise[kind.stencil], network.reference_k, "emissivity")
                push(self.emitters.finish, finishes, kind, by[:, 0])
            elif isinstance(kind, PatchExchange):
                for index, change in enumerate(self._by_mean_emissivity(kind, rise)):
                    push(_one(kind), finishes + index, kind, change)
        for index, (number, name) in enumerate(self.parameter):
            kind = network.kinds[number]
            more = kind.with_parameter(name, getattr(kind, name) * (1.0 + _STEP))
            change = (more.evaluate(rise, network.reference_k)[:, 0] - by_kind[number]) / _STEP
            push(_one(kind), parameters + index, kind, change)
        put_in = network.sources.heat(rise[network.sources.node], network.reference_k)[:, 0]
        at = np.full(len(network.labels), -1, dtype=np.intp)
        at[self.source] = np.arange(len(self.source))
        own = at[network.sources.label]
        kept = own >= 0
        places.append((sources + own[kept]) * size + network.sources.node[kept])
        amounts.append(-put_in[kept])
        pushed = np.bincount(np.concatenate(places), np.concatenate(amounts), count * size)
        gradient = -(pushed.reshape(count, size) @ weight)
        gradient[nodes:-1] = self._by_given(weight, derivatives)
        gradient[-1] = 1.0 - self._by_reference(rise, heats) @ weight
        return np.asarray(gradient)

    def _by_reference(self, rise: FloatArray, heats: FloatArray) -> FloatArray:
        """Imbalance by the temperature all rises count from [W/K], shape (n,)."""
        warmer = replace(self.network, reference_k=self.network.reference_k + _STEP_K)
        change = warmer.imbalance(rise) - self.network.imbalance(rise, heats)
        return np.asarray(change[:, 0] / _STEP_K)

    def _by_films(self, kind: InsideAir, rise: FloatArray) -> FloatArray:
        """Heat by each film knob [W], shape (films, m)."""
        still = np.zeros(len(self.films) + 1)
        still[1:] = _STEP
        films, offsets = (
            np.concatenate((turned[:1], turned)).T * still for turned in (self.films, self.offsets)
        )
        factor = kind.factor * (1.0 + films)
        many = replace(kind, factor=factor, offset=offsets)
        copies = np.repeat(rise, factor.shape[1], axis=1)
        heat = many.evaluate(copies, np.repeat(self.network.reference_k, factor.shape[1]))
        return np.asarray((heat[:, 1:] - heat[:, :1]).T / _STEP)

    def _by_mean_emissivity(self, kind: PatchExchange, rise: FloatArray) -> FloatArray:
        """Heat by each finish through the mean emissivities of patches [W], shape (finishes, m)."""
        own, reference = rise[kind.stencil], self.network.reference_k
        by_a, by_b = (
            kind.heat_by_parameter(own, reference, name)[:, 0]
            for name in ("emissivity_a", "emissivity_b")
        )
        return np.asarray(self.emitters.mean_a * by_a + self.emitters.mean_b * by_b)

    def _by_given(self, weight: FloatArray, derivatives: FloatArray) -> FloatArray:
        """Derivatives by given temperatures [K/K], shape (nodes, t)."""
        size = self.network.size
        row = np.full(size, -1, dtype=np.intp)
        row[self.node] = np.arange(len(self.node))
        pushed = np.zeros(len(self.node) * size)
        start = 0
        for kind in self.network.kinds:
            link, at = kind.pattern
            kept = np.flatnonzero(row[at] >= 0)
            slopes = derivatives[start + kept]
            start += len(at)
            if len(kept):
                flat, link = row[at[kept]] * size, link[kept]
                pushed += np.bincount(flat + kind.a[link], slopes, pushed.size)
                pushed -= np.bincount(flat + kind.b[link], slopes, pushed.size)
        return np.asarray(-pushed.reshape(len(self.node), size) @ weight)

    def readings(self, nodes: IntArray, gradient: FloatArray) -> FloatArray:
        """What to add to derivatives of air nodes' temperatures for those of their readings.

        An offset of the air that films see is how far off a reading of the air is, whatever the
        balance makes of it: a reading's derivative is that of the offset itself. Zero for all else.

        Parameters
        ----------
        nodes
            The nodes whose temperatures are asked for, shape (t,).
        gradient
            Derivatives of their temperatures, see `gradient`, shape (knobs, t).
        """
        added = np.zeros_like(gradient)
        kind = next((kind for kind in self.network.kinds if isinstance(kind, InsideAir)), None)
        offset = np.flatnonzero(self.offsets.any(axis=1))
        if kind is not None and len(offset):
            air = self.network.shown(nodes)[kind.air]
            # Their mean is a node of the balance.
            air[:, nodes == self.network.places.air] = AIR_SHARES[:, None]
            rows = self.starts[1] + offset
            added[rows] = self.offsets[offset] @ air - gradient[rows] * air.sum(axis=0)
        return added

    # Moved networks ----------------------------------------------------------------------

    def moved(self, amounts: FloatArray) -> Network:
        """Give the network with its knobs turned, for v variants.

        Parameters
        ----------
        amounts
            By knob and variant, shape (knobs, v). Factors become ``exp(amount)``, which keeps
            them positive and is 1 + amount to first order; powers ``1 + amount``; emissivities
            and given temperatures change by the amount itself, emissivities within 0 to 1.
        """
        network = self.network
        parameters, films, finishes, sources, nodes, _ = self.starts
        variants = amounts.shape[1]
        padded = np.concatenate((amounts[: self.count], np.zeros((1, variants))))
        by_film = amounts[films:finishes]
        by_finish = np.concatenate((amounts[finishes:sources], np.zeros((1, variants))))
        moved: dict[type, Callable[[Any], LinkKind]] = {
            InsideAir: lambda kind: replace(
                kind,
                factor=kind.factor * np.exp(self.films.T @ by_film),
                offset=self.offsets.T @ by_film,
            ),
            Radiation: lambda kind: kind.with_parameter(
                "emissivity", _grey(kind.emissivity + by_finish[self.emitters.finish])
            ),
            PatchExchange: lambda kind: replace(
                kind,
                emissivity_a=_grey(kind.emissivity_a + self.emitters.mean_a.T @ by_finish[:-1]),
                emissivity_b=_grey(kind.emissivity_b + self.emitters.mean_b.T @ by_finish[:-1]),
            ),
        }
        own = list(network.kinds)
        for amount, (number, name) in zip(amounts[parameters:films], self.parameter, strict=True):
            value = getattr(own[number], name) * np.exp(amount)
            own[number] = own[number].with_parameter(name, value)
        kinds: tuple[LinkKind, ...] = tuple(
            Scaled(moved.get(type(kind), _as_it_is)(kind), np.exp(padded[knob]))
            for knob, kind in zip(self.link, own, strict=True)
        )
        by_label = np.ones((len(network.labels), variants))
        by_label[self.source] += amounts[sources:nodes]
        fixed_rise = np.repeat(network.fixed_rise, variants, axis=1)
        fixed_rise[self.node] += amounts[nodes:-1]
        return replace(
            network,
            kinds=kinds,
            reference_k=network.reference_k + amounts[-1],
            fixed_rise=fixed_rise,
            sources=replace(
                network.sources,
                power=network.sources.power * by_label[network.sources.label],
            ),
        )


def _grey(emissivity: FloatArray) -> FloatArray:
    return np.clip(emissivity, LEAST_EMISSIVITY, LARGEST_EMISSIVITY)


def _one(kind: LinkKind) -> IntArray:
    """The same knob for every link."""
    return np.zeros(len(kind.a), dtype=np.intp)


def _as_it_is(kind: LinkKind) -> LinkKind:
    return kind


def emitters_of(network: Network, finish_of_label: IntArray, finishes: int) -> Emitters:
    """Find out what follows the emissivity of each finish.

    Parameters
    ----------
    network
        The network, one variant.
    finish_of_label
        Number of the finish of the radiation of each label, -1 without, shape (labels,).
    finishes
        How many there are.
    """
    radiation = next((kind for kind in network.kinds if isinstance(kind, Radiation)), None)
    exchange = next((kind for kind in network.kinds if isinstance(kind, PatchExchange)), None)
    if radiation is None or exchange is None:
        none = np.zeros((finishes, 0))
        own = np.zeros(0, dtype=np.intp)
        if radiation is not None:
            own = finish_of_label[radiation.label]
        return Emitters(own, none, none)
    finish = finish_of_label[radiation.label]
    # What lies on patches: links from surfaces to irradiation nodes.
    patch_of = np.full(network.size, -1, dtype=np.intp)
    irradiation = np.concatenate((exchange.a, exchange.b))
    patch_of[irradiation] = irradiation
    on_patch = patch_of[radiation.b] >= 0
    seen, emissivity = radiation.area[on_patch, 0], radiation.emissivity[on_patch, 0]
    patch = radiation.b[on_patch]
    emitted = np.bincount(patch, seen * emissivity, network.size)
    mean = np.zeros(network.size)
    mean[exchange.a], mean[exchange.b] = exchange.emissivity_a[:, 0], exchange.emissivity_b[:, 0]
    area = np.where(mean > 0, emitted / np.where(mean > 0, mean, 1.0), np.inf)
    share = np.zeros((finishes, network.size))
    own = finish[on_patch]
    kept = own >= 0
    np.add.at(share, (own[kept], patch[kept]), seen[kept])
    share /= np.maximum(area, 1e-300)
    # The emission of a patch is the mean of what lies on it, weighted by emissivity.
    emission_of = np.full(network.size, -1, dtype=np.intp)
    emission_of[exchange.a], emission_of[exchange.b] = exchange.c, exchange.d
    place = emission_of[patch] * network.size + radiation.a[on_patch]
    order = np.argsort(place, kind="stable")
    kept_mean = radiation.b == network.nowhere
    wanted = radiation.x[kept_mean] * network.size + radiation.y[kept_mean]
    found = np.searchsorted(place[order], wanted)
    found = order[np.minimum(found, len(order) - 1)] if len(order) else found
    finish = finish.copy()
    if len(order):
        finish[kept_mean] = np.where(place[found] == wanted, own[found], -1)
    return Emitters(finish, share[:, exchange.a], share[:, exchange.b])
