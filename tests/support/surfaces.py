"""The surfaces inside a small box, from its case alone: pieces, extents and films; see `balances`."""

import itertools
import math
from typing import NamedTuple

import numpy as np

from enclosure_check.description.case import Case
from enclosure_check.network.network import Network
from enclosure_check.physics import cavity
from enclosure_check.physics.air import air, pressure_at_altitude
from enclosure_check.physics.bodies import cuboid_film, cuboid_gravity_function_tilted
from enclosure_check.physics.box import box_film, box_geometry
from enclosure_check.physics.plates import fall_length, inclined_parts, inclined_plate
from enclosure_check.physics.smooth import soft_abs

SIGMA = 5.670374419e-8
WALLS = {
    "left": (0, -1),
    "right": (0, 1),
    "front": (1, -1),
    "back": (1, 1),
    "bottom": (2, -1),
    "top": (2, 1),
}
NODES = 8


class Piece(NamedTuple):
    """A cell of a face, or a body: its node, where it is, and its bare area."""

    node: int
    low: tuple[float, ...]
    high: tuple[float, ...]
    bare: float

    @property
    def centre(self) -> np.ndarray:
        return (np.array(self.low) + np.array(self.high)) / 2


class Surface(NamedTuple):
    """What convects as one: its pieces, extent, and what its law needs."""

    name: str
    pieces: list[Piece]
    low: np.ndarray
    high: np.ndarray
    axis: int
    sign: int
    law: dict


class Surfaces:
    """The surfaces inside one case, with their films at given rises of the network's nodes."""

    def __init__(self, case: Case, network: Network, rise: np.ndarray) -> None:
        self.case, self.places, self.rise = case, network.places, rise
        self.ambient_k = float(network.reference_k[0])
        self.pressure = float(pressure_at_altitude(case.surroundings.altitude_m))
        self.up = np.array(case.up)
        self.inside = np.array(case.inside_mm) / 1000
        corners = [self.up * pick for pick in itertools.product(*([0, s] for s in self.inside))]
        heights = [float(corner.sum()) for corner in corners]
        self.floor, self.tall = min(heights), max(heights) - min(heights)
        self.air = rise[self.places.air_nodes]
        self.at = np.linspace(0, self.tall, NODES)
        (self.board,) = case.boards.values()
        self.board_low = np.array(self.board.low_mm) / 1000
        self.board_size = np.array(self.board.size_mm) / 1000
        self.surfaces = [self.wall(name) for name in WALLS]
        self.surfaces += [self.side(name) for name in ("front", "back")]
        self.surfaces += [self.rim(), *(self.part(name) for name in case.parts)]
        self.by_name = {surface.name: surface for surface in self.surfaces}

    def height(self, point: np.ndarray) -> float:
        return float(self.up @ point) - self.floor

    def air_at(self, height: float) -> float:
        return float(np.interp(height, self.at, self.air))

    # Surfaces ------------------------------------------------------------------------------

    def covered(self, low: np.ndarray, high: np.ndarray, host: str, side: str) -> float:
        """Area of a cell of a wall's inside or board's side that parts stand on."""
        total = 0.0
        for part in self.case.parts.values():
            on_wall = part.place == "wall" and part.host == host
            on_board = part.place == "board" and part.host == host and part.side == side
            if on_wall or on_board:
                total += overlap(low, high, *extent(part), WALLS[part.side][0])
        return total

    def cells(self, nodes: np.ndarray, low, size, axis: int, host: str, side: str) -> list[Piece]:
        first, second = (other for other in range(3) if other != axis)
        found = []
        for i, j in np.ndindex(nodes.shape):
            cell_low, cell_high = np.array(low, float), np.array(low, float)
            for along, at, count in ((first, i, nodes.shape[0]), (second, j, nodes.shape[1])):
                cell_low[along] = low[along] + size[along] * at / count
                cell_high[along] = low[along] + size[along] * (at + 1) / count
            area = float(np.prod((cell_high - cell_low)[[first, second]]))
            bare = area - self.covered(cell_low, cell_high, host, side)
            found.append(Piece(int(nodes[i, j]), tuple(cell_low), tuple(cell_high), bare))
        return found

    def plane(self, size: np.ndarray, axis: int, sign: int) -> dict:
        first, second = (other for other in range(3) if other != axis)
        a, b = size[first], size[second]
        fall = float(fall_length(a, b, self.up[first], self.up[second]))
        return {"fall": fall, "span": a * b / (2 * a + 2 * b), "cosine": sign * self.up[axis]}

    def wall(self, name: str) -> Surface:
        axis, sign = WALLS[name]
        low, high = np.zeros(3), self.inside.copy()
        low[axis] = high[axis] = self.inside[axis] if sign > 0 else 0.0
        nodes = self.places.wall_inside[name].cells
        pieces = self.cells(nodes, low, self.inside, axis, name, name)
        law = self.plane(self.inside, axis, -sign)
        first, second = (other for other in range(3) if other != axis)
        law |= {"edges": (self.inside[first], self.inside[second]), "stratified": 1.0}
        return Surface(name, pieces, low, high, axis, -sign, law)

    def side(self, name: str) -> Surface:
        axis, sign = WALLS[name]
        low, high = self.board_low.copy(), self.board_low + self.board_size
        low[axis] = high[axis] = high[axis] if sign > 0 else low[axis]
        nodes = self.places.boards[self.board.name].cells
        pieces = self.cells(nodes, low, self.board_size, axis, self.board.name, name)
        law = self.plane(self.board_size, axis, sign) | {"stratified": 1.0}
        law["kept"] = self.sheltered(2 * axis + (sign > 0), law)
        return Surface(f"board {name}", pieces, low, high, axis, sign, law)

    def in_the_open(self, rise: float):
        """Films of the board as a box with air all round, ten kelvin off its air."""
        shape = box_geometry(self.board_size, self.up, np.ones(6, dtype=bool))
        return shape, box_film(np.full(6, 305.0 + rise), 305.0, 101_325.0, shape).coefficient

    def sheltered(self, face: int, law: dict) -> tuple[float, float]:
        kept = []
        axis = face // 2
        for rise in (10.0, -10.0):
            shape, film = self.in_the_open(rise)
            plates = {}
            for index in (2 * axis, 2 * axis + 1):
                cosine = law["cosine"] if index == face else -law["cosine"]
                plates[index] = float(
                    inclined_plate(
                        rise, 305.0 + rise / 2, 101_325.0, law["fall"], law["span"], cosine
                    ).coefficient
                )
            # What the rim does not take makes up for shelter, as far as there is any.
            over = sum(
                (film[index] - self.rim_film(rise)) * shape.area[index]
                for index in range(6)
                if index // 2 != axis
            )
            lacking = {index: max(plates[index] - film[index], 0.0) for index in plates}
            whole = sum(lacking.values()) * shape.area[face]
            part = min(max(over / whole, 0.0), 1.0) if whole > 0 else 0.0
            kept.append(float((film[face] + part * lacking[face]) / plates[face]))
        return kept[0], kept[1]

    def rim_film(self, rise: float) -> float:
        """Film of the rim: half the two edges of the layers of air on both sides."""
        axis = self.board.axis
        film = self.in_the_open(rise)[1]
        conductivity = float(air(305.0 + rise / 2, 101_325.0).conductivity)
        layers = (film[2 * axis] + film[2 * axis + 1]) / 2
        return 0.54 * conductivity / self.board_size[axis] + float(layers)

    def rim(self) -> Surface:
        nodes = self.places.boards[self.board.name].cells
        axis = self.board.axis
        first, second = (other for other in range(3) if other != axis)
        size, thick = self.board_size, self.board_size[axis]
        pieces = []
        for cell in self.cells(nodes, self.board_low, size, axis, "", ""):
            steps = np.array(cell.high) - np.array(cell.low)
            edge = 0.0
            for along, beside in ((first, second), (second, first)):
                edge += steps[beside] * math.isclose(cell.low[along], self.board_low[along])
                end = self.board_low[along] + size[along]
                edge += steps[beside] * math.isclose(cell.high[along], end)
            low, high = list(cell.low), list(cell.high)
            high[axis] = low[axis] + thick
            if edge > 0:
                pieces.append(Piece(cell.node, tuple(low), tuple(high), edge * thick))
        kept = []
        for rise in (10.0, -10.0):
            shape, _ = self.in_the_open(rise)
            body = shape.body_area, shape.gravity_function
            whole = cuboid_film(rise, 305.0 + rise / 2, 101_325.0, *body)
            kept.append(self.rim_film(rise) / float(whole.coefficient))
        law = {"body": body, "kept": tuple(kept), "fall": thick}
        return Surface("rim", pieces, self.board_low, self.board_low + size, axis, 0, law)

    def part(self, name: str) -> Surface:
        part, (low, high) = self.case.parts[name], extent(self.case.parts[name])
        size, (axis, sign) = high - low, WALLS[part.side]
        foot = float(np.prod(np.delete(size, axis)))
        free = 2 * (size[0] * size[1] + size[1] * size[2] + size[2] * size[0]) - foot
        if part.place == "board":
            law = dict(self.by_plane(part.side))
        else:
            doubled = size.copy()
            doubled[axis] *= 2
            gravity = float(cuboid_gravity_function_tilted(doubled, self.up))
            law = self.plane(size, axis, sign) | {"body": (2 * free, gravity)}
        law |= {"stream": float(np.cbrt(np.prod(size))), "foot": foot}
        node = self.places.parts[name].case
        pieces = [Piece(node, tuple(low), tuple(high), free)]
        return Surface(f"part {name}", pieces, low, high, axis, sign, law)

    def by_plane(self, side: str) -> dict:
        return self.plane(self.board_size, *WALLS[side])

    # Films ---------------------------------------------------------------------------------

    def mean(self, surface: Surface) -> float:
        """Mean of the plate, its cells all of one size; of a rim that of its board."""
        if surface.name == "rim":
            return float(self.rise[self.places.boards[self.board.name].cells].mean())
        return float(np.mean([self.rise[piece.node] for piece in surface.pieces]))

    def ends(self, surface: Surface) -> tuple[float, float]:
        ends = zip(surface.low, surface.high, strict=True)
        heights = [self.height(np.array(corner)) for corner in itertools.product(*ends)]
        return min(heights), max(heights)

    def film(self, surface: Surface) -> float:
        """Free film coefficient of a surface at its mean [W/m2K]."""
        law, mean = surface.law, self.mean(surface)
        low, high = self.ends(surface)
        sampled = [self.air_at(low + (high - low) * (k + 0.5) / 6) for k in range(6)]
        signed = float(np.mean([mean - layer for layer in sampled]))
        size = float(np.mean([soft_abs(mean - layer, 0.01) for layer in sampled]))
        warm, cold = law.get("kept", (1.0, 1.0))
        lean = signed / math.hypot(size, 0.2)
        kept = warm * (0.5 + 0.5 * lean) + cold * (0.5 - 0.5 * lean)
        film_k = self.ambient_k + mean - signed / 2
        if "body" in law:
            return kept * float(cuboid_film(size, film_k, self.pressure, *law["body"]).coefficient)
        properties = air(film_k, self.pressure)
        shape = law["fall"], law["span"], law["cosine"]
        upright = inclined_parts(np.array(size), properties, *shape)[1]
        # Of a face near its air's temperature one half is warmer, the other colder.
        level, around = 0.0, math.hypot(signed, 0.05)
        for half in (1.0, -1.0):
            rise = half * (around + half * signed) / 2
            level = max(level, float(inclined_parts(np.array(rise), properties, *shape)[2]))
        warming = max(self.air_at(high) - self.air_at(low), 0.0) / size
        upright = upright * cavity.stratified_factor(law.get("stratified", 0.0) * warming)
        film = (float(upright) ** 10 + level**10) ** 0.1 * kept
        edges = law.get("edges", (np.inf, np.inf))
        return film * float(cavity.corner_factor(film, properties.conductivity, *edges))


def extent(body) -> tuple[np.ndarray, np.ndarray]:
    """Low and high corner of a part [m]."""
    low = np.array(body.low_mm) / 1000
    return low, low + np.array(body.size_mm) / 1000


def overlap(low, high, other_low, other_high, axis: int) -> float:
    """Area two rectangles across an axis have in common [m2]."""
    area = 1.0
    for along in range(3):
        if along != axis:
            shared = min(high[along], other_high[along]) - max(low[along], other_low[along])
            area *= max(shared, 0.0)
    return area


def share_bare(piece: Piece, axis: int) -> float:
    """Share of a cell that nothing covers."""
    sides = np.delete(np.array(piece.high) - np.array(piece.low), axis)
    return float(piece.bare / np.prod(sides))
