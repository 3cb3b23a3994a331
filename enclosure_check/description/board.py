"""Models of the boards: place, size, copper and the power of everything not listed."""

from typing import Annotated

from pydantic import Field

from enclosure_check.description.base import (
    ConductivityWPerMK,
    CoordinateMm,
    DistanceMm,
    LengthMm,
    Name,
    PercentUpTo100,
    PowerW,
    Strict,
    Text,
    ThermalResistanceKPerW,
)
from enclosure_check.description.names import WallName


class CopperLayer(Strict):
    """One copper layer of a board."""

    thickness_um: float = Field(
        gt=0, le=1000, description="Copper thickness; 35 for one ounce per square foot. [um]"
    )
    coverage_pct: PercentUpTo100 = Field(description="Share of the board's area it covers. [%]")


class BoardDefaults(Strict):
    """What every board is made of unless it says otherwise."""

    thickness_mm: LengthMm | None = Field(
        None, description="Board thickness; 1.6 when left out. [mm]"
    )
    material: Name | None = Field(
        None, description="Laminate: a row of `materials` or the library; fr4 when left out."
    )
    finish: Name | None = Field(
        None, description="Surface: a row of `finishes` or the library; solder_mask when left out."
    )


AtMm = Annotated[list[CoordinateMm], Field(min_length=2, max_length=2)]


class Zone(Strict):
    """A rectangle of a board with other copper: a pour, a plane cut out, a field of vias."""

    at_mm: AtMm = Field(
        description="Centre of the zone from the board's lower left corner, seen from the front, "
        "the right or the top. [mm]"
    )
    length_mm: LengthMm = Field(description="Size to the right, so seen. [mm]")
    width_mm: LengthMm = Field(description="Size upwards, so seen. [mm]")
    copper: dict[Name, CopperLayer] = Field(
        default_factory=dict,
        max_length=100,
        description="Copper layers of the zone, instead of the board's; none for bare laminate.",
    )
    conductivity_in_plane_w_per_mk: ConductivityWPerMK | None = Field(
        None, description="In-plane conductivity, instead of the copper layers. [W/mK]"
    )


class StandOff(Strict):
    """A column that joins a board to a wall."""

    to: WallName = Field(description="The wall it stands on, one that the board lies parallel to.")
    at_mm: AtMm = Field(
        description="Its centre from the board's lower left corner, seen from the front, the "
        "right or the top. [mm]"
    )
    diameter_mm: LengthMm | None = Field(
        None, description="Diameter, across flats for a hexagon; with `material`. [mm]"
    )
    bore_mm: DistanceMm = Field(0.0, description="Diameter of its bore. [mm]")
    material: Name | None = Field(None, description="A row of `materials` or the library.")
    resistance_k_per_w: ThermalResistanceKPerW | None = Field(
        None, description="From board to wall, instead of diameter and material. [K/W]"
    )
    contact_k_per_w: ThermalResistanceKPerW = Field(
        0.0, description="Both ends together, besides the column. [K/W]"
    )


class EdgeClamp(Strict):
    """A card guide or wedge lock along an edge of a board."""

    conductance_w_per_mk: float = Field(
        gt=0, le=10_000, description="Per metre of edge, from board to wall. [W/mK]"
    )
    length_mm: LengthMm | None = Field(
        None, description="Clamped length, in the middle; the whole edge when left out. [mm]"
    )


class Filler(Strict):
    """Potting or a gap filler that fills the space between a side of a board and the wall."""

    side: WallName = Field(description="The side of the board, named after the wall it faces.")
    at_mm: AtMm | None = Field(
        None,
        description="Its centre from the board's lower left corner, seen from the front, the "
        "right or the top; the board's middle when left out. [mm]",
    )
    length_mm: LengthMm | None = Field(
        None, description="Size to the right, so seen; the whole board when left out. [mm]"
    )
    width_mm: LengthMm | None = Field(
        None, description="Size upwards, so seen; the whole board when left out. [mm]"
    )
    conductivity_w_per_mk: ConductivityWPerMK = Field(description="Its conductivity. [W/mK]")
    contact_mm2k_per_w: float = Field(
        0.0, ge=0, le=10_000, description="Resistance of both contact faces together. [mm2K/W]"
    )


class ShieldCan(Strict):
    """A metal can over parts of a board."""

    side: WallName = Field(description="The side of the board, named after the wall it faces.")
    at_mm: AtMm = Field(
        description="Its centre from the board's lower left corner, seen from the front, the "
        "right or the top. [mm]"
    )
    length_mm: LengthMm = Field(description="Size to the right, so seen. [mm]")
    width_mm: LengthMm = Field(description="Size upwards, so seen. [mm]")
    height_mm: LengthMm = Field(description="Height over the board. [mm]")
    finish: Name = Field(
        "stainless_mill", description="Outside and inside: a row of `finishes` or the library."
    )
    frame_conductance_w_per_mk: float = Field(
        20.0,
        gt=0,
        le=10_000,
        description="From the can to the board per metre of its outline, soldered or clipped. "
        "[W/mK]",
    )


class Board(BoardDefaults):
    """A flat board, parallel to a pair of walls; even through its thickness."""

    description: Text | None = Field(None, description="Free text.")
    parallel_to: WallName = Field(
        description="A wall this board lies parallel to. Its sides are named after the two walls "
        "they face: a board parallel to the bottom has the sides bottom and top."
    )
    length_mm: LengthMm = Field(
        description="Size along the box's width; along its depth for boards parallel to left and "
        "right. [mm]"
    )
    width_mm: LengthMm = Field(
        description="Size along the box's height; along its depth for boards parallel to bottom "
        "and top. [mm]"
    )
    from_walls_mm: dict[WallName, DistanceMm] = Field(
        default_factory=dict,
        description="Clear distance from the inside of the named walls to the board; in a "
        "direction with neither wall named the board stands in the middle. [mm]",
    )
    copper: dict[Name, CopperLayer] = Field(
        default_factory=dict,
        max_length=100,
        description="Copper layers by name, in order from the first side.",
    )
    conductivity_in_plane_w_per_mk: ConductivityWPerMK | None = Field(
        None, description="In-plane conductivity, instead of the copper layers. [W/mK]"
    )
    zones: dict[Name, Zone] = Field(
        default_factory=dict,
        max_length=200,
        description="Rectangles with other copper; a later one covers an earlier one.",
    )
    stand_offs: dict[Name, StandOff] = Field(
        default_factory=dict, max_length=200, description="Columns to a wall, by name."
    )
    edge_clamps: dict[WallName, EdgeClamp] = Field(
        default_factory=dict,
        description="Clamped edges, each named after the wall the edge faces and is clamped to.",
    )
    fillers: dict[Name, Filler] = Field(
        default_factory=dict,
        max_length=100,
        description="Potting and gap fillers to a wall, by name.",
    )
    shield_cans: dict[Name, ShieldCan] = Field(
        default_factory=dict, max_length=100, description="Metal cans over parts, by name."
    )
    other_power_w: PowerW = Field(
        0.0, description="Power of everything on this board that is not listed, spread evenly. [W]"
    )
    other_power_by_mode_w: dict[Name, PowerW] = Field(
        default_factory=dict,
        description="The same by operating mode; a mode not named here takes `other_power_w` "
        "times the mode's `power_pct`. [W]",
    )
