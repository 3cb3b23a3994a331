"""Puts the findings of one solved case together."""

from enclosure_check.description.case import Case, Note
from enclosure_check.findings.certainty import BandCheck
from enclosure_check.findings.confidence import Bands, bands
from enclosure_check.findings.hand import hand_estimate
from enclosure_check.findings.headroom import headroom
from enclosure_check.findings.heat import (
    air_finding,
    heat_balance,
    hottest_cell,
    wall_findings,
)
from enclosure_check.findings.parts import (
    board_findings,
    part_findings,
    part_heat,
    point,
)
from enclosure_check.findings.power_budget import budget_warnings, power_budget
from enclosure_check.findings.ranges import range_findings, range_warnings
from enclosure_check.findings.readings import reading_bias, reading_findings, reading_node
from enclosure_check.findings.rebuilt import Rebuild
from enclosure_check.findings.results import (
    ConditionFinding,
    OpeningsFinding,
    PartFinding,
    SolverFinding,
    Verdict,
    WallFinding,
    worst,
)
from enclosure_check.findings.solved import Solved

# A band smaller than this is not checked to second order: its ends hardly differ. [K]
LEAST_CHECKED_BAND_K = 1.5
# Share of the band that its ends to second order may lie off to be called fair.
FAIR_SHARE = 0.1


def assess(solved: Solved, rebuild: Rebuild | None = None) -> ConditionFinding:
    """Give everything found for one solved case; see `confidence.bands` for ``rebuild``."""
    case, solution = solved.case, solved.solution
    own = bands(solved, reported_nodes(solved), rebuild)
    parts = part_findings(solved, own)
    readings = reading_findings(solved, own)
    check, band_doubts = _band_check(solved, own, parts)
    ranges = range_findings(solved)
    walls = wall_findings(solved, ranges, own)
    verdicts: list[Verdict] = [part.verdict for part in parts]
    verdicts += [wall.touch_verdict for wall in walls if wall.touch_verdict is not None]
    balance = heat_balance(solved, walls)
    budget = power_budget(case, balance.generated_w)
    return ConditionFinding(
        name=case.condition,
        verdict=worst(verdicts),
        option=case.option,
        mode=case.mode,
        surrounding_air_c=case.surroundings.air_c,
        altitude_m=case.surroundings.altitude_m,
        wind_m_per_s=case.surroundings.wind_m_per_s,
        wind_from=case.surroundings.wind_from,
        confidence_pct=case.confidence_pct,
        parts=parts,
        part_heat=part_heat(solved),
        boards=board_findings(solved),
        air=air_finding(solved, own),
        walls=walls,
        heat_balance=balance,
        power_budget=budget,
        headroom=headroom(solved, parts, walls),
        hand_estimate=hand_estimate(solved),
        openings=_openings(solved),
        solver=SolverFinding(
            unknowns=len(solved.network.unknown),
            iterations=int(solution.steps[0]),
            fallbacks=int(solution.fallbacks[0]),
            worst_imbalance_w=float(solution.worst_imbalance_w[0]),
            worst_node=solved.network.node_labels[int(solution.worst_node[0])],
        ),
        ranges=ranges,
        readings=readings,
        reading_bias=reading_bias(readings),
        band_check=check,
        warnings=(
            *(_note(note) for note in case.warnings),
            *_missing(case, parts, walls),
            *budget_warnings(budget),
            *range_warnings(ranges),
            *_unfair(own, check),
            *band_doubts,
        ),
        assumptions=case.assumptions,
    )


def _openings(solved: Solved) -> OpeningsFinding:
    if not solved.case.vented:
        return OpeningsFinding(0.0, None, ())
    from enclosure_check.findings.openings import openings_finding

    return openings_finding(solved)


def _note(note: Note) -> str:
    return f"{'.'.join(str(step) for step in note.path)}: {note.message}"


def _missing(
    case: Case, parts: tuple[PartFinding, ...], walls: tuple[WallFinding, ...]
) -> list[str]:
    """Say what cannot be judged for want of a limit or of confidence."""
    lines = []
    if not parts and all(wall.touch_max_c is None for wall in walls):
        lines.append("no limit is stated anywhere, so there is nothing to fail")
    without = [name for name, part in case.parts.items() if not part.limits]
    if without and parts:
        lines.append(f"no limit stated, so not judged: {', '.join(without)}")
    return lines


# Bands ------------------------------------------------------------------------------------


def reported_nodes(solved: Solved) -> list[int]:
    """Give the nodes of all temperatures that are reported with a band."""
    places = solved.network.places
    nodes = [
        point(solved, part.name, limit.kind)
        for part in solved.case.parts.values()
        for limit in part.limits
    ]
    nodes += [reading_node(solved, reading) for reading in solved.case.readings]
    for wall in solved.case.walls:
        nodes += [places.wall_outside[wall].mean, places.wall_inside[wall].mean]
        nodes.append(hottest_cell(solved, wall))
    return [*nodes, places.air, *places.air_nodes.tolist()]


def _band_check(
    solved: Solved, own: Bands | None, parts: tuple[PartFinding, ...]
) -> tuple[BandCheck | None, list[str]]:
    """Give the ends of the band of the smallest margin's part to second order, or say why not."""
    if own is None or not parts:
        return None, []
    worst_part = parts[0]
    band = worst_part.band_k
    if band is None or band < LEAST_CHECKED_BAND_K:
        return None, []
    ends = own.ends(point(solved, worst_part.name, worst_part.limit_kind))
    if ends is None:
        at = f"{worst_part.name} {worst_part.limit_kind}"
        return None, [
            f"the band of {at}, +-{band:.1f} K, holds to first order only: its ends could not be "
            "followed"
        ]
    low, high = ends
    off = max(abs(high - band), abs(low + band))
    fair = off <= FAIR_SHARE * band
    return BandCheck(worst_part.name, worst_part.limit_kind, band, low, high, fair), []


def _unfair(own: Bands | None, check: BandCheck | None) -> list[str]:
    """Say where bands cannot be taken at their word."""
    if own is None:
        return ["no band was found: the balance hardly determines the temperatures"]
    if check is None or check.fair:
        return []
    return [
        f"the band of {check.name} {check.limit_kind}, +-{check.band_k:.1f} K to first order, "
        f"reaches from {check.lower_k:+.1f} to {check.upper_k:+.1f} K to second order; other "
        "bands may lean as much"
    ]
