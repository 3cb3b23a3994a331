"""Models of the parts: footprint, power, thermal resistances, pad and limits."""

from typing import Annotated, ClassVar, Literal

from pydantic import Field

from enclosure_check.description.base import (
    ConductivityWPerMK,
    CoordinateMm,
    DistanceMm,
    LengthMm,
    Name,
    PowerW,
    Strict,
    TemperatureC,
    Text,
    ThermalResistanceKPerW,
)
from enclosure_check.description.names import LimitKind, WallName

Corner = Literal["lower_left", "lower_right", "upper_left", "upper_right"]
Percent = Annotated[float, Field(ge=0, le=1000)]


class Derating(Strict):
    """Load allowed as a function of the limited temperature, as a data sheet draws it."""

    load_pct: Percent = Field(description="Load in this use, in percent of the rated one. [%]")
    allowed_pct: dict[Name, Percent] = Field(
        min_length=2,
        max_length=50,
        description="Temperature in Celsius to the load allowed there in percent; straight lines "
        "between. [%]",
    )


class Limit(Strict):
    """Highest and lowest temperature allowed at one point of a part."""

    max_c: TemperatureC | None = Field(None, description="Highest temperature allowed. [C]")
    min_c: TemperatureC | None = Field(None, description="Lowest temperature allowed. [C]")
    derating: Derating | None = Field(
        None, description="Derating curve: the load sets the highest temperature allowed."
    )


class Pad(Strict):
    """A compressible pad or gap filler between a part and a wall."""

    to: WallName | None = Field(
        None,
        description="The wall the pad touches; needed for a part on a board, the part's own wall "
        "for a part on a wall.",
    )
    thickness_mm: LengthMm = Field(
        description="Thickness before assembly; it is compressed to the actual distance. [mm]"
    )
    conductivity_w_per_mk: ConductivityWPerMK = Field(description="Pad conductivity. [W/mK]")
    contact_mm2k_per_w: float = Field(
        0.0, ge=0, le=10_000, description="Resistance of both contact faces together. [mm2K/W]"
    )
    length_mm: LengthMm | None = Field(None, description="As the part when left out. [mm]")
    width_mm: LengthMm | None = Field(None, description="As the part when left out. [mm]")


class PartType(Strict):
    """What parts of one kind share; also everything a part may say of itself."""

    NOT_YET: ClassVar[dict[str, str]] = {
        "heat_sink": "heat sinks are not computed in this version",
        "shape": "only cuboid parts are computed in this version",
    }
    description: Text | None = Field(None, description="Free text.")
    length_mm: LengthMm | None = Field(
        None, description="Size to the right, seen from the part's side, before rotation. [mm]"
    )
    width_mm: LengthMm | None = Field(
        None, description="Size upwards, seen from the part's side, before rotation. [mm]"
    )
    height_mm: LengthMm | None = Field(None, description="Height over its board or wall. [mm]")
    power_w: PowerW | None = Field(
        None, description="Power turned to heat; scaled by the mode's `power_pct`. [W]"
    )
    output_w: PowerW | None = Field(
        None,
        description="What a converter gives out; with `efficiency_pct` instead of `power_w`, and "
        "scaled by the mode's `power_pct` alike. [W]",
    )
    efficiency_pct: float | None = Field(
        None,
        gt=0,
        le=100,
        description="Of what a converter takes in at that output, the share it gives out; the rest "
        "turns to heat. [%]",
    )
    power_by_mode_w: dict[Name, PowerW] = Field(
        default_factory=dict,
        description="Power by operating mode; a mode not named here takes `power_w` times the "
        "mode's `power_pct`. [W]",
    )
    power_at_c: TemperatureC | None = Field(
        None,
        description="Junction temperature at which the power is stated; 25 when left out. [C]",
    )
    power_slope_pct_per_k: float | None = Field(
        None,
        ge=-5,
        le=20,
        description="Linear rise of power with junction temperature (0.39 for copper loss at a "
        "given current). [%/K]",
    )
    power_doubling_k: float | None = Field(
        None,
        gt=1,
        le=1000,
        description="Kelvin over which the power doubles, exponential as leakage current is. [K]",
    )
    theta_jc_top_k_per_w: ThermalResistanceKPerW | None = Field(
        None, description="Junction to case top (JESD51-12). [K/W]"
    )
    theta_jc_bottom_k_per_w: ThermalResistanceKPerW | None = Field(
        None, description="Junction to case bottom (JESD51-12). [K/W]"
    )
    theta_jb_k_per_w: ThermalResistanceKPerW | None = Field(
        None, description="Junction to board (JESD51-8). [K/W]"
    )
    bottom_contact_k_per_w: ThermalResistanceKPerW | None = Field(
        None,
        description="From the case bottom to the board or wall: solder, leads or joint. When "
        "left out, 0.1 mm of air under the body. [K/W]",
    )
    finish: Name | None = Field(
        None,
        description="Surface: a row of `finishes` or the library; epoxy_package when left out.",
    )
    pad: Pad | None = Field(None, description="A pad between this part and a wall.")
    limits: dict[LimitKind, Limit] = Field(
        default_factory=dict, description="Limits by the point they hold for."
    )


class Part(PartType):
    """A part on a board, on a wall or in the air; what it leaves out comes from its type."""

    type: Name | None = Field(None, description="A row of `part_types`.")
    place: Name = Field(description="The board or wall it sits on, or `air`.")
    side: WallName | None = Field(
        None, description="Side of the board, named after the wall that side faces."
    )
    at_mm: Annotated[list[CoordinateMm], Field(min_length=2, max_length=2)] | None = Field(
        None,
        description="Centre of the part from the corner `at_from`, along the board or wall: to "
        "the right or left, then up or down, as seen from the part's side. [mm]",
    )
    at_from: Corner = Field(
        "lower_left",
        description="The corner of the board or wall `at_mm` counts from, as seen from the part's "
        "side.",
    )
    rotation_deg: float = Field(
        0.0,
        ge=-360,
        le=360,
        description="Turn of the part; between quarter turns it counts as a rectangle along the "
        "edges of the same area. [deg]",
    )
    from_walls_mm: dict[WallName, DistanceMm] = Field(
        default_factory=dict,
        description="For a part in the air: clear distance from the inside of the named walls; in "
        "the middle where neither wall is named. [mm]",
    )
