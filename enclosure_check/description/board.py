"""Models of the boards: place, size, copper and the power of everything not listed."""

from typing import ClassVar

from pydantic import Field

from enclosure_check.description.base import (
    ConductivityWPerMK,
    DistanceMm,
    LengthMm,
    Name,
    PercentUpTo100,
    PowerW,
    Strict,
    Text,
    WallName,
)


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


class Board(BoardDefaults):
    """A flat board, parallel to a pair of walls, one plate of even temperature on each side."""

    NOT_YET: ClassVar[dict[str, str]] = {
        "zones": "zones of other copper are not computed in this version; give mean coverages",
        "stand_offs": "heat through stand-offs is not computed in this version",
        "edge_clamps": "heat through edge clamps is not computed in this version",
        "shield_cans": "shield cans are not computed in this version",
        "potting": "potting between a board and a wall is not computed in this version",
    }
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
        default_factory=dict, description="Copper layers by name, in order from the first side."
    )
    conductivity_in_plane_w_per_mk: ConductivityWPerMK | None = Field(
        None, description="In-plane conductivity, instead of the copper layers. [W/mK]"
    )
    other_power_w: PowerW = Field(
        0.0, description="Power of everything on this board that is not listed, spread evenly. [W]"
    )
    other_power_by_mode_w: dict[Name, PowerW] = Field(
        default_factory=dict,
        description="The same by operating mode; a mode not named here takes `other_power_w` "
        "times the mode's `power_pct`. [W]",
    )
