"""What the builders share while a network is being made: the surroundings, air and surfaces."""

from dataclasses import dataclass, field
from functools import lru_cache

from enclosure_check.description.case import Case, PartCase
from enclosure_check.description.frames import AXIS, OPPOSITE, Vector
from enclosure_check.network.builder import NetworkBuilder, PlaneFace
from enclosure_check.network.links import LinkLabel
from enclosure_check.network.network import PartNodes
from enclosure_check.network.units import kelvin, metres_3
from enclosure_check.physics.air import air, pressure_at_altitude
from enclosure_check.physics.conduction import spreading_resistance
from enclosure_check.physics.plates import fall_length
from enclosure_check.physics.radiation import sky_temperature_clear

# Film coefficient of both faces of a plate together for the spreading terms, which have to assume
# one: still air and radiation, two faces of 10 W/m2K. (common practice, no source)
SPREADING_FILM_W_PER_M2K = 20.0


@dataclass(frozen=True)
class InsideSurface:
    """A surface that radiates inside the box."""

    node: int
    area: float
    emissivity: float
    label: LinkLabel


@dataclass(frozen=True)
class Plate:
    """A wall or board as the spreading term sees it: two axes, its extent and ``k t``."""

    axes: tuple[int, int]
    low: Vector
    size: Vector
    sheet_conductance: float


@dataclass
class Site:
    """The network being made, with the nodes every builder needs."""

    builder: NetworkBuilder
    up: Vector
    ambient: int
    radiant: int
    sky: int | None
    air: int
    radiant_inside: int
    air_conductivity: float
    covered: dict[str, float]
    """Area taken away from the faces (by host, or host and side) by parts and pads [m2]."""
    surfaces: list[InsideSurface] = field(default_factory=list)
    plates: dict[str, Plate] = field(default_factory=dict)
    wall_outside: dict[str, int] = field(default_factory=dict)
    wall_inside: dict[str, int] = field(default_factory=dict)
    board_sides: dict[tuple[str, str], int] = field(default_factory=dict)
    board_faces: dict[tuple[str, str], PlaneFace] = field(default_factory=dict)
    parts: dict[str, PartNodes] = field(default_factory=dict)

    @classmethod
    def of(cls, case: Case) -> "Site":
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
        return cls(
            builder=builder,
            up=case.up,
            ambient=builder.node("surrounding air", air_k),
            radiant=builder.node("radiant surroundings", kelvin(around.radiant_c)),
            sky=None if sky_k is None else builder.node("sky", sky_k),
            air=builder.node("inside air"),
            radiant_inside=builder.node("inside radiant mean"),
            air_conductivity=float(air(air_k, pressure).conductivity),
            covered=_covered(case),
        )

    def plane_face(self, size: Vector, axis: int, sign: int) -> PlaneFace:
        """Give the shape and attitude of a face of the box frame, its normal into the air."""
        first, second = (other for other in range(3) if other != axis)
        a, b = size[first], size[second]
        return PlaneFace(
            fall_length=float(fall_length(a, b, self.up[first], self.up[second])),
            area_perimeter_length=a * b / (2 * (a + b)),
            up_cosine=sign * self.up[axis],
        )

    def spot(self, host: str, node: int, low: Vector, size: Vector, owner: str) -> int:
        """Give the node of a spot on a plate, behind the spreading resistance to its mean.

        Parameters
        ----------
        host
            Name of the wall or board.
        node
            Node of the plate's face.
        low, size
            Extent of the source in the box frame [m].
        owner
            Whose link it is.
        """
        plate = self.plates[host]
        first, second = plate.axes
        resistance = _spreading(
            size[first],
            size[second],
            low[first] + size[first] / 2 - plate.low[first],
            low[second] + size[second] / 2 - plate.low[second],
            plate.size[first],
            plate.size[second],
            plate.sheet_conductance,
        )
        return self.builder.behind(
            node, resistance, f"{host} under {owner}", LinkLabel(owner, "spreading")
        )


@lru_cache(maxsize=4096)
def _spreading(
    a: float, b: float, x: float, y: float, plate_a: float, plate_b: float, sheet: float
) -> float:
    """Give a spreading resistance; the same shapes come again under every condition [K/W]."""
    film = SPREADING_FILM_W_PER_M2K
    return float(spreading_resistance(a, b, x, y, plate_a, plate_b, sheet, film))


def _covered(case: Case) -> dict[str, float]:
    """Give the area that parts and pads cover, by wall, and by board and side [m2]."""
    covered: dict[str, float] = {}
    for part in case.parts.values():
        if part.place != "air":
            key = part.host if part.place == "wall" else side_key(part.host, part.side)
            covered[key] = covered.get(key, 0.0) + footprint(part)
        if part.pad is not None and part.place == "board":
            covered[part.pad.wall] = covered.get(part.pad.wall, 0.0) + part.pad.area_mm2 * 1e-6
    return covered


def side_key(board: str, side: str) -> str:
    """Give the key of a board's side among the covered faces (no wall name has a slash)."""
    return f"{board}/{side}"


def footprint(part: PartCase) -> float:
    """Give the area a part stands on [m2]."""
    size = metres_3(part.size_mm)
    first, second = (axis for axis in range(3) if axis != AXIS[part.side])
    return size[first] * size[second]


def facing_wall(part: PartCase) -> str:
    """Give the wall under a part that sits on a wall."""
    return OPPOSITE[part.side]
