"""All limits of a condition in one list, parts and walls alike, and how verdicts are worded."""

from typing import NamedTuple

from enclosure_check.findings.results import VERDICTS, ConditionFinding, Report, Verdict

# Told apart without colour: what does not pass is in capitals.
WORDS: dict[Verdict, str] = {"pass": "pass", "marginal": "MARGINAL", "fail": "FAIL"}


class Held(NamedTuple):
    """One limit and how far from it the answer is."""

    label: str
    """Of what, and where, as in ``U1 junction``."""
    margin_k: float
    verdict: Verdict


def limits_of(condition: ConditionFinding) -> list[Held]:
    """Give every limit of a condition, the smallest margin first."""
    held = [
        Held(f"{part.name} {part.limit_kind} {part.limit_side}", part.margin_k, part.verdict)
        for part in condition.parts
    ]
    held += [
        Held(f"{wall.name} wall touch", wall.touch_margin_k, wall.touch_verdict)
        for wall in condition.walls
        if wall.touch_margin_k is not None and wall.touch_verdict is not None
    ]
    return sorted(held, key=lambda each: each.margin_k)


def smallest_of(report: Report) -> tuple[ConditionFinding, Held] | None:
    """Give the smallest margin of all, and the condition it arises in; None without any limit."""
    found = [(each, held[0]) for each in report.conditions if (held := limits_of(each))]
    return min(found, key=lambda pair: pair[1].margin_k, default=None)


def worst_first(conditions: tuple[ConditionFinding, ...]) -> list[ConditionFinding]:
    """Give the conditions by verdict and smallest margin, the worst first."""

    def rank(condition: ConditionFinding) -> tuple[int, float]:
        held = limits_of(condition)
        margin = held[0].margin_k if held else float("inf")
        return (-VERDICTS.index(condition.verdict), margin)

    return sorted(conditions, key=rank)
