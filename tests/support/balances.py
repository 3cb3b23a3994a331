"""Heat rates of a small case, written down a second time, with plain loops over named nodes.

Not by the network: from the case alone, one piece of surface at a time. Laws come from `physics`,
how a wall or board is divided into cells is taken from the network, all else is reckoned here.
The case has one board parallel to the back wall and parts on it and on walls. Rises in kelvin over
the surrounding air; heat as what leaves each node [W], by what it does.
"""

import itertools
import math
from collections import defaultdict

import numpy as np
from support.surfaces import NODES, SIGMA, WALLS, Piece, Surface, Surfaces, overlap, share_bare

from enclosure_check.description.case import Case
from enclosure_check.network.network import Network
from enclosure_check.physics import cavity
from enclosure_check.physics.air import GRAVITY, air
from enclosure_check.physics.rectangles import Boxes, Rectangles
from enclosure_check.physics.view_factors import exchange_areas


class Balances(Surfaces):
    """Heat rates inside one case at given rises of the network's nodes."""

    def __init__(self, case: Case, network: Network, rise: np.ndarray) -> None:
        super().__init__(case, network, rise)
        self.leaves: dict[str, dict[int, float]] = defaultdict(lambda: defaultdict(float))

    def give(self, role: str, one: int, other: int, watts: float) -> None:
        self.leaves[role][one] += watts
        self.leaves[role][other] -= watts

    # Gaps ----------------------------------------------------------------------------------

    def gaps(self) -> list[tuple[str, str, list[tuple[np.ndarray, np.ndarray]], int]]:
        """Facing faces: lower, upper, rectangles of the column, its axis."""
        zero, whole = np.zeros(3), self.inside
        low, high = self.board_low, self.board_low + self.board_size
        around = []
        for x0, x1 in ((0.0, low[0]), (low[0], high[0]), (high[0], whole[0])):
            for z0, z1 in ((0.0, low[2]), (low[2], high[2]), (high[2], whole[2])):
                if (x0, z0) != (low[0], low[2]):
                    around.append((np.array([x0, 0, z0]), np.array([x1, 0, z1])))
        return [
            ("left", "right", [(zero, whole)], 0),
            ("front", "board front", [(low, high)], 1),
            ("board back", "back", [(low, high)], 1),
            ("front", "back", around, 1),
            ("bottom", "top", [(zero, whole)], 2),
        ]

    def exchange(self, one: Surface, other: Surface, around: float, shape: tuple[float, ...]):
        """Share kept to the air and what goes straight, by the law of gaps."""
        a, b = self.mean(one), self.mean(other)
        film_k = self.ambient_k + (a + b) / 2
        pressure, films = self.pressure, (np.array(self.film(one)), np.array(self.film(other)))
        differences = np.array(a - around), np.array(b - around)
        return cavity.gap_exchange(*films, *differences, np.array(film_k), pressure, *shape, 0.0)

    def inside_air(self) -> None:
        """All convection inside: films, gaps, lifts and mixing."""
        left = {surface.name: [piece.bare for piece in surface.pieces] for surface in self.surfaces}
        enters: dict[str, list[tuple[Piece, float]]] = defaultdict(list)

        def to_air(surface: Surface, index: int, area: float, share: float) -> None:
            piece = surface.pieces[index]
            area = min(area, left[surface.name][index])
            left[surface.name][index] -= area
            over = self.rise[piece.node] - self.air_at(self.height(piece.centre))
            enters[surface.name].append((piece, share * self.film(surface) * area * over))

        for lower, upper, rectangles, axis in self.gaps():
            one, other = self.by_name[lower], self.by_name[upper]
            low = np.min([row[0] for row in rectangles], axis=0)
            high = np.max([row[1] for row in rectangles], axis=0)
            width = other.low[axis] - one.low[axis]
            shape = (width, *self.channel(high - low, axis, width), self.up[axis])
            low[axis] = high[axis] = (other.low[axis] + one.low[axis]) / 2
            corners = itertools.product(*zip(low, high, strict=True))
            heights = [self.height(np.array(corner)) for corner in corners]
            bottom, rise = min(heights), max(heights) - min(heights)
            around = np.mean([self.air_at(bottom + rise * (k + 0.5) / 6) for k in range(6)])
            found = self.exchange(one, other, float(around), shape)
            for face in (one, other):
                for index, piece in enumerate(face.pieces):
                    inside = sum(overlap(piece.low, piece.high, *row, axis) for row in rectangles)
                    to_air(face, index, inside * share_bare(piece, axis), float(found.share))
            for a, b in itertools.product(one.pieces, other.pieces):
                low_, high_ = np.maximum(a.low, b.low), np.minimum(a.high, b.high)
                if np.all(np.delete(high_ - low_, axis) > 0):
                    area = sum(overlap(low_, high_, *row, axis) for row in rectangles)
                    area *= share_bare(a, axis) * share_bare(b, axis)
                    watts = float(found.straight) * area * (self.rise[a.node] - self.rise[b.node])
                    self.give("straight", a.node, b.node, watts)
        for name, part in self.case.parts.items():
            self.top(self.by_name[f"part {name}"], part.side, to_air)
        for surface in self.surfaces:
            for index in range(len(surface.pieces)):
                to_air(surface, index, left[surface.name][index], 1.0)
        for surface in self.surfaces:
            self.streams(surface, enters[surface.name])
        self.mixing()

    def channel(self, size: np.ndarray, axis: int, width: float) -> tuple[float, float]:
        first, second = (other for other in range(3) if other != axis)
        a, b = size[first], size[second]
        g_a, g_b, across = abs(self.up[first]), abs(self.up[second]), abs(self.up[axis])
        along = math.hypot(g_a, g_b)
        length = a * b / (a + b) * across
        if along > 1e-9:
            length += a * b / (a * g_b + b * g_a) * along * along
        return length, along + across * width / length

    def top(self, surface: Surface, side: str, to_air) -> None:
        """The top of a part, which looks at the wall across the air."""
        axis, sign = WALLS[side]
        wall = self.by_name[side]
        (piece,) = surface.pieces
        at = surface.high[axis] if sign > 0 else surface.low[axis]
        width = abs(wall.low[axis] - at)
        length, foot = surface.law["fall"], surface.law["foot"]
        along = float(np.linalg.norm(np.delete(self.up, axis)))
        shape = (width, length, along + abs(self.up[axis]) * width / length, sign * self.up[axis])
        found = self.exchange(surface, wall, self.air_at(self.height(piece.centre)), shape)
        to_air(surface, 0, foot, float(found.share))
        low, high = surface.low, surface.high
        shared = [overlap(each.low, each.high, low, high, axis) for each in wall.pieces]
        for each, area in zip(wall.pieces, shared, strict=True):
            drop = self.rise[piece.node] - self.rise[each.node]
            if area > 0:
                part = foot * area / sum(shared)
                self.give("straight", piece.node, each.node, float(found.straight) * part * drop)

    def streams(self, surface: Surface, enters: list[tuple[Piece, float]]) -> None:
        nodes, step = self.places.air_nodes, self.tall / (NODES - 1)
        rising, falling = np.zeros((2, NODES))
        for piece, watts in enters:
            place = self.height(piece.centre) / step
            below = min(int(place), NODES - 2)
            for node, share in ((below, 1 - place + below), (below + 1, place - below)):
                self.give("film", piece.node, int(nodes[node]), watts * share)
                rising[node] += max(watts, 0.0) * share
                falling[node] += max(-watts, 0.0) * share
        low, high = self.ends(surface)
        length = surface.law.get("stream", surface.law["fall"])
        wide = math.sqrt(sum(piece.bare for piece in surface.pieces))
        mean, carried = self.mean(surface), 0.0
        for j in range(NODES - 1):
            decay = cavity.plume_decay(self.at[j + 1] - high, length, wide)
            warming = self.air[j + 1] - self.air[j]
            kept = float(cavity.stream_retention(mean, self.air[j + 1], warming, decay))
            carried = (carried + rising[j]) * kept
            self.give("lift", int(nodes[j]), int(nodes[j + 1]), carried)
        carried = 0.0
        for j in range(NODES - 1, 0, -1):
            decay = cavity.plume_decay(low - self.at[j - 1], length, wide)
            warming = self.air[j] - self.air[j - 1]
            kept = float(cavity.stream_retention(-mean, -self.air[j - 1], warming, decay))
            carried = (carried + falling[j]) * kept
            # Cold carried down is heat carried up.
            self.give("lift", int(nodes[j - 1]), int(nodes[j]), carried)

    def mixing(self) -> None:
        step = self.tall / (NODES - 1)
        section = float(np.prod(self.inside)) / self.tall
        conducts = float(air(self.ambient_k, self.pressure).conductivity) * section / step
        at_300 = air(300.0, self.pressure)
        for j in range(NODES - 1):
            down = self.air[j] - self.air[j + 1]
            rayleigh = GRAVITY / 300 * max(down, 0.0) * step**3
            rayleigh *= float(at_300.prandtl / at_300.kinematic_viscosity**2)
            watts = conducts * (1 + (rayleigh / 5830) ** (1 / 3)) * down
            nodes = self.places.air_nodes
            self.give("mixing", int(nodes[j]), int(nodes[j + 1]), watts)

    # Radiation -----------------------------------------------------------------------------

    def net_radiation(self) -> dict[int, float]:
        """What each surface gives to radiation, by its node, at balanced radiosities [W]."""
        faces = [self.by_name[name] for name in (*WALLS, "board front", "board back")]
        rim = {piece.node: piece.bare for piece in self.by_name["rim"].pieces}
        rectangles, rows = [], []
        for face in faces:
            flat = [other for other in range(3) if other != face.axis]
            for piece in face.pieces:
                low, high = (np.array(corner)[flat] for corner in (piece.low, piece.high))
                rectangles.append((face.axis, face.sign, face.low[face.axis], low, high))
                # Half of a board's rim radiates with either side.
                area = piece.bare + rim.get(piece.node, 0.0) / 2
                rows.append([(piece.node, area, self.finish(face.name))])
                # What stands on a cell radiates with it.
                for name, part in self.case.parts.items():
                    (body,) = self.by_name[f"part {name}"].pieces
                    at = body.centre
                    over = overlap(piece.low, piece.high, at - 1e-9, at + 1e-9, face.axis) > 0
                    if self.host_face(part) == face.name and over:
                        rows[-1].append((body.node, body.bare, part.finish.emissivity))
        axis, sign, at, low, high = (np.array(column) for column in zip(*rectangles, strict=True))
        board = self.board_low[None], (self.board_low + self.board_size)[None]
        exchange = exchange_areas(Rectangles(axis, sign, at, low, high), Boxes(*board))
        total = exchange.sum(axis=1)
        count = len(rows)
        sent, grey = np.zeros((2, count))
        for index, each in enumerate(rows):
            # What stands proud of a cell sees no more than its outline does.
            seen = min(1.0, total[index] / sum(area for _, area, _ in each))
            rows[index] = [(node, area * seen, e) for node, area, e in each]
            for node, area, e in rows[index]:
                sent[index] += e * area * SIGMA * (self.ambient_k + self.rise[node]) ** 4
                grey[index] += e * area
        # Radiosity J = (1 - e) H + e E of irradiation H, with A H = sum of X J.
        sent, e = sent / total, grey / total
        irradiation = np.linalg.solve(np.diag(total) - exchange * (1 - e), exchange @ sent)
        leaves: dict[int, float] = defaultdict(float)
        for index, each in enumerate(rows):
            for node, area, own in each:
                black = SIGMA * (self.ambient_k + self.rise[node]) ** 4
                leaves[node] += own * area * (black - irradiation[index])
        return leaves

    def finish(self, face: str) -> float:
        if face.startswith("board"):
            return self.board.finish.emissivity
        return next(
            wall.finish_inside.emissivity for wall in self.case.walls.values() if wall.name == face
        )

    def host_face(self, part) -> str:
        if part.place == "board":
            return f"board {part.side}"
        axis, sign = WALLS[part.side]
        return next(name for name, value in WALLS.items() if value == (axis, -sign))


def cells_spreading(
    plate: tuple[float, float],
    counts: tuple[int, int],
    sheet: float,
    low: tuple[float, float],
    size: tuple[float, float],
) -> float:
    """What equal cells tell of a source's mean rise over its plate's, per watt [K/W].

    By their conduction matrix, solved; two films of 10 W/m2K, as everywhere for spreading.
    """
    n, m = counts
    steps = plate[0] / n, plate[1] / m
    matrix = np.zeros((n * m, n * m))
    share = np.zeros(n * m)
    for i in range(n):
        for j in range(m):
            own = i * m + j
            matrix[own, own] += 20.0 * steps[0] * steps[1]
            for other, along, inside in (
                (own + m, sheet * steps[1] / steps[0], i + 1 < n),
                (own + 1, sheet * steps[0] / steps[1], j + 1 < m),
            ):
                if inside:
                    matrix[own, own] += along
                    matrix[other, other] += along
                    matrix[own, other] -= along
                    matrix[other, own] -= along
            share[own] = taken((i, j), counts, steps, low, size)
    rise = np.linalg.solve(matrix, share)
    return float(share @ rise - 1.0 / (20.0 * plate[0] * plate[1]))


def taken(
    place: tuple[int, int],
    counts: tuple[int, int],
    steps: tuple[float, float],
    low: tuple[float, float],
    size: tuple[float, float],
) -> float:
    """Share of a source that a cell takes: of its area, a twelfth passed to and from either side."""
    share = 1.0
    for at, count, step, start, extent in zip(place, counts, steps, low, size, strict=True):

        def lies(row: int, step=step, start=start, extent=extent) -> float:
            shared = min((row + 1) * step, start + extent) - max(row * step, start)
            return max(shared, 0.0) / extent

        sides = [row for row in (at - 1, at + 1) if 0 <= row < count]
        share *= lies(at) + sum(lies(row) - lies(at) for row in sides) / 12
    return share
