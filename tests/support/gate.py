"""Runs for the formats that other programs read: plain, lost margins, errors, hostile names."""

import os
from collections.abc import Iterator
from contextlib import contextmanager
from dataclasses import replace
from pathlib import Path
from typing import Any

from support.reports import SMALL, write_document

from enclosure_check.check import check
from enclosure_check.description.load import load_document
from enclosure_check.findings.compare import compared
from enclosure_check.findings.earlier import read_earlier
from enclosure_check.findings.results import Report
from enclosure_check.findings.run import NoAnswer, ProblemFinding, Run, run_of
from enclosure_check.report.json_report import write_json
from enclosure_check.report.options import WriterOptions

X1 = SMALL["parts"]["X1"]
BOTH = {
    **SMALL,
    "parts": {"X1": {**X1, "limits": {"case": {"max_c": 80, "min_c": -20}}}},
    "requirements": {"touch_max_c": 60},
    "conditions": {"hot": {"surroundings": {"air_c": 26}}, "cool": {"surroundings": {"air_c": 5}}},
}
# Names that are markup, links, mentions, placeholders or control characters somewhere.
EVIL = (
    "<script>alert(1)</script>",
    "]]><!--&amp;\"'",
    "[click](https://example.invalid)",
    "| ![x](y) | `code` |",
    "@everyone #1 **bold** _it_ ~~no~~",
    "{0} {{1}} %s $(x) ${y}",
    "\x1b[31mred\x07\x00\x0b\x7f",
    "line\nbreak\r\ttab",
    "\u202eturned\u2028 \ufffe \u200bzero",
    "\\` \\| \\[",
    "```",
    "  ",
)


@contextmanager
def _within(folder: Path) -> Iterator[None]:
    before = Path.cwd()
    os.chdir(folder)
    try:
        yield
    finally:
        os.chdir(before)


def relative_report(folder: Path, document: Any) -> Report:
    """The report of a document checked from within its folder, as a repository's CI does."""
    write_document(folder, document)
    with _within(folder):
        return check(load_document("box.yaml"))


def PLAIN_RUN(folder: Path) -> Run:
    return run_of("1.0", False, (relative_report(folder, BOTH),), ())


def MARGINAL(folder: Path, stated: bool) -> Run:
    """One limit kept with a margin smaller than wanted."""
    document = {**SMALL, "requirements": {"margin_k": 40}}
    report = replace(relative_report(folder, document), margin_stated=stated)
    return run_of("1.0", False, (report,), ())


def LOST_RUN(folder: Path) -> Run:
    """Every limit is kept, but margins fell, a part and a condition went, another came."""
    wide = {"case": {"max_c": 150, "min_c": -20}}
    then = {
        **BOTH,
        "parts": {"X1": {**X1, "limits": wide}, "X2": {**X1, "power_w": 0.1, "limits": wide}},
    }
    now = {
        **BOTH,
        "parts": {"X1": {**X1, "power_w": 2.0, "limits": wide}},
        "requirements": {"touch_max_c": 90},
        "conditions": {"hot": BOTH["conditions"]["hot"], "new": {}},
    }
    then["requirements"] = {"touch_max_c": 90}
    old = write_json(relative_report(folder, then), WriterOptions()).encode()
    run = run_of("1.0", False, (relative_report(folder, now),), ())
    return compared(run, read_earlier(old), "main.json", 0.1)


def with_errors(folder: Path) -> Run:
    """A document with an answer, one that is unfit and one without steady temperatures."""
    wrong = ProblemFinding("wrong.yaml", 3, 7, "box.width_mm", "given 'wide', allowed: a number")
    none = ProblemFinding("runaway.yaml", 12, 3, "", "condition 'hot': no converged answer")
    return run_of(
        "1.0",
        False,
        (relative_report(folder, BOTH),),
        (
            NoAnswer("wrong.yaml", "bad_input", (wrong,)),
            NoAnswer("runaway.yaml", "not_converged", (none,)),
        ),
    )


def EVIL_RUN(folder: Path) -> Run:
    """Hostile text in every place that can hold a user's words."""
    run = LOST_RUN(folder)
    (report,) = run.documents
    assert report.baseline is not None
    first, *others = report.conditions
    part = first.parts[0]
    parts = tuple(
        replace(part, name=name, verdict="fail", margin_k=-float(place))
        for place, name in enumerate(EVIL)
    )
    change = report.baseline.limits[0]
    baseline = replace(
        report.baseline,
        file=EVIL[2],
        old_version=EVIL[0],
        old_option=EVIL[4],
        conditions_removed=EVIL,
        parts_removed=EVIL,
        parts_added=EVIL,
        limits=tuple(replace(change, name=name, condition=name) for name in EVIL),
        inputs=tuple(
            replace(report.baseline.inputs[0], path=name, old=name, new=name) for name in EVIL
        ),
    )
    condition = replace(first, parts=parts, warnings=EVIL)
    renamed = tuple(replace(each, name=f"{EVIL[0]}{i}") for i, each in enumerate(others))
    report = replace(
        report,
        document=f"boards/{EVIL[2]} %20.yaml",
        title=EVIL[0],
        verdict="fail",
        conditions=(condition, *renamed),
        baseline=baseline,
    )
    problems = tuple(ProblemFinding(name, 1, 1, name, name) for name in EVIL)
    run = run_of("1.0", False, (report,), (NoAnswer(EVIL[1], "bad_input", problems),))
    return replace(run, unchecked=EVIL)
