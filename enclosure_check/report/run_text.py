"""Several documents for a reader: how they stand, then the report of each."""

from dataclasses import replace

from enclosure_check.findings.results import Report
from enclosure_check.findings.run import Run
from enclosure_check.report.layout import Cell, Column, Page, clean, counted, right, tail, tenths
from enclosure_check.report.limits import WORDS, smallest_of
from enclosure_check.report.options import WriterOptions
from enclosure_check.report.text import write_text


def write_run(run: Run, options: WriterOptions) -> str:
    """Give the documents of a run, in short or each with its whole report."""
    if options.short:
        lines = [verdict_line(report) for report in run.documents]
        return "".join(f"{clean(line, options.encoding)}\n" for line in lines)
    page = Page(options)
    page.heading(_headline(run), "" if run.verdict == "error" else run.verdict)
    page.gap()
    room = options.width * 2 // 5
    compared = any(report.baseline is not None for report in run.documents)
    columns = [*_COLUMNS, Column("Baseline")] if compared else _COLUMNS
    rows = [
        (*_row(page, report, room), *([_baseline(report)] if compared else []))
        for report in run.documents
    ]
    page.table(columns, rows)
    if run.without_answer:
        page.gap()
        page.heading("Without an answer, see the messages", "fail")
        page.bullets(page.clean(each.document) for each in run.without_answer)
    if run.unchecked:
        page.gap()
        page.heading("In the baseline, but not checked now", "marginal")
        page.bullets(page.clean(document) for document in run.unchecked)
    each_alone = replace(options, several=False)
    rule = "=" * options.width
    reports = [f"\n{rule}\n{write_text(report, each_alone)}" for report in run.documents]
    return page.text() + "".join(reports)


def _headline(run: Run) -> str:
    """Say how many documents stand how."""
    verdicts = [report.verdict for report in run.documents]
    counts = [
        f"{verdicts.count(verdict)} {word}"
        for verdict, word in (("fail", "FAIL"), ("marginal", "MARGINAL"), ("pass", "pass"))
        if verdict in verdicts
    ]
    if run.without_answer:
        counts.append(f"{len(run.without_answer)} WITHOUT AN ANSWER")
    total = len(run.documents) + len(run.without_answer)
    return f"{counted(total, 'document')}: {', '.join(counts)}."


_COLUMNS = (
    Column("Document"),
    Column("Verdict"),
    right("Margin K"),
    Column("Smallest at", yields=True),
)


def _row(page: Page, report: Report, room: int) -> tuple[str | Cell, ...]:
    verdict = Cell(WORDS[report.verdict], report.verdict)
    return (tail(page.clean(report.document), room), verdict, *_smallest(report))


def _baseline(report: Report) -> Cell:
    """Say in a word how the margins stand against an earlier result."""
    baseline = report.baseline
    if baseline is None or not baseline.known:
        return Cell("new", "")
    lost = sum(change.lost for change in baseline.limits)
    return Cell(f"{lost} LOST", "fail") if lost else Cell("kept", "pass")


def _smallest(report: Report) -> tuple[str, str]:
    found = smallest_of(report)
    if found is None:
        return "-", "no limit stated"
    condition, held = found
    under = f" under {condition.name}" if len(report.conditions) > 1 else ""
    return tenths(held.margin_k), held.label + under


def verdict_line(report: Report) -> str:
    """Give a report in one line: the verdict and the smallest margin."""
    margin, where = _smallest(report)
    kept = f"smallest margin {margin} K: {where}" if margin != "-" else where
    return f"{report.document}: {WORDS[report.verdict]}, {kept}{_against(report)}"


def _against(report: Report) -> str:
    """Say how the margins stand against an earlier result, nothing without one."""
    if report.baseline is None:
        return ""
    from enclosure_check.report.changes import headline

    return f"; against {report.baseline.file}: {headline(report.baseline)}"
