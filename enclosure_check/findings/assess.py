"""Puts the findings of one solved case together."""

from enclosure_check.description.case import Case, Note
from enclosure_check.findings.hand import hand_estimate
from enclosure_check.findings.headroom import headroom
from enclosure_check.findings.heat import (
    air_finding,
    heat_balance,
    wall_findings,
)
from enclosure_check.findings.openings import openings_finding
from enclosure_check.findings.parts import (
    board_findings,
    part_findings,
    part_heat,
    reading_findings,
)
from enclosure_check.findings.ranges import range_findings, range_warnings
from enclosure_check.findings.results import (
    ConditionFinding,
    PartFinding,
    SolverFinding,
    Verdict,
    WallFinding,
    worst,
)
from enclosure_check.findings.solved import Solved


def assess(solved: Solved) -> ConditionFinding:
    """Give everything found for one solved case."""
    case, solution = solved.case, solved.solution
    parts = part_findings(solved)
    ranges = range_findings(solved)
    walls = wall_findings(solved, ranges)
    verdicts: list[Verdict] = [part.verdict for part in parts]
    verdicts += [wall.touch_verdict for wall in walls if wall.touch_verdict is not None]
    return ConditionFinding(
        name=case.condition,
        verdict=worst(verdicts),
        option=case.option,
        mode=case.mode,
        surrounding_air_c=case.surroundings.air_c,
        altitude_m=case.surroundings.altitude_m,
        wind_m_per_s=case.surroundings.wind_m_per_s,
        wind_from=case.surroundings.wind_from,
        parts=parts,
        part_heat=part_heat(solved),
        boards=board_findings(solved),
        air=air_finding(solved),
        walls=walls,
        heat_balance=heat_balance(solved, walls),
        headroom=headroom(solved, parts, walls),
        hand_estimate=hand_estimate(solved),
        openings=openings_finding(solved),
        solver=SolverFinding(
            unknowns=len(solved.network.unknown),
            iterations=int(solution.steps[0]),
            fallbacks=int(solution.fallbacks[0]),
            worst_imbalance_w=float(solution.worst_imbalance_w[0]),
            worst_node=solved.network.node_labels[int(solution.worst_node[0])],
        ),
        ranges=ranges,
        readings=reading_findings(solved),
        warnings=(
            *(_note(note) for note in case.warnings),
            *_missing(case, parts, walls),
            *range_warnings(ranges),
        ),
        assumptions=case.assumptions,
    )


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
    if case.confidence_pct is not None:
        lines.append(
            "requirements.confidence_pct: bands are not computed in this version, so verdicts "
            "rest on the best estimates alone; choose margin_k with that in mind"
        )
    return lines
