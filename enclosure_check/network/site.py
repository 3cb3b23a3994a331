"""What the builders share while a network is being made: the surroundings, air and surfaces."""

from collections.abc import Callable
from functools import lru_cache
from typing import TYPE_CHECKING

import numpy as np

from enclosure_check.description.case import Case, PartCase
from enclosure_check.description.frames import AXIS, Vector
from enclosure_check.network.air import AIR_NODES, AirSite
from enclosure_check.network.air_films import Film, Top
from enclosure_check.network.builder import NetworkBuilder, PlaneFace
from enclosure_check.network.grid import GridOptions, PlateGrid
from enclosure_check.network.links import FloatArray, IntArray, LinkLabel
from enclosure_check.network.network import PartNodes, PlateNodes
from enclosure_check.network.patches import Patches
from enclosure_check.network.spots import Spot, Spots
from enclosure_check.network.units import kelvin, metres_3
from enclosure_check.physics.air import air, pressure_at_altitude
from enclosure_check.physics.plates import fall_length
from enclosure_check.physics.radiation import sky_temperature_clear
from enclosure_check.records import dataclass, field

if TYPE_CHECKING:
    from enclosure_check.network.pieces import Following, Name, Record


@dataclass(frozen=True, eq=False)
class InsideSurface:
    """A surface that radiates inside the box: its cells, their patches and bare areas [m2]."""

    cells: IntArray
    patch: IntArray
    area: FloatArray
    emissivity: float
    label: LinkLabel


@dataclass
class Site:
    """The network being made, with the nodes every builder needs."""

    builder: NetworkBuilder
    options: GridOptions
    up: Vector
    ambient: int
    radiant: int
    sky: int | None
    air: int
    """Mean of the inside air; heat goes to and from its nodes."""
    air_nodes: IntArray
    air_site: AirSite
    air_conductivity: float
    spots: Spots
    surfaces: list[InsideSurface] = field(default_factory=list)
    patches: Patches = field(default_factory=Patches)
    grids: dict[str, PlateGrid] = field(default_factory=dict)
    wall_outside: dict[str, PlateNodes] = field(default_factory=dict)
    wall_inside: dict[str, PlateNodes] = field(default_factory=dict)
    boards: dict[str, PlateNodes] = field(default_factory=dict)
    board_faces: dict[tuple[str, str], PlaneFace] = field(default_factory=dict)
    parts: dict[str, PartNodes] = field(default_factory=dict)
    cans: dict[tuple[str, str], int] = field(default_factory=dict)
    """Nodes of cans, by board and name."""
    follow: "Record | Following | None" = None

    def piece(self, name: "Name", build: Callable[[], None]) -> None:
        """Build a piece, which only adds to what is collected here.

        Where the network follows another, what that has of it may be taken over; `pieces.Changed`
        tells by the name what each is made of.
        """
        if self.follow is None:
            build()
        else:
            self.follow.piece(name, build)

    def settle(self) -> None:
        """Have all pieces so far in place."""
        if self.follow is not None:
            self.follow.settle()

    @classmethod
    def of(cls, case: Case, options: GridOptions) -> "Site":
        """Set up the surroundings and the inside air of a case."""
        around = case.surroundings
        air_k = kelvin(around.air_c)
        pressure = float(pressure_at_altitude(around.altitude_m))
        builder = NetworkBuilder(air_k, pressure)
        sky_k = {
            "none": None,
            "clear": float(sky_temperature_clear(air_k)),
            "overcast": air_k,
            "given": None if around.sky_c is None else kelvin(around.sky_c),
        }[around.sky]
        inside = metres_3(case.inside_mm)
        air_nodes = builder.nodes("inside air", (AIR_NODES,))
        return cls(
            builder=builder,
            options=options,
            up=case.up,
            ambient=builder.node("surrounding air", air_k),
            radiant=builder.node("radiant surroundings", kelvin(around.radiant_c)),
            sky=None if sky_k is None else builder.node("sky", sky_k),
            air=builder.mean("inside air, mean", air_nodes, AIR_SHARES),
            air_nodes=air_nodes,
            air_site=AirSite(case.up, inside),
            air_conductivity=float(air(air_k, pressure).conductivity),
            spots=Spots(builder),
        )

    def plane_face(self, size: Vector, axis: int, sign: int) -> PlaneFace:
        """Give the shape and attitude of a face of the box frame, its normal into the air."""
        return _plane_face(size, self.up, axis, sign)

    def plate(self, label: str, grid: PlateGrid) -> PlateNodes:
        """Add the cells of a plate's face and their mean, and join the cells along it."""
        cells = self.builder.nodes(label, grid.counts)
        mean = self.builder.mean(f"{label}, mean", cells, np.ones(cells.size))
        return PlateNodes(cells, mean)

    def warm_air(self, power: float, label: LinkLabel, **growth: float) -> None:
        """Put heat [W] into the inside air at all heights alike."""
        self.builder.heat(self.air_nodes, power * AIR_SHARES, label, **growth)

    def conduct_from_air(self, node: int, conductance: float, label: LinkLabel) -> None:
        """Join the inside air at all heights alike to a node by a conductance [W/K]."""
        self.builder.conduct(self.air_nodes, node, conductance * AIR_SHARES, label)

    def air_at(self, point: Vector, label: str) -> int:
        """Give a node that shows the temperature of the inside air at a point of the box frame."""
        share = self.air_site.share(self.air_site.heights(np.array([point])))[0]
        near = share > 0
        node = self.builder.node(label)
        self.builder.read(node, self.air_nodes[near], share[near])
        return node

    def convect_body(
        self,
        node: int,
        area: float,
        low: Vector,
        size: Vector,
        face: PlaneFace,
        label: LinkLabel,
        body: tuple[float, float] | None = None,
    ) -> int:
        """Add the film of a part or can of one temperature; gives its number.

        Parameters
        ----------
        node
            Its node.
        area
            What convects [m2].
        low, size
            Its extent in the box frame [m].
        face
            Of the surface it stands on, whose plate law it takes; its own for the others.
        label
            Whose it is.
        body
            Area of the body with its mirror images [m2] and gravity function, where it follows
            the cuboid law.
        """
        x, y, z = (start + extent / 2 for start, extent in zip(low, size, strict=True))
        high = tuple(start + extent for start, extent in zip(low, size, strict=True))
        return self.air_site.add(
            Film(
                node,
                label.owner.replace(":", " ", 1),
                self.builder.label(label),
                np.array([node]),
                np.array([[x, y, z]]),
                np.array([area]),
                low,
                (high[0], high[1], high[2]),
                face,
                body=body,
                stream_length=float(np.cbrt(np.prod(size))),
            )
        )

    def add_top(
        self, surface: int, node: int, area: float, axis: int, sign: int, low: Vector, size: Vector
    ) -> None:
        """Let the top of a part or can look at what lies across the air from it."""
        if area <= 0:
            return
        at = low[axis] + (size[axis] if sign > 0 else 0.0)
        length = self.air_site.films[surface].face.fall_length
        self.air_site.tops.append(Top(surface, node, area, axis, sign, at, low, size, length))

    def conduct_along(
        self, cells: IntArray, grid: PlateGrid, share: float, label: LinkLabel
    ) -> None:
        """Join neighbouring cells by the share of the plate's sheet conductance they have."""
        for between, nodes in zip(grid.between, (cells, cells.T), strict=True):
            self.builder.conduct(nodes[:-1], nodes[1:], share * between, label)

    def join(
        self,
        node: int,
        resistance: float,
        host: str,
        plate: PlateNodes,
        low: Vector,
        size: Vector,
        label: LinkLabel,
    ) -> Spot:
        """Join a node to a face of a wall or board over an area; see `Spots.add`."""
        name = f"{host} under {label.owner.split(':', 1)[1]}"
        return self.spots.add(node, resistance, self.grids[host], plate, low, size, label, name)


# Shares of the air nodes in the mean of a profile that is linear between them. [-]
AIR_SHARES = np.full(AIR_NODES, 1.0 / (AIR_NODES - 1))
AIR_SHARES[[0, -1]] *= 0.5


@lru_cache(maxsize=512)
def _plane_face(size: Vector, up: Vector, axis: int, sign: int) -> PlaneFace:
    """See `Site.plane_face`; kept, as the same come again under every condition."""
    first, second = (other for other in range(3) if other != axis)
    a, b = size[first], size[second]
    return PlaneFace(
        fall_length=float(fall_length(a, b, up[first], up[second])),
        area_perimeter_length=a * b / (2 * (a + b)),
        up_cosine=sign * up[axis],
    )


def footprint(part: PartCase) -> float:
    """Give the area a part stands on [m2]."""
    size = metres_3(part.size_mm)
    first, second = (axis for axis in range(3) if axis != AXIS[part.side])
    return size[first] * size[second]
