"""Records of the result of a check that tell how sure it is: bands, and readings beside them."""

from __future__ import annotations

from typing import Annotated, Literal

from enclosure_check.findings.about import about as _about
from enclosure_check.records import dataclass

BAND = "Half-width of the band at about 95 %"


@dataclass(frozen=True)
class Contribution:
    """One cause of a band."""

    cause: Annotated[str, _about("What is uncertain: an input, by name or path, or a law.")]
    half_width: Annotated[str, _about("How uncertain it is at about 95 %, with its unit.")]
    effect_k: Annotated[
        float, _about("What so much more of it does to the temperature, to first order. [K]")
    ]


@dataclass(frozen=True)
class ReadingFinding:
    """A thermocouple reading beside the prediction."""

    run: Annotated[str, _about("Name of the run.")]
    kind: Annotated[Literal["part", "wall", "air"], _about("What was measured.")]
    name: Annotated[str, _about("Part or wall, or air.")]
    point: Annotated[str, _about("Where on it.")]
    measured_c: Annotated[float, _about("Reading. [C]")]
    predicted_c: Annotated[float, _about("Prediction. [C]")]
    difference_k: Annotated[float, _about("Prediction minus reading. [K]")]
    band_k: Annotated[float | None, _about(f"{BAND} of the prediction. [K]")]
    inside_band: Annotated[bool | None, _about("Whether the reading lies in it.")]


@dataclass(frozen=True)
class ReadingBias:
    """All readings of one kind together."""

    kind: Annotated[Literal["part", "wall", "air"], _about("What was measured.")]
    count: Annotated[int, _about("How many readings.")]
    inside_band: Annotated[int, _about("How many of them lie in the band.")]
    mean_difference_k: Annotated[float, _about("Mean of prediction minus reading: bias. [K]")]
    rms_difference_k: Annotated[float, _about("Root of the mean square of it. [K]")]


@dataclass(frozen=True)
class BandCheck:
    """The band of the smallest margin's part by a calculation to second order."""

    name: Annotated[str, _about("Reference of the part.")]
    limit_kind: Annotated[str, _about("The point.")]
    band_k: Annotated[float, _about("To first order, as reported. [K]")]
    lower_k: Annotated[float, _about("Lower end of the band, from the best estimate. [K]")]
    upper_k: Annotated[float, _about("Upper end of the band, from the best estimate. [K]")]
    fair: Annotated[bool, _about("Whether both ends are near enough to the band reported.")]
