"""Models of the openings of a wall: holes, vents, meshes, filters and open cable glands."""

from typing import Annotated, Literal

from pydantic import Field

from enclosure_check.description.base import CoordinateMm, LengthMm, Name, PercentUpTo100, Strict
from enclosure_check.description.names import OpeningKind
from enclosure_check.description.part import Corner

HoleCount = Annotated[int, Field(ge=1, le=100_000)]
SharePct = Annotated[float, Field(gt=0, le=100)]


class Screen(Strict):
    """A woven mesh: an insect screen or a guard.

    Either a row of the library by `type`, or wire and aperture; with neither, `insect_mesh`.
    """

    type: Name | None = Field(None, description="A mesh of the library.")
    wire_mm: LengthMm | None = Field(None, description="Diameter of the wire. [mm]")
    aperture_mm: LengthMm | None = Field(
        None, description="Clear width between two wires, both ways alike. [mm]"
    )


class Filter(Strict):
    """A filter mat over the whole outline of an opening; its loss goes with the velocity.

    Either a row of the library by `type`, or the loss of pressure read off a data sheet at a face
    velocity; with neither, `coarse_mat`. A filter is reckoned clean.
    """

    type: Name | None = Field(None, description="A filter of the library.")
    loss_pa: float | None = Field(None, gt=0, le=10_000, description="Loss of pressure. [Pa]")
    at_m_per_s: float | None = Field(
        None, gt=0, le=20, description="Velocity in front of the filter at that loss. [m/s]"
    )


class Opening(Strict):
    """An opening in a wall through which air passes.

    ``hole``: plain cut-outs, round or rectangular. ``perforated``: an area with many alike round
    holes. ``slots``: an area with parallel slots. ``louvre``: an area with blades or pressed
    louvres. ``mesh``: a cut-out closed by a woven mesh only. ``filter``: a cut-out closed by a
    filter only. ``cable_gland``: an open gland or a bushing with room around its cable.
    """

    kind: OpeningKind = Field(description="What it is; which keys it takes depends on it.")
    at_mm: Annotated[list[CoordinateMm], Field(min_length=2, max_length=2)] | None = Field(
        None,
        description="Centre of the whole outline from the corner `at_from` of the wall, seen from "
        "inside: to the right or left, then up or down; the middle of the wall when left out. [mm]",
    )
    at_from: Corner = Field(
        "lower_left",
        description="The corner of the wall `at_mm` counts from, seen from inside.",
    )
    width_mm: LengthMm | None = Field(
        None,
        description="Size to the right: of one cut-out for `hole`, else of the whole area. [mm]",
    )
    height_mm: LengthMm | None = Field(
        None, description="Size upwards: of one cut-out for `hole`, else of the whole area. [mm]"
    )
    diameter_mm: LengthMm | None = Field(
        None, description="Diameter, for a round cut-out, area or gland. [mm]"
    )
    hole_mm: LengthMm | None = Field(None, description="perforated: diameter of one hole. [mm]")
    slot_width_mm: LengthMm | None = Field(
        None, description="slots, louvre: clear width of one slot or between two blades. [mm]"
    )
    cable_mm: LengthMm | None = Field(
        None, description="cable_gland: diameter of the cable that takes up part of it. [mm]"
    )
    count: HoleCount | None = Field(
        None,
        description="hole, cable_gland: how many alike stand in a row, 1 when left out; "
        "perforated: holes in the area; slots: slots in the area.",
    )
    pitch_mm: LengthMm | None = Field(
        None, description="Centre to centre, of cut-outs in a row, holes or slots. [mm]"
    )
    run: Literal["right", "up"] = Field(
        "right",
        description="hole, cable_gland, slots: the direction in which one follows the other; slots "
        "that run to the right stand upright.",
    )
    pattern: Literal["staggered", "square"] | None = Field(
        None,
        description="perforated: how the holes of a pitch stand; staggered (rows set off by half "
        "a pitch, equilateral) when left out.",
    )
    free_area_pct: SharePct | None = Field(
        None,
        description="perforated, slots, louvre: what is open of the area; instead of pitch or "
        "count. [%]",
    )
    louvre: Name | None = Field(
        None, description="louvre: a row of the library; `fixed_blades` when left out."
    )
    thickness_mm: LengthMm | None = Field(
        None,
        description="Length of the holes along the flow; the thickness of the wall when left out. "
        "[mm]",
    )
    loss_coefficient: float | None = Field(
        None,
        gt=0,
        le=10_000,
        description="Loss coefficient of inlet and outlet together on the velocity in the free "
        "area, without what viscosity adds; instead of what follows from kind and sizes. A "
        "`screen` or `filter` comes on top.",
    )
    blocked_pct: PercentUpTo100 = Field(
        0.0, description="Share of the opening that is covered; at 100 it is closed. [%]"
    )
    screen: Screen | None = Field(
        None, description="A mesh over the opening; for `mesh` the mesh itself."
    )
    filter: Filter | None = Field(
        None, description="A filter over the opening; for `filter` the filter itself."
    )
