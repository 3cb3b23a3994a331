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


@dataclass(frozen=True)
class Sensitivity:
    """What a number of the document buys at the smallest margin."""

    path: Annotated[str, _about("Where it stands, the option and condition applied.")]
    value: Annotated[float, _about("The number.")]
    unit: Annotated[str, _about("The unit of its changes; empty without one.")]
    margin_per_pct_k: Annotated[
        float | None,
        _about("Margin won by one percent more of it; null for a temperature in Celsius. [K]"),
    ]
    margin_per_unit_k: Annotated[float, _about("Margin won by one more of its unit. [K]")]
    installation: Annotated[
        bool, _about("Whether it is a fact of the installation, not a designer's choice.")
    ]
    route: Annotated[
        Literal["adjoint", "rebuilt"],
        _about("Found by the adjoint alone, or with the network built again."),
    ]


@dataclass(frozen=True)
class Sensitivities:
    """The numbers that move the smallest margin most."""

    name: Annotated[str, _about("Reference of the part with the smallest margin.")]
    limit_kind: Annotated[str, _about("The point.")]
    limit_side: Annotated[str, _about("Highest or lowest temperature allowed.")]
    condition: Annotated[str, _about("The condition it arises in.")]
    numbers: Annotated[
        tuple[Sensitivity, ...],
        _about(
            "Those a designer can change, then the installation's; most per percent, or per kelvin "
            "of a temperature, first."
        ),
    ]
