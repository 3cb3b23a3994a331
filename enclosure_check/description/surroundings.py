"""Models of what surrounds the box: air, radiant surroundings, sky, sun and altitude."""

from typing import ClassVar, Literal

from pydantic import Field

from enclosure_check.description.base import AmbientC, IrradianceWPerM2, Strict, TemperatureC
from enclosure_check.description.names import WallName


class Surroundings(Strict):
    """What the box stands in."""

    NOT_YET: ClassVar[dict[str, str]] = {
        "humidity_pct": "condensation is not computed in this version",
    }
    air_c: AmbientC = Field(description="Temperature of the air around the box. [C]")
    radiant_c: TemperatureC | None = Field(
        None,
        description="Mean temperature of what the walls see other than the sky; the air's when "
        "left out. [C]",
    )
    altitude_m: float = Field(
        0.0, ge=-500, le=9_000, description="Height above sea level (pressure by ISO 2533). [m]"
    )
    sky: Literal["none", "clear", "overcast", "given"] = Field(
        "none",
        description="Sky seen by walls outdoors: none (indoors or under a roof), clear (Swinbank), "
        "overcast (as the air), or given by `sky_c`.",
    )
    sky_c: TemperatureC | None = Field(None, description="Radiant temperature of the sky. [C]")
    wind_m_per_s: float = Field(
        0.0,
        ge=0,
        le=60,
        description="Speed of the air past the box, at the box and not at a weather station; 0 is "
        "still air, the hot case. [m/s]",
    )
    wind_from: Literal["any", WallName] = Field(
        "any",
        description="The side of the box the wind comes from; any: from no certain side, each wall "
        "counts with its longer edge.",
    )
    sun_w_per_m2: dict[WallName, IrradianceWPerM2] = Field(
        default_factory=dict,
        description="Irradiance falling on each wall, direct and diffuse together, in the plane "
        "of the wall. [W/m2]",
    )
