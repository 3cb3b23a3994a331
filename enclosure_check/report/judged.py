"""Every limit of a run in one flat list, as formats for other programs need it."""

from collections.abc import Mapping
from typing import NamedTuple

from enclosure_check.findings.baseline import LimitChange
from enclosure_check.findings.results import ConditionFinding, Position, Report, Verdict
from enclosure_check.findings.run import stops
from enclosure_check.report.layout import tenths


class Judged(NamedTuple):
    """One part or wall against one limit under one condition."""

    condition: str
    name: str
    kind: str
    side: str
    temperature_c: float
    limit_c: float
    margin_k: float
    band_k: float | None
    """Half-width of the temperature's band at about 95 %, None where none could be found."""
    verdict: Verdict
    stops: bool
    """Whether the verdict stops a build."""
    position: Position | None
    change: LimitChange | None
    """What changed against an earlier result, None where there is nothing to compare."""

    @property
    def label(self) -> str:
        """Of what, and where."""
        owner = f"{self.name} wall" if self.kind == "touch" else self.name
        return f"{owner} {self.kind} {self.side}"

    @property
    def lost(self) -> bool:
        """Whether the margin fell by more than allowed."""
        return self.change is not None and self.change.lost


def judged(report: Report, *, strict: bool) -> list[Judged]:
    """Give every limit of a document: condition by condition, sorted by name."""
    return [
        each
        for condition in report.conditions
        for each in judged_under(report, condition, strict=strict)
    ]


def judged_under(report: Report, condition: ConditionFinding, *, strict: bool) -> list[Judged]:
    """Give every limit under one condition, sorted by name."""
    changes = _changes(report, condition)
    found = [
        _judged(
            condition.name,
            (part.name, part.limit_kind, part.limit_side),
            (part.temperature_c, part.limit_c, part.margin_k, part.band_k),
            part.verdict,
            stops(part.verdict, report, strict=strict),
            part.position,
            changes,
        )
        for part in condition.parts
    ]
    for wall in condition.walls:
        limit, margin, verdict = wall.touch_max_c, wall.touch_margin_k, wall.touch_verdict
        if limit is not None and margin is not None and verdict is not None:
            found.append(
                _judged(
                    condition.name,
                    (wall.name, "touch", "max"),
                    (wall.outside_max_c, limit, margin, wall.outside_max_band_k),
                    verdict,
                    stops(verdict, report, strict=strict),
                    wall.position,
                    changes,
                )
            )
    return sorted(found, key=lambda each: (each.name, each.kind, each.side))


_Key = tuple[str, str, str]


def _judged(
    condition: str,
    key: _Key,
    numbers: tuple[float, float, float, float | None],
    verdict: Verdict,
    stopping: bool,
    position: Position | None,
    changes: Mapping[_Key, LimitChange],
) -> Judged:
    temperature, limit, margin, band = numbers
    return Judged(
        condition,
        *key,
        temperature,
        limit,
        margin,
        band,
        verdict,
        stopping,
        position,
        changes.get(key),
    )


def _changes(report: Report, condition: ConditionFinding) -> dict[_Key, LimitChange]:
    if report.baseline is None:
        return {}
    return {
        (change.name, change.limit_kind, change.limit_side): change
        for change in report.baseline.limits
        if change.condition == condition.name
    }


def file_of(report: Report, position: Position | None) -> str:
    """Give the file a position lies in: the document, or one of its part lists."""
    if position is None or position.file is None:
        return report.document
    return position.file


def in_words(each: Judged) -> str:
    """Say where a limit stands: temperature with its band, limit and margin."""
    return (
        f"{with_band(each)} C against {each.side} {tenths(each.limit_c)} C, "
        f"margin {tenths(each.margin_k)} K"
    )


def with_band(each: Judged) -> str:
    """Give the temperature with its band, where there is one."""
    band = "" if each.band_k is None else f" +-{tenths(each.band_k)}"
    return tenths(each.temperature_c) + band


def loss_in_words(each: Judged, allow_loss_k: float) -> str:
    """Say what a margin lost against an earlier result."""
    change = each.change
    if change is None or change.change_k is None or change.old_margin_k is None:
        return ""
    return (
        f"margin was {tenths(change.old_margin_k)} K and changed by {change.change_k:+.1f} K, "
        f"a loss of {allow_loss_k:g} K is allowed"
    )
