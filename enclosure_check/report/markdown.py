"""The report as Markdown, for a review thread: the verdict, what does not pass, what changed.

Every text of the user stands in a code span, where nothing is markup, link, mention or HTML.
"""

from collections.abc import Iterable, Sequence

from enclosure_check.findings.baseline import Baseline
from enclosure_check.findings.results import CAUTION, Report, Verdict
from enclosure_check.findings.run import NoAnswer, Run
from enclosure_check.report.changes import (
    about_inputs,
    came_and_went,
    change_word,
    headline,
    number,
    shown_inputs,
    shown_limits,
    value_words,
)
from enclosure_check.report.judged import Judged, judged, with_band
from enclosure_check.report.layout import clean, counted, cut, tenths
from enclosure_check.report.limits import smallest_of
from enclosure_check.report.options import WriterOptions

# Common limit of a comment in review threads is about 65,000 characters (common practice).
MOST_CHARACTERS = 60_000
MOST_DOCUMENTS = 50
MOST_ROWS = 25
MOST_PROBLEMS = 10
LONGEST = 100

_WORDS: dict[Verdict, str] = {"pass": "pass", "marginal": "**MARGINAL**", "fail": "**FAIL**"}


def write_markdown(run: Run, options: WriterOptions) -> str:  # noqa: ARG001 - the same anywhere
    """Give a run as Markdown with tables, short enough for a comment."""
    head = ["### Enclosure temperatures", "", _headline(run), "", *_documents(run)]
    end = [f"_{CAUTION}_", "", f"enclosure-check {code(run.version)}"]
    sections = [_problems(each) for each in run.without_answer]
    sections += [_section(report, strict=run.strict) for report in run.documents]
    sections = [section for section in sections if section]
    if run.unchecked:
        names = ", ".join(code(name) for name in run.unchecked[:MOST_ROWS])
        more = len(run.unchecked) - MOST_ROWS
        head += [f"In the baseline, but not checked now: {names}{_more(more)}.", ""]
    lines, room = head, MOST_CHARACTERS - sum(map(len, (*head, *end)))
    for place, section in enumerate(sections):
        room -= sum(len(line) + 1 for line in section)
        if room < 0:
            lines += [f"{counted(len(sections) - place, 'more section')} left out for length.", ""]
            break
        lines += section
    return "\n".join([*lines, *end]) + "\n"


def _headline(run: Run) -> str:
    verdicts = [report.verdict for report in run.documents]
    counts = [
        f"{verdicts.count(verdict)} {_WORDS[verdict]}"
        for verdict in ("fail", "marginal", "pass")
        if verdict in verdicts
    ]
    if run.without_answer:
        counts.append(f"{len(run.without_answer)} **WITHOUT AN ANSWER**")
    lost = sum(
        change.lost
        for report in run.documents
        if report.baseline is not None
        for change in report.baseline.limits
    )
    if lost:
        counts.append(f"{counted(lost, 'margin')} **LOST** more than allowed")
    total = len(run.documents) + len(run.without_answer)
    return f"{counted(total, 'document')}: {', '.join(counts)}."


def _documents(run: Run) -> list[str]:
    if not run.documents:
        return []
    compared = any(report.baseline is not None for report in run.documents)
    shown = run.documents[:MOST_DOCUMENTS]
    head = ["Document", "Verdict", "Smallest margin K", "at", "under"]
    rows = [[*_row(report), *([_against(report)] if compared else [])] for report in shown]
    table = _table([*head, "Baseline"] if compared else head, rows, numbers=(2,))
    more = len(run.documents) - len(shown)
    return [*table, *([f"and {more} more documents", ""] if more else [])]


def _row(report: Report) -> list[str]:
    found = smallest_of(report)
    if found is None:
        return [code(report.document), _WORDS[report.verdict], "-", "no limit stated", "-"]
    condition, held = found
    return [
        code(report.document),
        _WORDS[report.verdict],
        tenths(held.margin_k),
        code(held.label),
        code(condition.name),
    ]


def _against(report: Report) -> str:
    baseline = report.baseline
    if baseline is None or not baseline.known:
        return "new"
    lost = sum(change.lost for change in baseline.limits)
    return f"**{lost} LOST**" if lost else "kept"


# One document -----------------------------------------------------------------------------


def _section(report: Report, *, strict: bool) -> list[str]:
    """Give what a reviewer must see of one document; nothing when there is nothing to see."""
    wrong = [each for each in judged(report, strict=strict) if each.verdict != "pass"]
    wrong.sort(key=lambda each: each.margin_k)
    lines = _wrong(wrong) if wrong else []
    if report.baseline is not None:
        lines += _baseline(report, report.baseline)
    return [f"#### {code(report.document)}", "", *lines] if lines else []


def _wrong(wrong: Sequence[Judged]) -> list[str]:
    rows = [
        [
            code(each.label),
            code(each.condition),
            with_band(each),
            tenths(each.limit_c),
            tenths(each.margin_k),
            _WORDS[each.verdict],
        ]
        for each in wrong[:MOST_ROWS]
    ]
    head = ["Limit", "Condition", "Temp. C", "Limit C", "Margin K", "Verdict"]
    more = len(wrong) - len(rows)
    table = _table(head, rows, numbers=(2, 3, 4))
    return [*table, *([f"and {more} more that do not pass", ""] if more > 0 else [])]


def _baseline(report: Report, baseline: Baseline) -> list[str]:
    if not baseline.known:
        return [f"Against {code(baseline.file)}: {headline(baseline)}", ""]
    shown, note = shown_limits(baseline)
    lines = [f"Against {code(baseline.file)}: {headline(baseline)}", ""]
    rows = [
        [
            code(f"{each.name} {each.limit_kind} {each.limit_side}"),
            code(each.condition),
            number(each.old_temperature_c),
            number(each.new_temperature_c),
            number(each.old_margin_k),
            number(each.new_margin_k),
            change_word(each).replace("LOST", "**LOST**"),
        ]
        for each in shown[:MOST_ROWS]
    ]
    if rows:
        head = ["Limit", "Condition", "was C", "now C", "was K", "now K", "Change K"]
        lines += _table(head, rows, numbers=(2, 3, 4, 5))
    left = len(shown) - len(rows)
    notes = [note] if note else []
    if left > 0:
        notes.append(f"{left} more changed")
    if notes:
        lines += ["; ".join(notes), ""]
    for what, names in came_and_went(baseline):
        some = ", ".join(code(name) for name in names[:MOST_ROWS])
        lines += [f"{what}: {some}{_more(len(names) - MOST_ROWS)}.", ""]
    for line in about_inputs(baseline, report, code):
        lines += [line, ""]
    inputs, more = shown_inputs(baseline)
    if inputs:
        lines += ["Changed in the document:", ""]
        lines += [f"- {code(each.path)}: {code(value_words(each))}" for each in inputs]
        lines += [f"- and {more} more values"] if more else []
        lines.append("")
    return lines


def _problems(each: NoAnswer) -> list[str]:
    lines = [f"#### {code(each.document)}", "", "No answer:", ""]
    for problem in each.problems[:MOST_PROBLEMS]:
        field = f"{problem.field}: " if problem.field else ""
        at = f"{problem.file}:{problem.line}:{problem.column}: {field}{problem.message}"
        lines.append(f"- {code(at, 3 * LONGEST)}")
    more = len(each.problems) - MOST_PROBLEMS
    return [*lines, *([f"- and {more} more"] if more > 0 else []), ""]


def _more(count: int) -> str:
    return f" and {count} more" if count > 0 else ""


# Markdown ---------------------------------------------------------------------------------


def _table(head: Sequence[str], rows: Iterable[Sequence[str]], numbers: Sequence[int]) -> list[str]:
    rule = ["---:" if place in numbers else "---" for place in range(len(head))]
    return [*(f"| {' | '.join(row)} |" for row in (head, rule, *rows)), ""]


def code(text: str, longest: int = LONGEST) -> str:
    """Give a user's text as a code span, on one line, cut to a length.

    A backtick would end the span and a bar the cell of a table, so both are shown as escapes.
    """
    shown = cut(clean(text, "utf-8"), longest).replace("`", "\\x60").replace("|", "\\x7c").strip()
    return f"`{shown}`" if shown else "-"
