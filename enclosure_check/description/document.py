"""The document as a whole."""

from typing import Annotated, Any, Literal

from pydantic import Field

from enclosure_check.description.base import (
    AmbientC,
    ConductivityWPerMK,
    Name,
    NotBoolean,
    Strict,
    TemperatureC,
    Text,
)
from enclosure_check.description.board import Board, BoardDefaults
from enclosure_check.description.box import Box, Wall, WallDefaults
from enclosure_check.description.names import LimitKind, WallName
from enclosure_check.description.part import Part, PartType, Percent
from enclosure_check.description.part_list import PartList
from enclosure_check.description.power_budget import PowerBudget
from enclosure_check.description.surroundings import Surroundings


class Defaults(Strict):
    """What walls and boards are unless they say otherwise."""

    wall: WallDefaults = Field(default_factory=WallDefaults, description="For every wall.")
    board: BoardDefaults = Field(default_factory=BoardDefaults, description="For every board.")


class MaterialRow(Strict):
    """A material of the document's own."""

    conductivity_w_per_mk: ConductivityWPerMK = Field(description="Conductivity. [W/mK]")
    density_kg_per_m3: float = Field(1000.0, gt=0, le=30_000, description="Density. [kg/m3]")
    heat_capacity_j_per_kgk: float = Field(
        1000.0, gt=0, le=10_000, description="Specific heat capacity. [J/kgK]"
    )
    source: Text | None = Field(None, description="Where the numbers come from.")


class FinishRow(Strict):
    """A surface finish of the document's own."""

    emissivity: float = Field(ge=0, le=1, description="Long-wave hemispherical emissivity.")
    solar_absorptivity: float = Field(0.6, ge=0, le=1, description="Share of sunlight absorbed.")
    source: Text | None = Field(None, description="Where the numbers come from.")


class Mode(Strict):
    """An operating mode."""

    description: Text | None = Field(None, description="Free text.")
    power_pct: Percent = Field(
        100.0, description="Scales every power that has no value of its own for this mode. [%]"
    )


class Requirements(Strict):
    """What the box must keep beyond the bare limits."""

    margin_k: float | None = Field(
        None, ge=0, le=200, description="Margin wanted to every limit. [K]"
    )
    confidence_pct: float | None = Field(
        None,
        ge=50,
        lt=100,
        description="Confidence wanted in that margin, on one side; where it is left out, the band "
        "at about 95 % must not reach past a limit. [%]",
    )
    touch_max_c: TemperatureC | None = Field(
        None, description="Highest outside temperature of any wall, for touch. [C]"
    )


class Tolerance(Strict):
    """Half-width of what a number may be, at about 95 %; exactly one of the two."""

    pct: float | None = Field(None, ge=0, le=100, description="In percent of the number. [%]")
    plus_minus: float | None = Field(
        None, ge=0, le=100_000, description="In the number's own unit."
    )


class WallReading(Strict):
    """Thermocouple readings on a wall."""

    outside_c: TemperatureC | None = Field(None, description="On the outside. [C]")
    inside_c: TemperatureC | None = Field(None, description="On the inside. [C]")


class Measured(Strict):
    """Readings of one run on the bench."""

    condition: Name | None = Field(
        None, description="The condition it was run under; the base when there are none."
    )
    description: Text | None = Field(None, description="Free text.")
    parts: dict[Name, dict[LimitKind, TemperatureC]] = Field(
        default_factory=dict, description="Readings by part and point. [C]"
    )
    walls: dict[WallName, WallReading] = Field(default_factory=dict, description="By wall.")
    air_c: AmbientC | None = Field(None, description="Mean inside air. [C]")


class Document(Strict):
    """A box, what is in it and what is around it."""

    format: Annotated[Literal[1], NotBoolean] = Field(
        1, description="Version of this document format."
    )
    title: Name = Field(description="What this is, in a line.")
    description: Text | None = Field(None, description="Free text.")
    defaults: Defaults = Field(
        default_factory=Defaults, description="What is so unless said otherwise."
    )
    materials: dict[Name, MaterialRow] = Field(
        default_factory=dict, max_length=500, description="Materials of your own, by name."
    )
    finishes: dict[Name, FinishRow] = Field(
        default_factory=dict, max_length=500, description="Finishes of your own, by name."
    )
    box: Box = Field(description="Size and attitude of the box.")
    walls: dict[WallName, Wall] = Field(
        default_factory=dict, description="What differs from `defaults.wall`, by wall."
    )
    boards: dict[Name, Board] = Field(
        default_factory=dict, max_length=50, description="Boards by name."
    )
    part_types: dict[Name, PartType] = Field(
        default_factory=dict, max_length=1000, description="What parts of one kind share, by name."
    )
    part_lists: dict[Name, PartList] = Field(
        default_factory=dict,
        max_length=20,
        description="Files that hold parts, by name; joined by reference, below `parts`.",
    )
    parts: dict[Name, Part] = Field(
        default_factory=dict,
        max_length=5000,
        description="Parts by reference. What stands here is merged into parts of the same "
        "reference from `part_lists`; null leaves one out.",
    )
    modes: dict[Name, Mode] = Field(
        default_factory=dict, max_length=100, description="Operating modes by name."
    )
    mode: Name | None = Field(
        None, description="The operating mode that applies; full power when left out."
    )
    power_budget: PowerBudget | None = Field(
        None, description="Power put into the box, to compare with the heat of what is listed."
    )
    surroundings: Surroundings = Field(description="What the box stands in.")
    stirred: bool = Field(
        False,
        description="Whether a fan keeps the inside air at one temperature; films stay those of "
        "free convection.",
    )
    requirements: Requirements = Field(
        default_factory=Requirements, description="What must be kept beyond the limits."
    )
    tolerances: dict[Name, Tolerance] = Field(
        default_factory=dict,
        max_length=50,
        description="Tolerances by dotted path of a number, `*` standing for any one name.",
    )
    measured: dict[Name, Measured] = Field(
        default_factory=dict, max_length=100, description="Readings from the bench by name."
    )
    options: dict[Name, dict[Name, Any]] = Field(
        default_factory=dict,
        description="Design options by name, each a JSON merge patch (RFC 7396) of this document.",
    )
    conditions: dict[Name, dict[Name, Any]] = Field(
        default_factory=dict,
        description="Installations and cases by name, each a JSON merge patch (RFC 7396) applied "
        "after the option; without any the document runs as it stands.",
    )
