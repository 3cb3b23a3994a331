"""A case: one document under one condition, every default filled in, still in mm and Celsius."""

from enclosure_check.description.frames import Vector
from enclosure_check.description.names import (
    LimitKind,
    MountingKind,
    OpeningKind,
    WallName,
)
from enclosure_check.description.positions import Positions
from enclosure_check.records import dataclass, field


@dataclass(frozen=True)
class Material:
    """What a wall or board is made of."""

    name: str
    conductivity_w_per_mk: float
    in_plane_conductivity_w_per_mk: float
    density_kg_per_m3: float
    heat_capacity_j_per_kgk: float


@dataclass(frozen=True)
class Finish:
    """How a surface radiates."""

    name: str
    emissivity: float
    solar_absorptivity: float


@dataclass(frozen=True)
class MountingCase:
    """What the outside of a wall faces, with its defaults filled in."""

    kind: MountingKind
    gap_mm: float
    closed: bool
    contact_w_per_m2k: float
    surface_c: float | None
    """None for a neighbour that is as warm as the wall."""
    surface_emissivity: float


@dataclass(frozen=True)
class CableCase:
    """Alike conductors through a wall."""

    name: str
    count: int
    conductor_mm2: float
    outer_mm: float
    inside_mm: float
    current_a: float


@dataclass(frozen=True)
class ScreenCase:
    """A woven mesh of square apertures."""

    name: str
    wire_mm: float
    aperture_mm: float

    @property
    def free_share(self) -> float:
        """Open share of the mesh [-]."""
        return (self.aperture_mm / (self.aperture_mm + self.wire_mm)) ** 2


@dataclass(frozen=True)
class OpeningCase:
    """An opening, or a row of alike ones; ``low_mm`` and ``size_mm`` are its whole outline.

    What it loses follows from this in `network/opening_losses.py`.
    """

    name: str
    wall: WallName
    kind: OpeningKind
    low_mm: Vector
    size_mm: Vector
    """Nothing along the axis of the wall."""
    free_area_mm2: float
    """All that is open, the blocked share taken off; 0 when it is closed."""
    free_share: float
    """What holes leave open of the area they stand in, blocked or not; 1 for cut-outs [-]."""
    count: int
    """How many alike cut-outs stand in a row; 1 for areas."""
    area_mm: float
    """Hydraulic diameter of one cut-out or of the area the holes stand in."""
    hole_mm: float
    """Hydraulic diameter of one hole."""
    hole_aspect: float | None
    """Narrow over wide side of one hole, 0 for a slot; None for a round one."""
    thickness_mm: float
    stated_loss: float | None
    """Loss coefficient on the velocity in the free area, where it does not follow from sizes."""
    screen: ScreenCase | None
    filter_pa_s_per_m: float
    """Loss of a filter per velocity in the free area."""
    blocked_pct: float

    @property
    def closed(self) -> bool:
        """Whether no air passes."""
        return self.free_area_mm2 <= 0


@dataclass(frozen=True)
class WallCase:
    """A wall with its defaults filled in."""

    name: WallName
    material: Material
    thickness_mm: float
    finish_outside: Finish
    finish_inside: Finish
    mounting: MountingCase
    touch_max_c: float | None
    sun_w_per_m2: float
    cables: tuple[CableCase, ...] = ()
    openings: tuple[OpeningCase, ...] = ()


@dataclass(frozen=True)
class CopperCase:
    """One copper layer of a board."""

    name: str
    thickness_um: float
    coverage_pct: float


@dataclass(frozen=True)
class ZoneCase:
    """A rectangle of a board with other copper; as thick as the board, in the box frame."""

    name: str
    copper: tuple[CopperCase, ...]
    conductivity_in_plane_w_per_mk: float | None
    low_mm: Vector
    size_mm: Vector


@dataclass(frozen=True)
class StandOffCase:
    """A column from a board to a wall.

    ``length_mm`` is the clear distance between the two, ``section_mm2`` what conducts of the
    column; ``resistance_k_per_w`` stands instead of both where it is stated. ``low_mm`` and
    ``size_mm`` are its foot, a square of the area of its outline, nothing along its length.
    """

    name: str
    wall: WallName
    length_mm: float
    section_mm2: float
    conductivity_w_per_mk: float | None
    resistance_k_per_w: float | None
    contact_k_per_w: float
    low_mm: Vector
    size_mm: Vector


@dataclass(frozen=True)
class EdgeClampCase:
    """A clamped piece of a board's edge; ``low_mm`` and ``size_mm`` are that piece of its rim."""

    wall: WallName
    conductance_w_per_mk: float
    low_mm: Vector
    size_mm: Vector


@dataclass(frozen=True)
class FillerCase:
    """What fills the space between a side of a board and the wall; its body in the box frame."""

    name: str
    side: WallName
    distance_mm: float
    conductivity_w_per_mk: float
    contact_mm2k_per_w: float
    low_mm: Vector
    size_mm: Vector


@dataclass(frozen=True)
class ShieldCanCase:
    """A metal can over parts of a board's side; its body in the box frame."""

    name: str
    side: WallName
    height_mm: float
    finish: Finish
    frame_conductance_w_per_mk: float
    low_mm: Vector
    size_mm: Vector


@dataclass(frozen=True)
class BoardCase:
    """A board in its place; ``low_mm`` and ``size_mm`` are in the box frame."""

    name: str
    axis: int
    low_mm: Vector
    size_mm: Vector
    laminate: Material
    copper: tuple[CopperCase, ...]
    conductivity_in_plane_w_per_mk: float | None
    finish: Finish
    other_power_w: float
    zones: tuple[ZoneCase, ...] = ()
    stand_offs: tuple[StandOffCase, ...] = ()
    edge_clamps: tuple[EdgeClampCase, ...] = ()
    fillers: tuple[FillerCase, ...] = ()
    shield_cans: tuple[ShieldCanCase, ...] = ()

    @property
    def high_mm(self) -> Vector:
        """Far corner in the box frame [mm]."""
        return _add(self.low_mm, self.size_mm)


@dataclass(frozen=True)
class LimitCase:
    """A limit at one point of a part."""

    kind: LimitKind
    max_c: float | None
    min_c: float | None
    derated: bool


@dataclass(frozen=True)
class PadCase:
    """A pad in its place, compressed to ``distance_mm``.

    ``low_mm`` and ``size_mm`` are its extent in the box frame, nothing along its thickness.
    """

    wall: WallName
    distance_mm: float
    conductivity_w_per_mk: float
    contact_mm2k_per_w: float
    low_mm: Vector
    size_mm: Vector

    @property
    def area_mm2(self) -> float:
        """Area of the pad [mm2]."""
        first, second = sorted(self.size_mm)[1:]
        return first * second


@dataclass(frozen=True)
class PartCase:
    """A part in its place.

    ``place`` is where it sits, ``host`` the board or wall (``air`` for a body in the air),
    ``side`` the wall its top faces, ``low_mm`` and ``size_mm`` its body in the box frame.
    """

    name: str
    place: str
    host: str
    side: WallName
    low_mm: Vector
    size_mm: Vector
    power_w: float
    power_at_c: float
    power_slope_pct_per_k: float
    power_doubling_k: float | None
    theta_jc_top_k_per_w: float | None
    theta_jc_bottom_k_per_w: float | None
    theta_jb_k_per_w: float | None
    bottom_contact_k_per_w: float | None
    finish: Finish
    pad: PadCase | None
    limits: tuple[LimitCase, ...]

    @property
    def centre_mm(self) -> Vector:
        """Centre of the body in the box frame [mm]."""
        x, y, z = (low + size / 2 for low, size in zip(self.low_mm, self.size_mm, strict=True))
        return (x, y, z)


@dataclass(frozen=True)
class SurroundingsCase:
    """What the box stands in."""

    air_c: float
    radiant_c: float
    altitude_m: float
    sky: str
    sky_c: float | None
    wind_m_per_s: float = 0.0
    wind_from: WallName | None = None
    """The side the wind comes from; None for any side."""


@dataclass(frozen=True)
class ReadingCase:
    """One thermocouple reading: ``kind`` is part, wall or air; ``point`` where on it."""

    run: str
    kind: str
    name: str
    point: str
    measured_c: float


@dataclass(frozen=True)
class ToleranceCase:
    """What a number of the document may be, by a tolerance stated: a half-width at about 95 %.

    ``about`` and ``covers`` tell what the number is in the case, see `numbers.meaning`.
    """

    path: tuple[str, ...]
    value: float
    half_width: float
    pct: float | None
    about: tuple[tuple[str, ...], ...]
    covers: tuple[tuple[str, ...], ...]


@dataclass(frozen=True)
class PowerBudgetCase:
    """Power into the box and out of it in this case."""

    power_in_w: float
    power_out_w: float
    tolerance_pct: float


@dataclass(frozen=True)
class Note:
    """A remark on a field of the document: a warning or an assumption made."""

    path: tuple[str | int, ...]
    message: str


@dataclass(frozen=True)
class Case:
    """One document under one condition, ready to be built into a network."""

    title: str
    condition: str
    option: str | None
    mode: str | None
    inside_mm: Vector
    outside_mm: Vector
    up: Vector
    walls: dict[WallName, WallCase]
    boards: dict[str, BoardCase]
    parts: dict[str, PartCase]
    surroundings: SurroundingsCase
    margin_k: float | None
    confidence_pct: float | None
    stirred: bool = False
    readings: tuple[ReadingCase, ...] = ()
    tolerances: tuple[ToleranceCase, ...] = ()
    warnings: tuple[Note, ...] = ()
    assumptions: tuple[str, ...] = field(default=())
    positions: Positions = field(default=Positions(), compare=False)
    """Where its parts and walls stand in the document."""
    power_budget: PowerBudgetCase | None = None

    @property
    def vented(self) -> bool:
        """Whether any opening lets air through."""
        return any(not each.closed for wall in self.walls.values() for each in wall.openings)


def _add(a: Vector, b: Vector) -> Vector:
    return (a[0] + b[0], a[1] + b[1], a[2] + b[2])
