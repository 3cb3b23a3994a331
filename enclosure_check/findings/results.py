"""The result of a check, as it is reported: plain frozen records, one description per field.

Temperatures in Celsius, powers in W, lengths in mm: this is what people and other programs read.
The descriptions make up the JSON Schema of the report.
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from typing import Annotated, Literal

from enclosure_check.findings.about import about as _about
from enclosure_check.findings.baseline import Baseline
from enclosure_check.findings.certainty import (
    BAND,
    BandCheck,
    Contribution,
    ReadingBias,
    ReadingFinding,
    Sensitivities,
)
from enclosure_check.findings.stated import PartListFinding, PowerBudgetFinding
from enclosure_check.records import dataclass

Verdict = Literal["pass", "marginal", "fail"]
Regime = Literal["forced", "mixed", "natural"]
VERDICTS: tuple[Verdict, ...] = ("pass", "marginal", "fail")


@dataclass(frozen=True)
class Position:
    """Where something stands in the document; both count from 1."""

    line: Annotated[int, _about("Line.")]
    column: Annotated[int, _about("Column, in characters.")]
    file: Annotated[str | None, _about("The part list it stands in; null for the document itself.")]


@dataclass(frozen=True)
class PartFinding:
    """One part against one of its limits."""

    name: Annotated[str, _about("Reference of the part.")]
    limit_kind: Annotated[
        Literal["junction", "case", "board", "air"], _about("The point the limit holds for.")
    ]
    limit_side: Annotated[Literal["max", "min"], _about("Highest or lowest temperature allowed.")]
    temperature_c: Annotated[float, _about("Temperature of that point. [C]")]
    band_k: Annotated[
        float | None,
        _about("Half-width of its band at about 95 % (k = 2); null where none could be found. [K]"),
    ]
    limit_c: Annotated[float, _about("The limit. [C]")]
    derated: Annotated[bool, _about("Whether the limit comes from a derating curve.")]
    margin_k: Annotated[float, _about("Distance to the limit, negative beyond it. [K]")]
    verdict: Annotated[Verdict, _about("Whether it holds.")]
    local_air_c: Annotated[float, _about("Air around the part. [C]")]
    position: Annotated[
        Position | None, _about("Where the part stands in the document; null if unknown.")
    ]
    contributions: Annotated[
        tuple[Contribution, ...], _about("What the band is made of, the largest first.")
    ]


@dataclass(frozen=True)
class PartHeat:
    """Where the heat of one part goes; negative where it takes heat up."""

    name: Annotated[str, _about("Reference of the part.")]
    power_w: Annotated[float, _about("Power it turns to heat. [W]")]
    junction_c: Annotated[float, _about("Junction temperature. [C]")]
    case_c: Annotated[float, _about("Temperature of its outer surface. [C]")]
    board_c: Annotated[float | None, _about("Board under it; null off boards. [C]")]
    to_mount_w: Annotated[float, _about("To the board or wall it sits on. [W]")]
    to_pad_w: Annotated[float, _about("Through its pad, or the filler over it. [W]")]
    to_air_w: Annotated[
        float, _about("To the air by convection; through still air to a can over it. [W]")
    ]
    to_radiation_w: Annotated[float, _about("To other surfaces by radiation. [W]")]


@dataclass(frozen=True)
class BoardFinding:
    """One board: its mean, its hottest place and its map."""

    name: Annotated[str, _about("Name of the board.")]
    mean_c: Annotated[float, _about("Mean. [C]")]
    hottest_c: Annotated[float, _about("Hottest place, often under the middle of a part. [C]")]
    hottest_at: Annotated[str | None, _about("The part there; null where there is none.")]
    map_c: Annotated[
        tuple[tuple[float, ...], ...],
        _about(
            "Temperatures of its cells, rows from the upper (or rear) edge down, each along the "
            "box's width (or depth), as seen from the front, the right or the top. [C]"
        ),
    ]
    seen_from: Annotated[
        Literal["front", "right", "top"], _about("Where the map is looked at from.")
    ]
    hottest_at_mm: Annotated[
        tuple[float, float],
        _about("The hottest place, from the board's lower left corner so seen. [mm]"),
    ]


@dataclass(frozen=True)
class AirLayer:
    """Inside air at one height."""

    height_mm: Annotated[float, _about("Height over the lowest point of the inside. [mm]")]
    air_c: Annotated[float, _about("Air temperature there. [C]")]
    band_k: Annotated[float | None, _about(f"{BAND}. [K]")]


@dataclass(frozen=True)
class AirFinding:
    """Inside air: its mean and its profile along gravity, linear between the heights given."""

    mean_c: Annotated[float, _about("Mean. [C]")]
    mean_band_k: Annotated[float | None, _about(f"{BAND}. [K]")]
    top_c: Annotated[float, _about("At the highest point. [C]")]
    top_band_k: Annotated[float | None, _about(f"{BAND} of that. [K]")]
    profile: Annotated[tuple[AirLayer, ...], _about("From the bottom up.")]


@dataclass(frozen=True)
class WallFinding:
    """One wall; heat rates are positive when they leave the box."""

    name: Annotated[str, _about("Which wall.")]
    mounting: Annotated[str, _about("What its outside faces.")]
    outside_c: Annotated[float, _about("Mean outside temperature. [C]")]
    outside_band_k: Annotated[float | None, _about(f"{BAND} of that. [K]")]
    outside_max_c: Annotated[float, _about("Highest outside temperature. [C]")]
    outside_max_band_k: Annotated[float | None, _about(f"{BAND} of that. [K]")]
    inside_c: Annotated[float, _about("Mean inside temperature. [C]")]
    inside_band_k: Annotated[float | None, _about(f"{BAND} of that. [K]")]
    convection_w: Annotated[float, _about("To the surrounding air. [W]")]
    radiation_w: Annotated[float, _about("To surroundings and sky. [W]")]
    sun_w: Annotated[float, _about("Sun absorbed. [W]")]
    openings_w: Annotated[float, _about("Through openings in it. [W]")]
    mounting_w: Annotated[float, _about("To what it is mounted on. [W]")]
    cables_w: Annotated[float, _about("Along cables through it, from air to air. [W]")]
    touch_max_c: Annotated[float | None, _about("Highest temperature allowed for touch. [C]")]
    touch_margin_k: Annotated[float | None, _about("Distance to it. [K]")]
    touch_verdict: Annotated[Verdict | None, _about("Whether it holds.")]
    position: Annotated[
        Position | None, _about("Where the wall, or what it follows, stands; null if unknown.")
    ]
    wind_regime: Annotated[
        Regime | None,
        _about("What moves the air along it: wind, both, buoyancy; null without wind there."),
    ]


@dataclass(frozen=True)
class HeatBalance:
    """Heat in against heat out, for the whole box."""

    generated_w: Annotated[
        float, _about("Power of all parts and boards, and loss of cables inside. [W]")
    ]
    sun_w: Annotated[float, _about("Sun absorbed. [W]")]
    convection_w: Annotated[float, _about("Leaves by convection. [W]")]
    radiation_w: Annotated[float, _about("Leaves by radiation. [W]")]
    openings_w: Annotated[float, _about("Leaves through openings. [W]")]
    mounting_w: Annotated[float, _about("Leaves to what the box is mounted on. [W]")]
    cables_w: Annotated[float, _about("Leaves along cables. [W]")]
    imbalance_w: Annotated[float, _about("In less out. [W]")]


@dataclass(frozen=True)
class Headroom:
    """How far ambient temperature and power can rise until a limit is met."""

    wanted_margin_k: Annotated[float, _about("Margin kept to the limits. [K]")]
    highest_air_c: Annotated[
        float | None,
        _about("Highest surrounding air, all surroundings rising together; null if none. [C]"),
    ]
    air_limited_by: Annotated[str | None, _about("The limit met there.")]
    power_pct: Annotated[
        float | None,
        _about("Power at which a limit is met, in percent of this case; null if none. [%]"),
    ]
    power_limited_by: Annotated[str | None, _about("The limit met there.")]


@dataclass(frozen=True)
class HandEstimate:
    """What a hand calculation gives, beside the answer; not used for any verdict."""

    heat_w: Annotated[float, _about("Heat that leaves by the open walls. [W]")]
    area_m2: Annotated[float, _about("Area of the open walls. [m2]")]
    flux_w_per_m2: Annotated[float, _about("Heat over area. [W/m2]")]
    film_w_per_m2k: Annotated[
        float | None, _about("Heat over area and mean wall rise of the answer. [W/m2K]")
    ]
    wall_rise_k: Annotated[float, _about("Area-mean rise of the open walls in the answer. [K]")]
    plates_wall_rise_k: Annotated[
        float | None,
        _about(
            "Rise of an isothermal box by isolated-plate laws and radiation to air temperature. [K]"
        ),
    ]


@dataclass(frozen=True)
class OpeningFinding:
    """Air through one opening that is not closed; it may come in and go out at once."""

    name: Annotated[str, _about("Name of the opening.")]
    wall: Annotated[str, _about("Wall it is in.")]
    kind: Annotated[str, _about("What kind of opening.")]
    height_mm: Annotated[
        float, _about("Height of its middle over the lowest point of the inside. [mm]")
    ]
    free_area_mm2: Annotated[float, _about("Free area, blocked shares taken off. [mm2]")]
    inflow_g_per_s: Annotated[float, _about("Air that comes in. [g/s]")]
    outflow_g_per_s: Annotated[float, _about("Air that goes out. [g/s]")]
    air_out_c: Annotated[float | None, _about("Air that goes out; null where none does. [C]")]
    velocity_m_per_s: Annotated[
        float, _about("Mean velocity of the larger of the two flows in the free area. [m/s]")
    ]
    reynolds: Annotated[float, _about("Reynolds number of it on the diameter of a hole.")]
    loss_coefficient: Annotated[
        float, _about("Loss in velocity heads of it, viscosity and filter counted.")
    ]
    heat_w: Annotated[float, _about("Heat that leaves with the air. [W]")]


@dataclass(frozen=True)
class OpeningsFinding:
    """Flow through openings; none in a sealed box."""

    flow_g_per_s: Annotated[float, _about("Air flow through the box. [g/s]")]
    neutral_height_mm: Annotated[
        float | None,
        _about(
            "Height over the lowest point of the inside at which the pressure is that outside; air "
            "leaves by openings above it where the inside is warmer; null if there is none. [mm]"
        ),
    ]
    each: Annotated[tuple[OpeningFinding, ...], _about("By wall and opening.")]


@dataclass(frozen=True)
class SolverFinding:
    """How well the balance was met."""

    unknowns: Annotated[int, _about("Temperatures found.")]
    iterations: Annotated[int, _about("Newton steps.")]
    fallbacks: Annotated[int, _about("Steps taken back.")]
    worst_imbalance_w: Annotated[float, _about("Largest imbalance of a node. [W]")]
    worst_node: Annotated[str, _about("Where it is.")]


@dataclass(frozen=True)
class RangeFinding:
    """One film law where it was used, against the range it was published for."""

    surface: Annotated[str, _about("Surface.")]
    correlation: Annotated[str, _about("Key of the law, see the method.")]
    length_mm: Annotated[float, _about("Characteristic length. [mm]")]
    rise_k: Annotated[float, _about("Surface minus air temperature. [K]")]
    grashof: Annotated[float, _about("Grashof number.")]
    prandtl: Annotated[float, _about("Prandtl number.")]
    rayleigh: Annotated[float, _about("Rayleigh number.")]
    nusselt: Annotated[float, _about("Nusselt number.")]
    film_w_per_m2k: Annotated[float, _about("Film coefficient. [W/m2K]")]
    valid_from: Annotated[float, _about("Lower end of the law's range of `range_of`.")]
    valid_to: Annotated[
        float | None,
        _about("Upper end of the law's range of `range_of`; null when it has none."),
    ]
    inside_range: Annotated[bool, _about("Whether the law is used inside its range.")]
    outside_by: Annotated[
        float, _about("That number over the end of the range it passes, 1 inside.")
    ]
    range_of: Annotated[
        Literal["rayleigh", "reynolds"], _about("The number the law's range is given in.")
    ]
    reynolds: Annotated[float | None, _about("Reynolds number; null for free convection.")]
    gr_over_re2: Annotated[
        float | None,
        _about("Grashof over squared Reynolds number; null for free convection."),
    ]
    regime: Annotated[
        Regime | None,
        _about("By that ratio: forced below 0.1, natural above 10; null for free convection."),
    ]


@dataclass(frozen=True)
class ConditionFinding:
    """Everything found for one condition."""

    name: Annotated[str, _about("Name of the condition; base when there are none.")]
    verdict: Annotated[Verdict, _about("The worst verdict in it.")]
    option: Annotated[str | None, _about("Design option applied.")]
    mode: Annotated[str | None, _about("Operating mode.")]
    surrounding_air_c: Annotated[float, _about("Surrounding air. [C]")]
    altitude_m: Annotated[float, _about("Altitude. [m]")]
    wind_m_per_s: Annotated[float, _about("Wind past the box. [m/s]")]
    wind_from: Annotated[str | None, _about("Where it comes from; null from any side.")]
    confidence_pct: Annotated[
        float | None, _about("Confidence wanted in the margin; null where none is stated. [%]")
    ]
    parts: Annotated[tuple[PartFinding, ...], _about("Worst margin first.")]
    part_heat: Annotated[tuple[PartHeat, ...], _about("Hottest first.")]
    boards: Annotated[tuple[BoardFinding, ...], _about("By board.")]
    air: Annotated[AirFinding, _about("Inside air.")]
    walls: Annotated[tuple[WallFinding, ...], _about("By wall.")]
    heat_balance: Annotated[HeatBalance, _about("Heat in against heat out.")]
    power_budget: Annotated[
        PowerBudgetFinding | None, _about("Power in against power out; null where not stated.")
    ]
    headroom: Annotated[Headroom, _about("How far ambient and power can rise.")]
    hand_estimate: Annotated[HandEstimate, _about("A hand calculation beside the answer.")]
    openings: Annotated[OpeningsFinding, _about("Flow through openings.")]
    solver: Annotated[SolverFinding, _about("How well the balance was met.")]
    ranges: Annotated[tuple[RangeFinding, ...], _about("Every film law used.")]
    readings: Annotated[tuple[ReadingFinding, ...], _about("Measured beside predicted.")]
    reading_bias: Annotated[tuple[ReadingBias, ...], _about("Readings by kind.")]
    band_check: Annotated[
        BandCheck | None,
        _about("Whether first order is fair; null where the band is too small to matter."),
    ]
    warnings: Annotated[tuple[str, ...], _about("What should be looked at.")]
    assumptions: Annotated[tuple[str, ...], _about("What was assumed because not stated.")]


@dataclass(frozen=True)
class Report:
    """The result of a check."""

    format: Annotated[Literal[1], _about("Version of this report format.")]
    version: Annotated[str, _about("Version of the program.")]
    document: Annotated[str, _about("Path of the document, as given.")]
    digest: Annotated[str, _about("SHA-256 of the document's bytes.")]
    part_lists: Annotated[tuple[PartListFinding, ...], _about("Part lists it names, as read.")]
    title: Annotated[str, _about("Title of the document.")]
    verdict: Annotated[Verdict, _about("The worst verdict of all conditions.")]
    margin_stated: Annotated[
        bool, _about("Whether the document states a margin or a confidence wanted.")
    ]
    conditions: Annotated[tuple[ConditionFinding, ...], _about("In the document's order.")]
    caution: Annotated[str, _about("What this check is not.")]
    inputs: Annotated[
        Mapping[str, float | bool | str | None],
        _about(
            "Every value the document states, the option applied, by its dotted path: what a "
            "later check compares with."
        ),
    ]
    baseline: Annotated[
        Baseline | None, _about("What changed against an earlier result; null without one.")
    ]
    sensitivities: Annotated[
        Sensitivities | None,
        _about("What moves the smallest margin of a part; null where it is not asked for."),
    ]


CAUTION = (
    "Computed, not measured: a check before a prototype, not in place of one. Where heat can "
    "hurt people or property (touch temperature, batteries, fire), the governing product "
    "standard, local codes and licensed practice decide; verify by test in the final installation."
)


def worst(verdicts: list[Verdict]) -> Verdict:
    """Give the worst of some verdicts, pass when there are none."""
    return max(verdicts, key=VERDICTS.index, default="pass")


def judge(
    margin_k: float,
    wanted_k: float,
    band_k: float | None = None,
    confidence_pct: float | None = None,
) -> Verdict:
    """Give the verdict on a margin.

    Negative fails. It passes where the margin wanted is there with the confidence wanted (one
    side of a normal distribution whose k = 2 half-width is the band); where no confidence is
    wanted, where neither the margin wanted nor the band reaches past the limit. Else it is
    marginal.
    """
    if margin_k < 0:
        return "fail"
    if band_k is None:
        needed = wanted_k
    elif confidence_pct is None:
        needed = max(wanted_k, band_k)
    else:
        needed = wanted_k + normal_quantile(confidence_pct / 100) * band_k / 2
    return "marginal" if margin_k < needed else "pass"


def normal_quantile(share: float) -> float:
    """Give the number of standard deviations below which a share of a normal distribution lies.

    Newton's method on the distribution by `math.erf`; for shares from 0.5 to below 1.
    """
    z = 0.0
    for _ in range(60):
        density = math.exp(-0.5 * z * z) / math.sqrt(2.0 * math.pi)
        below = 0.5 * (1.0 + math.erf(z / math.sqrt(2.0)))
        step = min((share - below) / density, 1.0)
        z += step
        if abs(step) < 1e-12:
            break
    return z
