"""What the document says of the power that goes into the box and out of it again."""

from pydantic import Field

from enclosure_check.description.base import Name, PercentUpTo100, PowerW, Strict


class PowerBudget(Strict):
    """Power in against power out; what stays must be the heat of parts, boards and cables."""

    power_in_w: PowerW = Field(
        description="Power put into the box at its terminals, scaled by the mode's `power_pct`. [W]"
    )
    power_in_by_mode_w: dict[Name, PowerW] = Field(
        default_factory=dict,
        description="The same by operating mode; a mode not named here takes `power_in_w` times "
        "the mode's `power_pct`. [W]",
    )
    power_out_w: PowerW = Field(
        0.0,
        description="Power delivered out of the box: loads, feeds of other devices, transmitted "
        "power; scaled as `power_in_w`. [W]",
    )
    power_out_by_mode_w: dict[Name, PowerW] = Field(
        default_factory=dict, description="The same by operating mode. [W]"
    )
    tolerance_pct: PercentUpTo100 = Field(
        5.0,
        description="Difference between what stays and the heat listed that is no warning, in "
        "percent of the power in. [%]",
    )
