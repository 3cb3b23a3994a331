"""Builds the air inside: its nodes along gravity, the films, gaps and streams of every surface."""

from collections.abc import Hashable
from functools import lru_cache
from typing import Any

import numpy as np
from numpy.typing import ArrayLike

from enclosure_check.description.frames import Vector
from enclosure_check.network.air_films import Film, Top
from enclosure_check.network.air_records import Pairs, Surfaces
from enclosure_check.network.board_films import board_shelter, rim_film
from enclosure_check.network.builder import PlaneFace
from enclosure_check.network.columns import Column, Face, facing_at, find_columns
from enclosure_check.network.grid import PlateGrid
from enclosure_check.network.inside_air import InsideAir
from enclosure_check.network.links import FloatArray, IntArray
from enclosure_check.network.network import PlateNodes
from enclosure_check.physics.air import air
from enclosure_check.physics.cavity import plume_decay
from enclosure_check.records import dataclass, field

# Air nodes along gravity. Enough for the profile that the numerical experiments show; more change
# their totals by less than 4 %.
AIR_NODES = 8
# Heights on a surface at which its mean film looks at the air.
SAMPLES = 6


@dataclass
class AirSite:
    """Films being collected; `build` makes the links of them."""

    up: Vector
    inside: Vector
    films: list[Film] = field(default_factory=list)
    faces: list[Face] = field(default_factory=list)
    tops: list[Top] = field(default_factory=list)

    @property
    def bottom(self) -> float:
        """Height of the lowest corner of the inside over its origin [m]."""
        return float(sum(min(u * size, 0.0) for u, size in zip(self.up, self.inside, strict=True)))

    @property
    def height(self) -> float:
        """Extent of the inside along gravity [m]."""
        return float(sum(abs(u) * size for u, size in zip(self.up, self.inside, strict=True)))

    def heights(self, points: FloatArray) -> FloatArray:
        """Heights of points in the box frame over the lowest corner [m]."""
        return np.asarray(points @ np.asarray(self.up) - self.bottom)

    def share(self, heights: FloatArray) -> FloatArray:
        """Shares of the air nodes in the air at heights (h,), shape (h, n)."""
        place = np.clip(heights / self.height * (AIR_NODES - 1), 0.0, AIR_NODES - 1)
        low = np.minimum(place.astype(int), AIR_NODES - 2)
        share = np.zeros((len(heights), AIR_NODES))
        rows = np.arange(len(heights))
        share[rows, low] = 1.0 - (place - low)
        share[rows, low + 1] = place - low
        return share

    def add(self, film: Film) -> int:
        """Add a film; gives its number."""
        self.films.append(film)
        return len(self.films) - 1

    def add_plate(
        self,
        plate: PlateNodes,
        grid: PlateGrid,
        axis: int,
        sign: int,
        at: float,
        area: FloatArray,
        face: PlaneFace,
        name: str,
        label: int,
        *,
        is_board: bool,
        size: Vector,
    ) -> None:
        """Add the face of a wall or a side of a board."""
        centres = np.zeros((*grid.counts, 3))
        centres[..., axis] = at
        first, second = grid.axes
        centres[..., first] = grid.centres[0][:, None]
        centres[..., second] = grid.centres[1][None, :]
        low, high = list(grid.low), [a + b for a, b in zip(grid.low, grid.size, strict=True)]
        low[axis] = high[axis] = at
        warm, cold = board_shelter(size, self.up, axis, sign) if is_board else (1.0, 1.0)
        edges = (np.inf, np.inf) if is_board else (grid.size[first], grid.size[second])
        number = self.add(
            Film(
                plate.mean,
                name,
                label,
                plate.cells.ravel(),
                centres.reshape(-1, 3),
                area.ravel(),
                (low[0], low[1], low[2]),
                (high[0], high[1], high[2]),
                face,
                warm,
                cold,
                edges,
                1.0,
            )
        )
        bare = area / grid.cell_area
        self.faces.append(Face(number, axis, sign, at, grid, plate.cells, bare))

    def add_rim(
        self,
        plate: PlateNodes,
        grid: PlateGrid,
        axis: int,
        size: Vector,
        area: FloatArray,
        name: str,
        label: int,
    ) -> None:
        """Add the rim of a board: the narrow faces of the body that it is."""
        hit = area > 0
        centres = np.zeros((*grid.counts, 3))
        first, second = grid.axes
        centres[..., axis] = grid.low[axis] + size[axis] / 2
        centres[..., first] = grid.centres[0][:, None]
        centres[..., second] = grid.centres[1][None, :]
        x, y, z = (a + b for a, b in zip(grid.low, size, strict=True))
        whole, gravity, warm, cold = rim_film(size, self.up, axis)
        face = PlaneFace(size[axis], size[axis] / 2, 0.0)
        self.add(
            Film(
                plate.mean,
                name,
                label,
                plate.cells[hit],
                centres[hit],
                area[hit],
                grid.low,
                (x, y, z),
                face,
                warm,
                cold,
                body=(whole, gravity),
            )
        )

    def build(
        self, air_nodes: IntArray, reference_k: float, pressure_pa: float, labels: dict[str, int]
    ) -> InsideAir:
        """Make the links."""
        spacing = self.height / (AIR_NODES - 1)
        conductivity = float(air(reference_k, pressure_pa).conductivity)
        section = float(np.prod(self.inside)) / self.height
        return InsideAir(
            air=air_nodes,
            conduct_w_per_k=conductivity * section / spacing,
            spacing=spacing,
            lift_label=labels["lift"],
            mixing_label=labels["mixing"],
            pressure_pa=pressure_pa,
            factor=np.ones((len(self.films), 1)),
            **_shapes(_Alike(self)),
        )

    def shapes(self) -> dict[str, Any]:
        """Make what the links have by the shape of the inside alone."""
        columns = find_columns(self.faces)
        tops = [
            (top, face)
            for top in self.tops
            if (face := facing_at(self.faces, top.axis, top.sign, top.at, top.centre)) is not None
        ]
        entries = _Entries(self)
        for number, column in enumerate(columns):
            entries.add_column(number, column)
        for number, (top, _) in enumerate(tops, start=len(columns)):
            entries.add_top(number, top)
        entries.add_free()
        return {
            "surfaces": self._surfaces(),
            "pairs": self._pairs(columns, tops),
            **entries.columns(),
            **self._straight(columns, tops),
        }

    def key(self) -> tuple[Hashable, ...]:
        """Give all that `shapes` depends on."""
        return (
            self.up,
            self.inside,
            tuple(_values(film) for film in self.films),
            tuple(_values(face) for face in self.faces),
            tuple(self.tops),
        )

    def _surfaces(self) -> Surfaces:
        films = self.films
        bottoms, tops = self._ends()
        nodes = np.linspace(0.0, self.height, AIR_NODES)
        sampled = bottoms[:, None] + (tops - bottoms)[:, None] * _middles()
        samples = self.share(sampled.ravel()).reshape(len(films), SAMPLES, AIR_NODES)
        faces = [film.face for film in films]
        lengths = np.array([film.stream_length or film.face.fall_length for film in films])
        widths = np.sqrt([float(film.area.sum()) for film in films])
        bodies = [index for index, film in enumerate(films) if film.body is not None]
        shapes = np.array([film.body for film in films if film.body is not None]).reshape(-1, 2)

        def column(values: list[float]) -> FloatArray:
            return np.array(values, dtype=np.float64)[:, None]

        def decay(above: FloatArray) -> FloatArray:
            return plume_decay(above, lengths[:, None], widths[:, None])

        return Surfaces(
            node=np.array([film.node for film in films], dtype=np.intp),
            names=tuple(film.name for film in films),
            fall_length=column([face.fall_length for face in faces]),
            area_perimeter_length=column([face.area_perimeter_length for face in faces]),
            up_cosine=column([face.up_cosine for face in faces]),
            stratified=column([film.stratified for film in films]),
            warm_factor=column([film.warm for film in films]),
            cold_factor=column([film.cold for film in films]),
            edge_a=column([film.edges[0] for film in films]),
            edge_b=column([film.edges[1] for film in films]),
            body=np.array(bodies, dtype=np.intp),
            body_area=shapes[:, :1],
            gravity_function=shapes[:, 1:],
            samples=samples,
            over_height=self.share(tops) - self.share(bottoms),
            decay_up=decay(nodes[None] - tops[:, None]),
            decay_down=decay(bottoms[:, None] - nodes[None]),
        )

    def _ends(self) -> tuple[FloatArray, FloatArray]:
        """Lowest and highest height of every film [m], shapes (s,)."""
        up = np.asarray(self.up)
        # Of a cuboid, the corner that is lowest along each axis by itself is the lowest of all.
        along = np.array([(film.low, film.high) for film in self.films]) * up
        lowest, highest = along.min(axis=1).sum(axis=1), along.max(axis=1).sum(axis=1)
        return lowest - self.bottom, highest - self.bottom

    def _pairs(self, columns: list[Column], tops: list[tuple[Top, Face]]) -> Pairs:
        rows: list[tuple[int, int, float, float, float, float]] = []
        for column in columns:
            low, high = column.extent()
            axis, width = column.lower.axis, column.width
            shape = channel_shape(high - low, self.up, axis, width)
            rows.append((column.lower.surface, column.upper.surface, width, *shape, self.up[axis]))
        for top, face in tops:
            width = max(abs(face.at - top.at), 1e-5)
            first, second = face.grid.axes
            along = float(np.hypot(self.up[first], self.up[second]))
            head = along + abs(self.up[top.axis]) * width / top.length
            up = top.sign * self.up[top.axis]
            rows.append((top.surface, face.surface, width, top.length, head, up))
        shapes = np.array([row[2:] for row in rows], dtype=np.float64).reshape(-1, 4)
        return Pairs(
            np.array([row[0] for row in rows], dtype=np.intp),
            np.array([row[1] for row in rows], dtype=np.intp),
            shapes[:, 0:1],
            shapes[:, 1:2],
            shapes[:, 2:3],
            shapes[:, 3:4],
            closed=np.zeros((len(rows), 1)),
            air=np.concatenate((self._around(columns), self._over(tops))),
        )

    def _around(self, columns: list[Column]) -> FloatArray:
        """Mean shares of the air nodes around gaps, half way across them, shape (columns, n)."""
        if not columns:
            return np.zeros((0, AIR_NODES))
        # Low and high corners; both in the middle across the gap.
        corners = np.array([column.extent() for column in columns])
        across = np.array([column.lower.axis for column in columns])
        every = np.arange(len(columns))
        middle = [0.5 * (column.lower.at + column.upper.at) for column in columns]
        corners[every, :, across] = np.array(middle)[:, None]
        along = corners * np.asarray(self.up)
        low = along.min(axis=1).sum(axis=1) - self.bottom
        high = along.max(axis=1).sum(axis=1) - self.bottom
        sampled = low[:, None] + (high - low)[:, None] * _middles()
        shares = self.share(sampled.ravel()).reshape(len(columns), SAMPLES, AIR_NODES)
        return np.asarray(shares.mean(axis=1))

    def _over(self, tops: list[tuple[Top, Face]]) -> FloatArray:
        """Shares of the air nodes at the middles of parts, shape (tops, n)."""
        centres = np.array([top.centre for top, _ in tops]).reshape(-1, 3)
        return self.share(self.heights(centres))

    def _straight(self, columns: list[Column], tops: list[tuple[Top, Face]]) -> dict[str, Any]:
        cell_a, cell_b, area, label = [], [], [], []
        for column in columns:
            one, other, shared = column.straight()
            cell_a.append(one)
            cell_b.append(other)
            area.append(shared)
            label.append(self.films[column.lower.surface].label)
        for top, face in tops:
            cells, shares = _cells_over(face, top)
            cell_a.append(np.full(len(cells), top.node))
            cell_b.append(cells)
            area.append(shares * top.area)
            label.append(self.films[top.surface].label)
        sizes = [len(each) for each in area]
        return {
            "cell_a": np.concatenate(cell_a).astype(np.intp),
            "cell_b": np.concatenate(cell_b).astype(np.intp),
            "pair": np.repeat(np.arange(len(sizes)), sizes).astype(np.intp),
            "straight_area": np.concatenate(area)[:, None],
            "straight_label": np.repeat(label, sizes).astype(np.intp),
        }


def _middles() -> FloatArray:
    """Middles of the parts of a height that films and gaps look at the air in, of one in all."""
    return (np.arange(SAMPLES) + 0.5) / SAMPLES


def _values(record: Film | Face) -> tuple[Hashable, ...]:
    """Give the values of a record, arrays as their bytes."""
    return tuple(
        value.tobytes() if isinstance(value, np.ndarray) else value
        for value in vars(record).values()
    )


class _Alike:
    """A site that equals every other with the same films and faces."""

    def __init__(self, site: AirSite) -> None:
        self.site, self.key = site, site.key()

    def __eq__(self, other: object) -> bool:
        return isinstance(other, _Alike) and self.key == other.key

    def __hash__(self) -> int:
        return hash(self.key)


@lru_cache(maxsize=8)
def _shapes(alike: _Alike) -> dict[str, Any]:
    """Kept, as the same inside comes again under every condition."""
    return alike.site.shapes()


def _cells_over(face: Face, top: Top) -> tuple[IntArray, FloatArray]:
    """Cells of a face that a top looks at, and the share of it that each takes."""
    shares = face.grid.shares(top.low, top.size)
    seen = shares > 0
    return face.cells[seen], shares[seen]


class _Entries:
    """Film entries being collected: what of each surface lies in which gap."""

    def __init__(self, site: AirSite) -> None:
        self.site = site
        self.left = [film.area.copy() for film in site.films]
        centres = np.concatenate([film.centres for film in site.films])
        ends = np.cumsum([len(film.centres) for film in site.films])[:-1]
        self.shares = np.split(site.share(site.heights(centres)), ends)
        self.cell: list[IntArray] = []
        self.area: list[FloatArray] = []
        self.hat: list[FloatArray] = []
        self.label: list[int] = []
        self.sides: list[tuple[int, int, int]] = []

    def add_column(self, number: int, column: Column) -> None:
        """Add both faces of a column."""
        for second, face in enumerate((column.lower, column.upper)):
            area = column.area_on(face).ravel()
            self._add(face.surface, number, second, area)

    def add_top(self, number: int, top: Top) -> None:
        """Add a part's top in its gap."""
        self._add(top.surface, number, 0, np.array([top.area]))

    def add_free(self) -> None:
        """Add what is left of every surface outside any gap."""
        for surface, left in enumerate(self.left):
            self._add(surface, -1, 0, left.copy())

    def _add(self, surface: int, pair: int, second: int, area: FloatArray) -> None:
        film = self.site.films[surface]
        area = np.minimum(area, self.left[surface])
        some = area > 1e-12
        if not some.any():
            return
        self.left[surface] = self.left[surface] - area
        self.cell.append(film.cells[some])
        self.area.append(area[some])
        self.hat.append(self.shares[surface][some])
        self.label.append(film.label)
        self.sides.append((surface, pair, second))

    def columns(self) -> dict[str, Any]:
        """Give every column by name."""
        sides = np.array(self.sides, dtype=np.intp).reshape(-1, 3)
        sizes = [len(each) for each in self.area]
        return {
            "cell": np.concatenate(self.cell).astype(np.intp),
            "side": np.repeat(np.arange(len(sizes)), sizes).astype(np.intp),
            "area": np.concatenate(self.area)[:, None],
            "hat": np.concatenate(self.hat),
            "film_label": np.repeat(self.label, sizes).astype(np.intp),
            "side_surface": sides[:, 0],
            "side_pair": sides[:, 1],
            "side_second": sides[:, 2],
        }


def channel_shape(size: ArrayLike, up: Vector, axis: int, width: float) -> tuple[float, float]:
    """Length along the flow of a gap across an axis [m], and the share of gravity along it.

    An upright gap is as long as its fall; a level one half as wide as it is, with the gap's own
    height for a head; in between they go over into each other with the tilt.
    """
    extent = np.asarray(size, dtype=np.float64)
    first, second = (other for other in range(3) if other != axis)
    a, b, g_a, g_b = extent[first], extent[second], abs(up[first]), abs(up[second])
    along, across = float(np.hypot(g_a, g_b)), abs(up[axis])
    upright = a * b / ((a * g_b + b * g_a) / along) if along > 1e-9 else 0.0
    length = upright * along + a * b / (a + b) * across
    return float(length), float(along + across * width / length)
