"""Knobs of a network as they are found, and what turns them."""

from collections.abc import Iterator

import numpy as np

from enclosure_check.description.frames import Vector
from enclosure_check.findings.solved import Solved
from enclosure_check.network.inside_air import InsideAir
from enclosure_check.network.knobs import Knobs, emitters_of
from enclosure_check.network.links import Conduction, FloatArray, IntArray, LinkLabel
from enclosure_check.network.spots import FELT
from enclosure_check.network.units import kelvin
from enclosure_check.physics.air import air, pressure_at_altitude
from enclosure_check.records import dataclass, field

Key = tuple[str, ...]
# Roles of links that carry nothing uncertain: balances of means, traces, and the molecular
# conduction of air between its layers.
EXACT_ROLES = frozenset({"mean", "trace", "mixing"})


@dataclass
class Turned:
    """Knobs that a quantity turns, by the sort of knob and their number there."""

    family: str
    name: str
    value: float | None
    effects: list[tuple[str, int, float]] = field(default_factory=list)


class Turns:
    """Knobs of a solved case's network as they are found, and what turns them."""

    def __init__(self, solved: Solved) -> None:
        self.solved, self.case, self.network = solved, solved.case, solved.network
        self.found: dict[Key, Turned] = {}
        self.count = 0
        self.link = [np.full(len(kind.a), -1, dtype=np.intp) for kind in self.network.kinds]
        self.parameter: list[tuple[int, str]] = []
        self.inside: list[tuple[FloatArray, FloatArray]] = []
        """Film knobs: see `Knobs.films` and ``offsets``."""
        ends = np.cumsum([len(kind.a) for kind in self.network.kinds])[:-1]
        self.heat: list[FloatArray] = np.split(solved.heat_w, ends)
        """Through the links of each kind [W], shapes (m,)."""
        self.finishes: dict[str, int] = {}
        self.place = {label: index for index, label in enumerate(self.network.labels)}
        self.finish_of_label = np.full(len(self.network.labels), -1, dtype=np.intp)
        self.source: list[int] = []
        self.node: list[int] = []
        self.spread: dict[str, list[tuple[tuple[Vector, Vector], int, float]]] = {}
        """Contacts, by their plate: foot [m], knob and resistance [K/W]."""
        around = self.case.surroundings
        pressure = float(pressure_at_altitude(around.altitude_m))
        self.air_conductivity = float(air(kelvin(around.air_c), pressure).conductivity)

    def turn(
        self,
        key: Key,
        family: str,
        sort: str,
        number: int,
        share: float = 1.0,
        name: str = "",
        value: float | None = None,
    ) -> None:
        """Let a quantity turn a knob."""
        if share:
            own = self.found.setdefault(key, Turned(family, name, value))
            own.effects.append((sort, number, share))

    def knob(self, kind: int, links: IntArray) -> int:
        """Give a new knob on some links of a kind."""
        self.link[kind][links] = self.count
        self.count += 1
        return self.count - 1

    def turn_film(
        self,
        key: Key,
        family: str,
        kind: InsideAir,
        *,
        films: FloatArray | None = None,
        offsets: FloatArray | None = None,
    ) -> None:
        """Let a quantity turn a new film knob; see `Knobs.films` for what it turns."""
        if films is None:
            films = np.zeros(len(kind.surfaces.node))
        if offsets is None:
            offsets = np.zeros(len(kind.air))
        self.inside.append((films, offsets))
        self.turn(key, family, "film", len(self.inside) - 1)

    def knobs_by_label(self, kind: int) -> Iterator[tuple[LinkLabel, int, float]]:
        """Give every label of a kind with a new knob on its links, and their conductance."""
        links = self.network.kinds[kind]
        labels = links.label
        present = np.flatnonzero(np.bincount(labels, minlength=len(self.network.labels)))
        knob_of = np.full(len(self.network.labels), -1, dtype=np.intp)
        for index in present.tolist():
            label = self.network.labels[index]
            if label.role not in EXACT_ROLES:
                knob_of[index] = self.count
                self.count += 1
        self.link[kind] = knob_of[labels]
        weights = None
        if isinstance(links, Conduction):
            # Without the heat that contacts take from each other, which follows other nodes.
            weights = np.where(links.x == links.a, links.conductance[:, 0], 0.0)
        total = np.bincount(labels, weights, len(self.network.labels)).astype(np.float64)
        for index in present.tolist():
            if knob_of[index] >= 0:
                owner, role = label = self.network.labels[index]
                # What is felt of a contact goes with its heat.
                own = self.place[LinkLabel(owner, role.removesuffix(FELT))]
                yield label, int(knob_of[index]), float(total[own])

    def knobs(self) -> Knobs:
        """Give the knobs found."""
        nothing = [np.zeros((0, 0))] * 2
        films, offsets = [np.stack(each) for each in zip(*self.inside, strict=True)] or nothing
        return Knobs(
            self.network,
            tuple(self.link),
            self.count,
            tuple(self.parameter),
            films,
            offsets,
            emitters_of(self.network, self.finish_of_label, len(self.finishes)),
            np.array(self.source, dtype=np.intp),
            np.array(self.node, dtype=np.intp),
        )
