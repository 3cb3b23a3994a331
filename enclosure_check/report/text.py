"""The report for a reader: the answer first, then each condition, the worst first."""

from collections.abc import Sequence

from enclosure_check.findings.results import ConditionFinding, Report
from enclosure_check.report.bands import write_sensitivities
from enclosure_check.report.condition import write_condition
from enclosure_check.report.layout import (
    Cell,
    Column,
    Page,
    Shown,
    counted,
    digits,
    listed,
    right,
    tenths,
)
from enclosure_check.report.limits import WORDS, limits_of, smallest_of, worst_first
from enclosure_check.report.options import WriterOptions

# Conditions named in a sentence before the rest become a number.
MOST_NAMED = 4


def write_text(report: Report, options: WriterOptions) -> str:
    """Give a report as plain text of at most ``options.width`` columns."""
    page = Page(options)
    conditions = worst_first(report.conditions)
    _title(page, report)
    _verdict(page, report, conditions)
    _summary(page, conditions)
    if report.baseline is not None:
        from enclosure_check.report.baseline_text import write_baseline

        write_baseline(page, report, report.baseline)
    if report.sensitivities is not None:
        write_sensitivities(page, report.sensitivities)
    shared = shared_assumptions(report.conditions)
    for condition in conditions:
        write_condition(page, condition, shared)
    if shared:
        page.gap()
        several = len(conditions) > 1
        page.heading("Assumed in every condition" if several else "Assumed, because not stated")
        page.bullets(page.clean(line) for line in shared)
    if report.part_lists:
        page.gap()
        page.heading("Part lists, with their SHA-256")
        page.bullets(
            f"{page.clean(each.file)}, {counted(each.part_count, 'part')}: {each.digest}"
            for each in report.part_lists
        )
    page.gap()
    page.paragraph(f"Caution: {report.caution}")
    page.paragraph(f"enclosure-check {report.version}; the document's SHA-256:")
    page.paragraph(report.digest)
    return page.text()


def shared_assumptions(conditions: Sequence[ConditionFinding]) -> tuple[str, ...]:
    """Give the assumptions that every condition makes, in the order of the first."""
    first, *others = (condition.assumptions for condition in conditions)
    return tuple(line for line in first if all(line in other for other in others))


def _title(page: Page, report: Report) -> None:
    page.heading(page.clean(report.title))
    page.paragraph(page.clean(report.document))
    option = report.conditions[0].option
    if option is not None:
        page.paragraph(f"Option: {page.clean(option)}")
    page.gap()


# The answer -------------------------------------------------------------------------------


def _verdict(page: Page, report: Report, conditions: Sequence[ConditionFinding]) -> None:
    named = len(conditions) > 1
    page.paragraph(_headline(page, report, conditions), style=report.verdict)
    worst = smallest_of(report)
    if worst is not None:
        condition, held = worst
        under = f" under {page.clean(condition.name)}" if named else ""
        page.paragraph(
            f"Smallest margin {tenths(held.margin_k)} K: {page.clean(held.label)}{under}."
        )


def _headline(page: Page, report: Report, conditions: Sequence[ConditionFinding]) -> str:
    """Say how it stands, in words."""
    short = [each for each in conditions if each.verdict == report.verdict]
    names = listed([page.clean(each.name) for each in short], MOST_NAMED)
    where = f" under {len(short)} of {len(conditions)} conditions: {names}"
    if len(conditions) == 1:
        where = ""
    elif len(short) == len(conditions):
        where = f" under all {len(conditions)} conditions"
    wanted = sorted({each.headroom.wanted_margin_k for each in short})
    kept = f"{tenths(wanted[0])} K" if len(wanted) == 1 else "margin"
    if report.verdict == "fail":
        return f"FAIL: past a limit{where}."
    if report.verdict == "marginal":
        return f"MARGINAL: inside every limit, but {_why(short, kept)}{where}."
    if all(not limits_of(each) for each in conditions):
        return "PASS: no limit is stated, so there was nothing to fail."
    held = "" if wanted == [0.0] else f" with the {kept} wanted"
    sure = sorted({each.confidence_pct for each in short if each.confidence_pct is not None})
    if sure:
        held += f", {sure[0]:g} % sure" if len(sure) == 1 else ", as sure as wanted"
    return f"PASS: every limit is kept{held}{where}."


def _why(short: Sequence[ConditionFinding], kept: str) -> str:
    """Say what makes conditions marginal."""
    closer = any(
        held.verdict == "marginal" and held.margin_k < each.headroom.wanted_margin_k
        for each in short
        for held in limits_of(each)
    )
    if closer:
        return f"closer than the {kept} wanted"
    if any(each.confidence_pct is not None for each in short):
        return "not with the confidence wanted"
    return "a band reaches past one"


_SUMMARY = (
    Shown[ConditionFinding](Column("Condition", yields=True), lambda each: each.name),
    Shown[ConditionFinding](
        Column("Verdict"), lambda each: Cell(WORDS[each.verdict], each.verdict)
    ),
    Shown[ConditionFinding](right("Margin K"), lambda each: _smallest(each)[0]),
    Shown[ConditionFinding](Column("Smallest at", yields=True), lambda each: _smallest(each)[1]),
    Shown[ConditionFinding](right("Air C"), lambda each: tenths(each.surrounding_air_c)),
    Shown[ConditionFinding](
        right("Up to C"),
        lambda each: (
            "-" if each.headroom.highest_air_c is None else tenths(each.headroom.highest_air_c)
        ),
    ),
    Shown[ConditionFinding](
        right("Power %"),
        lambda each: "-" if each.headroom.power_pct is None else digits(each.headroom.power_pct),
    ),
)


def _smallest(condition: ConditionFinding) -> tuple[str, str]:
    """Give the smallest margin of a condition and where it is."""
    held = limits_of(condition)
    return (tenths(held[0].margin_k), held[0].label) if held else ("-", "no limit stated")


def _summary(page: Page, conditions: Sequence[ConditionFinding]) -> None:
    page.gap()
    page.records(_SUMMARY, conditions)
    page.paragraph(
        "Up to: surrounding air, all surroundings rising together, at which a highest limit is "
        "met. Power: percent of the power here at which one is met. Each alone, with the "
        "margin wanted kept.",
        first="  ",
        rest="  ",
    )
