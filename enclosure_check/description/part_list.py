"""Models of the part lists: delimited text files that hold parts, and what their columns mean."""

from typing import Annotated, Literal

from pydantic import Field, StringConstraints

from enclosure_check.description.base import Name, NotBoolean, PowerW, Strict, Text
from enclosure_check.description.board import AtMm
from enclosure_check.description.names import WallName

FileName = Annotated[str, StringConstraints(min_length=1, max_length=400)]
Pattern = Annotated[str, StringConstraints(min_length=1, max_length=80)]


class ListColumns(Strict):
    """Headings of the columns, by what they hold; capitals and spaces at the ends do not matter."""

    reference: Name = Field(description="Reference of the part, by which lists are joined.")
    x: Name | None = Field(None, description="Centre of the part to the right, in `unit`.")
    y: Name | None = Field(None, description="Centre of the part upwards, in `unit`.")
    rotation: Name | None = Field(None, description="Turn of the part in degrees.")
    side: Name | None = Field(None, description="Side of the board, in words of `sides`.")
    board: Name | None = Field(None, description="Board, in words of `boards` or by its name.")
    type: Name | None = Field(
        None, description="Package or kind, in words of `types` or a name of `part_types`."
    )
    description: Name | None = Field(None, description="Free text.")
    length: Name | None = Field(None, description="`length_mm` of the part, in `unit`.")
    width: Name | None = Field(None, description="`width_mm` of the part, in `unit`.")
    height: Name | None = Field(None, description="`height_mm` of the part, in `unit`.")
    power: Name | None = Field(None, description="`power_w` of the part, in `power_unit`.")
    power_by_mode: dict[Name, Name] = Field(
        default_factory=dict, max_length=50, description="The same for single operating modes."
    )
    theta_jc_top: Name | None = Field(None, description="`theta_jc_top_k_per_w` of the part.")
    theta_jc_bottom: Name | None = Field(None, description="`theta_jc_bottom_k_per_w` of the part.")
    theta_jb: Name | None = Field(None, description="`theta_jb_k_per_w` of the part.")
    junction_max: Name | None = Field(None, description="Highest junction temperature in Celsius.")
    case_max: Name | None = Field(None, description="Highest case temperature in Celsius.")


class PartList(Strict):
    """A text file with a row per part: a placement list, a power list or both in one."""

    description: Text | None = Field(None, description="Free text.")
    file: FileName = Field(
        description="The file, from the document's folder, which it may not leave; `/` between "
        "folders."
    )
    delimiter: Literal["comma", "semicolon", "tab"] = Field(
        "comma", description="What stands between fields."
    )
    decimal: Literal["point", "comma"] = Field("point", description="Decimal mark of its numbers.")
    encoding: Literal["utf_8", "windows_1252"] = Field(
        "utf_8", description="Encoding of the file; a byte order mark of UTF-8 or UTF-16 overrules."
    )
    unit: Literal["mm", "mil", "inch"] | None = Field(
        None, description="Unit of all its lengths; needed where it has any."
    )
    power_unit: Literal["W", "mW"] = Field("W", description="Unit of all its powers.")
    columns: ListColumns = Field(description="Which column holds what.")
    prefix: Annotated[str, StringConstraints(max_length=40)] = Field(
        "", description="Put before every reference, where boards share references."
    )
    leave_out: Annotated[list[Pattern], Field(max_length=100)] | None = Field(
        None,
        description="References of rows to pass over, such as fiducials; `*` at the end stands "
        "for any rest.",
    )
    board: Name | None = Field(None, description="Board of all its parts without one.")
    side: WallName | None = Field(
        None, description="Side of all its parts without one; `seen_from` when left out."
    )
    boards: dict[Name, Name] = Field(
        default_factory=dict,
        max_length=100,
        description="Words of its `board` column to boards of this document.",
    )
    sides: dict[Name, WallName] = Field(
        default_factory=dict,
        max_length=100,
        description="Words of its `side` column to sides of the board, each named after the wall "
        "it faces.",
    )
    types: dict[Name, Name] = Field(
        default_factory=dict,
        max_length=1000,
        description="Words of its `type` column to names of `part_types`.",
    )
    seen_from: Literal["left", "right", "front", "back", "bottom", "top", "own_side"] | None = (
        Field(
            None,
            description="The side of the board its x and y are drawn from, for parts on the other "
            "side too; `own_side` where each part's are seen from its own side. Needed with `x`.",
        )
    )
    origin_mm: AtMm | None = Field(
        None,
        description="Its origin from the board's lower left corner, as seen from there; the "
        "corner itself when left out. [mm]",
    )
    turned_deg: Annotated[Literal[0, 90, 180, 270], NotBoolean] = Field(
        0,
        description="Turn of the board in this document against the drawing, counter-clockwise "
        "as seen from there. [deg]",
    )
    fold_below_w: PowerW = Field(
        0.0,
        description="Parts with less power than this, and without a limit, are folded into "
        "the board's `other_power_w`. [W]",
    )
