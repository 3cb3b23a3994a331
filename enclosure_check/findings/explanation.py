"""Where the heat of one part goes and what its margin hangs on, as it is reported."""

from __future__ import annotations

from typing import Annotated, Literal

from enclosure_check.findings.about import about as _about
from enclosure_check.findings.results import Report
from enclosure_check.records import dataclass


@dataclass(frozen=True)
class HeatSource:
    """What brings heat to a thing."""

    name: Annotated[str, _about("The thing it comes from; itself for its own power, or the sun.")]
    heat_w: Annotated[float, _about("Heat it brings. [W]")]
    share_pct: Annotated[float, _about("Of all heat that comes to the thing. [%]")]


@dataclass(frozen=True)
class ThingHeat:
    """One physical thing: what comes to it by links and sources leaves it by links."""

    name: Annotated[str, _about("Part, board, face of a wall, air, or what stands outside.")]
    temperature_c: Annotated[float, _about("Its mean. [C]")]
    outside: Annotated[bool, _about("Whether its temperature is given: here the heat ends.")]
    put_in_w: Annotated[float, _about("Power and sun put into it. [W]")]
    in_w: Annotated[float, _about("What links bring. [W]")]
    out_w: Annotated[float, _about("What links take away. [W]")]
    share_pct: Annotated[
        float,
        _about(
            "Share of the part's heat that passes it, all heat in a thing taken as mixed; may "
            "pass 100 where heat comes back. [%]"
        ),
    ]
    heated_by: Annotated[tuple[HeatSource, ...], _about("What comes to it, most first.")]


@dataclass(frozen=True)
class LinkLaw:
    """A law that tells what a link passes."""

    key: Annotated[
        str | None,
        _about("Key in the register of laws; null for stated numbers, plain physics."),
    ]
    name: Annotated[str, _about("Its name.")]
    films_w_per_m2k: Annotated[
        tuple[float, float] | None, _about("Least and greatest film coefficient. [W/m2K]")
    ]
    inside_range: Annotated[
        bool | None, _about("Whether used inside its range; null where that is not audited.")
    ]
    outside_by: Annotated[
        float | None, _about("Group of the law over the end of the range it passes, furthest.")
    ]


@dataclass(frozen=True)
class LinkHeat:
    """All heat that goes from one thing to another in one way."""

    start: Annotated[str, _about("The thing it leaves.")]
    end: Annotated[str, _about("The thing it enters; the same for spreading along a thing.")]
    way: Annotated[str, _about("How it goes.")]
    heat_w: Annotated[
        float | None,
        _about("Heat. Of spreading: what the part explained puts into its board; else null. [W]"),
    ]
    share_pct: Annotated[
        float | None,
        _about("Share of the part's heat that goes this way; null where that is. [%]"),
    ]
    drop_k: Annotated[
        float | None,
        _about(
            "Difference of the two temperatures as the things tell them, so that they add up along "
            "a chain. A part gives to its board under it, and spreading leads from there to the "
            "mean; of other spreading null. [K]"
        ),
    ]
    conductance_w_per_k: Annotated[
        float | None, _about("Heat over the mean difference that drives it where it goes. [W/K]")
    ]
    laws: Annotated[tuple[LinkLaw, ...], _about("What it follows.")]
    k_per_pct: Annotated[
        float, _about("Change of the temperature explained by 1 % more conductance. [K/%]")
    ]
    one_kelvin_resistance_pct: Annotated[
        float | None,
        _about(
            "Change of this resistance alone that gives 1 K more margin, estimated; null where a "
            "fourfold change is not enough, and where the link is not in the tree. [%]"
        ),
    ]
    one_kelvin_w_per_k: Annotated[
        float | None, _about("The same as a change of conductance. [W/K]")
    ]


@dataclass(frozen=True)
class PowerCost:
    """What one source of heat does to the temperature explained."""

    name: Annotated[str, _about("Part, board, cable, or wall in the sun.")]
    kind: Annotated[Literal["power", "sun"], _about("Whether its own power or the sun.")]
    heat_w: Annotated[float, _about("Heat it puts in. [W]")]
    k_per_w: Annotated[float, _about("What a watt more there adds. [K/W]")]
    adds_k: Annotated[float, _about("Heat times that: what it adds now, about. [K]")]
    one_kelvin_w: Annotated[
        float | None,
        _about("Change that gives 1 K more margin; null where all of it gives less. [W]"),
    ]


@dataclass(frozen=True)
class TreeStep:
    """One line of the tree from the part to the surroundings."""

    depth: Annotated[int, _about("Links passed from the part.")]
    link: Annotated[int, _about("Number of the link in ``links``, from 0.")]
    inward: Annotated[bool, _about("Whether it brings heat to the thing above.")]
    again: Annotated[bool, _about("Whether the thing it leads to is followed elsewhere.")]


@dataclass(frozen=True)
class HeatEnd:
    """Where heat leaves at last."""

    name: Annotated[str, _about("What it leaves to.")]
    share_pct: Annotated[float, _about("Share of the part's heat. [%]")]


@dataclass(frozen=True)
class Explanation:
    """Where the heat of one part goes under one condition, and what its margin hangs on."""

    part: Annotated[str, _about("Reference of the part.")]
    condition: Annotated[str, _about("Name of the condition.")]
    point: Annotated[Literal["junction", "case", "board", "air"], _about("The point explained.")]
    limit_side: Annotated[
        Literal["max", "min"] | None, _about("Which limit of it; null where none is stated.")
    ]
    temperature_c: Annotated[float, _about("Temperature of that point. [C]")]
    limit_c: Annotated[float | None, _about("Its limit. [C]")]
    margin_k: Annotated[float | None, _about("Its margin, the smallest of the part. [K]")]
    heat_w: Annotated[float, _about("Heat that passes the part: own and brought to it. [W]")]
    root: Annotated[str, _about("The thing the tree starts from.")]
    things: Annotated[tuple[ThingHeat, ...], _about("Every thing that heat passes.")]
    links: Annotated[tuple[LinkHeat, ...], _about("Every link that heat passes.")]
    tree: Annotated[tuple[TreeStep, ...], _about("The links that matter, from the part on.")]
    pruned_below_pct: Annotated[
        float,
        _about(
            "Links are left out of the tree that carry less of the part's heat than this and whose "
            "effect is less than this share of the strongest. [%]"
        ),
    ]
    ends: Annotated[tuple[HeatEnd, ...], _about("Where the part's heat leaves at last.")]
    powers: Annotated[tuple[PowerCost, ...], _about("What heats it, most first.")]


@dataclass(frozen=True)
class ExplainedReport(Report):
    """The result of a check that explains a part."""

    explain: Annotated[
        Explanation | None, _about("Where a part's heat goes; present when asked for.")
    ] = None
