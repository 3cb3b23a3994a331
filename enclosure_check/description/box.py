"""Models of the box: its size, tilt, walls and how each wall is mounted."""

from typing import ClassVar, Literal

from pydantic import Field

from enclosure_check.description.base import (
    AngleDeg,
    ContactWPerM2K,
    DistanceMm,
    LengthMm,
    Name,
    Strict,
    TemperatureC,
)
from enclosure_check.description.names import MountingKind
from enclosure_check.description.opening import Opening


class Tilt(Strict):
    """How the whole box stands in the gravity field; first the lean, then the roll."""

    lean_back_deg: AngleDeg = Field(
        0.0, description="Rotation that moves the top towards the rear. [deg]"
    )
    roll_right_deg: AngleDeg = Field(
        0.0, description="Rotation that moves the top towards the right, seen from the front. [deg]"
    )


class Box(Strict):
    """Size and attitude of the box."""

    width_mm: LengthMm = Field(description="Left to right, seen from the front. [mm]")
    height_mm: LengthMm = Field(description="Bottom to top. [mm]")
    depth_mm: LengthMm = Field(description="Front to rear. [mm]")
    dimensions: Literal["inside", "outside"] = Field(
        "inside", description="Whether the three sizes are those of the cavity or of the housing."
    )
    tilt: Tilt = Field(default_factory=Tilt, description="How the box stands in gravity.")


class Mounting(Strict):
    """What the outside of a wall faces.

    ``open_air``: free air. ``against_surface``: a surface across a gap. ``neighbour``: the wall of
    another box across a gap, as warm as this one unless said otherwise.
    ``standing_on`` and ``bolted_to``: contact with a surface. ``insulated``: no heat passes.
    """

    kind: MountingKind = Field("open_air", description="What the outside of this wall faces.")
    gap_mm: DistanceMm | None = Field(
        None,
        description="against_surface, neighbour: distance to the surface; 0.1 when it lies flush. "
        "[mm]",
    )
    edges: Literal["open", "closed"] | None = Field(
        None,
        description="against_surface, neighbour: whether air passes through the gap by its edges; "
        "open when left out.",
    )
    contact_w_per_m2k: ContactWPerM2K | None = Field(
        None,
        description="standing_on, bolted_to: conductance of the joint per area of the wall. "
        "[W/m2K]",
    )
    surface_c: TemperatureC | None = Field(
        None,
        description="Temperature of the surface; when left out that of the surrounding air, or for "
        "a neighbour that of this wall. [C]",
    )
    surface_emissivity: float | None = Field(
        None,
        ge=0,
        le=1,
        description="against_surface, neighbour: emissivity of the surface; default 0.9.",
    )


class WallDefaults(Strict):
    """What every wall is made of unless it says otherwise."""

    material: Name | None = Field(None, description="A row of `materials` or of the library.")
    thickness_mm: LengthMm | None = Field(None, description="Wall thickness. [mm]")
    finish_outside: Name | None = Field(None, description="A row of `finishes` or the library.")
    finish_inside: Name | None = Field(
        None, description="A row of `finishes` or the library; as outside when left out."
    )


class Cable(Strict):
    """Conductors that pass through a wall."""

    count: int = Field(1, ge=1, le=10_000, description="How many alike conductors.")
    conductor_mm2: float = Field(
        gt=0, le=1_000, description="Section of the copper of one conductor. [mm2]"
    )
    outer_mm: LengthMm = Field(description="Diameter over the insulation of one conductor. [mm]")
    inside_mm: LengthMm = Field(description="Length of it inside the box. [mm]")
    current_a: float = Field(0.0, ge=0, le=10_000, description="Current in each conductor. [A]")


class Wall(WallDefaults):
    """One of the six walls; what it leaves out comes from `defaults.wall`."""

    NOT_YET: ClassVar[dict[str, str]] = {"fins": "fins are not computed in this version"}
    mounting: Mounting = Field(
        default_factory=Mounting, description="What the outside of this wall faces."
    )
    cables: dict[Name, Cable] = Field(
        default_factory=dict, max_length=100, description="Conductors through this wall, by name."
    )
    openings: dict[Name, Opening] = Field(
        default_factory=dict, max_length=100, description="Openings in this wall, by name."
    )
    touch_max_c: TemperatureC | None = Field(
        None,
        description="Highest outside temperature allowed for touch; overrides "
        "`requirements.touch_max_c` for this wall. [C]",
    )
