"""Margins of parts against their limits, and where their heat goes."""

from typing import Literal

from enclosure_check.description.case import LimitCase, PartCase
from enclosure_check.findings.confidence import Bands
from enclosure_check.findings.position import position_of
from enclosure_check.findings.results import (
    BoardFinding,
    PartFinding,
    PartHeat,
    judge,
)
from enclosure_check.findings.solved import Solved


def part_findings(solved: Solved, bands: Bands | None) -> tuple[PartFinding, ...]:
    """Give every part against every limit, the worst margin first."""
    findings = [
        _finding(solved, bands, part, limit, side)
        for part in solved.case.parts.values()
        for limit in part.limits
        for side in ("max", "min")
        if getattr(limit, f"{side}_c") is not None
    ]
    return tuple(sorted(findings, key=lambda finding: finding.margin_k))


def _finding(
    solved: Solved, bands: Bands | None, part: PartCase, limit: LimitCase, side: str
) -> PartFinding:
    case, node = solved.case, point(solved, part.name, limit.kind)
    temperature = solved.at(node)
    allowed = limit.max_c if side == "max" else limit.min_c
    assert allowed is not None
    margin = allowed - temperature if side == "max" else temperature - allowed
    band = None if bands is None else bands.band_k(node)
    return PartFinding(
        name=part.name,
        limit_kind=limit.kind,
        limit_side="max" if side == "max" else "min",
        temperature_c=temperature,
        band_k=band,
        limit_c=allowed,
        derated=limit.derated and side == "max",
        margin_k=margin,
        verdict=judge(margin, case.margin_k or 0.0, band, case.confidence_pct),
        local_air_c=float(solved.temperature_c[solved.network.places.parts[part.name].air]),
        position=position_of(case.positions.parts, part.name, case.positions.files),
        contributions=() if bands is None else bands.contributions(node),
    )


def point(solved: Solved, part: str, kind: str) -> int:
    """Give the node of a point of a part: junction, case, board or air."""
    node = getattr(solved.network.places.parts[part], kind)
    if node is None:
        raise ValueError(f"part {part!r} has no {kind}")
    return int(node)


def point_c(solved: Solved, part: str, kind: str) -> float:
    """Give the temperature of a point of a part: junction, case, board or air [C]."""
    return solved.at(point(solved, part, kind))


def part_heat(solved: Solved) -> tuple[PartHeat, ...]:
    """Give where the heat of each part goes, the hottest part first."""
    rows = []
    for name, nodes in solved.network.places.parts.items():
        owner = f"part:{name}"
        rows.append(
            PartHeat(
                name=name,
                power_w=solved.put_in(owner, "power"),
                junction_c=float(solved.temperature_c[nodes.junction]),
                case_c=float(solved.temperature_c[nodes.case]),
                board_c=None if nodes.board is None else float(solved.temperature_c[nodes.board]),
                to_mount_w=solved.flow(owner, "to_board") + solved.flow(owner, "to_wall"),
                to_pad_w=solved.flow(owner, "pad") + solved.flow(owner, "filler"),
                to_air_w=solved.flow(owner, "convection_inside") + solved.flow(owner, "still_air"),
                to_radiation_w=solved.flow(owner, "radiation_inside"),
            )
        )
    return tuple(sorted(rows, key=lambda row: -row.junction_c))


# Where a board that lies across each axis of the box is looked at from.
_SEEN_FROM: tuple[Literal["right", "front", "top"], ...] = ("right", "front", "top")


def board_findings(solved: Solved) -> tuple[BoardFinding, ...]:
    """Give each board's mean, its hottest place and its map."""
    return tuple(_board(solved, name) for name in solved.case.boards)


def _board(solved: Solved, name: str) -> BoardFinding:
    places, board = solved.network.places, solved.case.boards[name]
    plate = places.boards[name]
    first, second = (axis for axis in range(3) if axis != board.axis)
    cells = solved.temperature_c[plate.cells]
    hottest, where = float(cells.max()), None
    row, column = divmod(int(cells.argmax()), cells.shape[1])
    at = (
        board.size_mm[first] * (row + 0.5) / cells.shape[0],
        board.size_mm[second] * (column + 0.5) / cells.shape[1],
    )
    for part in solved.case.parts.values():
        nodes = places.parts[part.name]
        if part.host != name or nodes.board is None:
            continue
        entering = solved.flow(f"part:{part.name}", "to_board")
        middle = solved.at(nodes.board) + entering * nodes.peak_k_per_w
        if middle > hottest:
            hottest, where = middle, part.name
            x, y = (part.centre_mm[axis] - board.low_mm[axis] for axis in (first, second))
            at = (x, y)
    return BoardFinding(
        name=name,
        mean_c=solved.at(plate.mean),
        hottest_c=hottest,
        hottest_at=where,
        map_c=tuple(tuple(row) for row in cells.T[::-1].tolist()),
        seen_from=_SEEN_FROM[board.axis],
        hottest_at_mm=at,
    )
