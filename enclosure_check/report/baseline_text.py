"""The section of a text report on what changed against an earlier result."""

from enclosure_check.findings.baseline import Baseline, LimitChange
from enclosure_check.findings.results import Report
from enclosure_check.report.changes import (
    about_inputs,
    came_and_went,
    change_word,
    headline,
    limit_words,
    number,
    shown_inputs,
    shown_limits,
    value_words,
)
from enclosure_check.report.layout import Cell, Column, Page, Shown, listed, right

# Names on one line before the rest become a number.
MOST_NAMED = 8


def write_baseline(page: Page, report: Report, baseline: Baseline) -> None:
    """Put in what changed: the margins, then what the document states."""
    page.gap()
    page.paragraph(
        f"Against {page.clean(baseline.file)}: {headline(baseline)}", style=_style(baseline)
    )
    if not baseline.known:
        return
    shown, note = shown_limits(baseline)
    if shown:
        page.heading("Temperatures (C) and margins (K) then and now", "")
        page.records(_CHANGES, shown)
    if note:
        page.paragraph(note, first="  ", rest="  ")
    for what, names in came_and_went(baseline):
        cleaned = [page.clean(name) for name in names]
        page.paragraph(f"{what}: {listed(cleaned, MOST_NAMED)}.")
    for line in about_inputs(baseline, report, page.clean):
        page.paragraph(line)
    inputs, more = shown_inputs(baseline)
    if inputs:
        page.paragraph("Changed in the document:")
        for each in inputs:
            page.paragraph(
                f"{page.clean(each.path)}: {page.clean(value_words(each))}",
                first="  ",
                rest="    ",
            )
        if more:
            page.paragraph(f"and {more} more values", first="  ", rest="  ")


def _style(baseline: Baseline) -> str:
    if baseline.verdict == "fail":
        return "fail"
    return "pass" if baseline.known else "marginal"


def _changed(change: LimitChange) -> Cell:
    return Cell(change_word(change), "fail" if change.lost else "")


_CHANGES = (
    Shown[LimitChange](Column("Part", yields=True), lambda each: each.name),
    Shown[LimitChange](Column("Limit at"), lambda each: f"{each.limit_kind} {each.limit_side}"),
    Shown[LimitChange](Column("Under", yields=True), lambda each: each.condition),
    Shown[LimitChange](right("Was C"), lambda each: number(each.old_temperature_c)),
    Shown[LimitChange](right("Now C"), lambda each: number(each.new_temperature_c)),
    Shown[LimitChange](Column("Limit C"), limit_words, lambda each: limit_words(each) != ""),
    Shown[LimitChange](right("Was K"), lambda each: number(each.old_margin_k)),
    Shown[LimitChange](right("Now K"), lambda each: number(each.new_margin_k)),
    Shown[LimitChange](Column("Change K"), _changed),
)
