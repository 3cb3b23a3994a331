"""The report as JUnit XML, for programs that show test results.

No standards body keeps this format. What is written is what such programs have in common (common
practice, no source): ``testsuites`` holds ``testsuite``, that holds ``testcase``, that holds at
most one of ``failure``, ``error`` and ``skipped``; each level has a name and counts that add up.
"""

from collections.abc import Sequence
from typing import NamedTuple

from enclosure_check.findings.results import ConditionFinding, Report
from enclosure_check.findings.run import NoAnswer, Run
from enclosure_check.report.judged import Judged, file_of, in_words, judged_under, loss_in_words
from enclosure_check.report.layout import clean
from enclosure_check.report.options import WriterOptions

_ESCAPES = {"&": "&amp;", "<": "&lt;", ">": "&gt;", '"': "&quot;", "'": "&apos;"}


class _Test(NamedTuple):
    """A test case; ``outcome`` is failure, error or skipped, empty when it passes."""

    name: str
    file: str
    line: int | None
    outcome: str = ""
    type: str = ""
    message: str = ""
    detail: str = ""


class _Suite(NamedTuple):
    name: str
    tests: list[_Test]
    notes: Sequence[str] = ()


def write_junit(run: Run, options: WriterOptions) -> str:  # noqa: ARG001 - the same anywhere
    """Give a run as JUnit XML: a suite per document and condition, a case per limit.

    A marginal verdict is a failure where it stops a build, else a pass with a note. A margin that
    fell by more than allowed is a failure. A document without an answer is an error.
    """
    suites = [
        _suite(report, condition, strict=run.strict)
        for report in run.documents
        for condition in report.conditions
    ]
    suites += [_without_answer(each) for each in run.without_answer]
    every = [test for suite in suites for test in suite.tests]
    lines = ['<?xml version="1.0" encoding="UTF-8"?>']
    lines.append(f"<testsuites{_attributes(name='enclosure-check', **_counts(every))}>")
    for suite in suites:
        lines += _suite_lines(suite)
    lines.append("</testsuites>")
    return "\n".join(lines) + "\n"


# From findings to tests -------------------------------------------------------------------


def _suite(report: Report, condition: ConditionFinding, *, strict: bool) -> _Suite:
    tests = [_test(report, each) for each in judged_under(report, condition, strict=strict)]
    if not tests:
        tests = [_Test("limits", report.document, None, "skipped", message="no limit is stated")]
    return _Suite(_suite_name(report, condition), tests, condition.warnings)


def _suite_name(report: Report, condition: ConditionFinding) -> str:
    option = "" if condition.option is None else f" with {condition.option}"
    return f"{report.document}: {condition.name}{option}"


def _test(report: Report, each: Judged) -> _Test:
    line = None if each.position is None else each.position.line
    file = file_of(report, each.position)
    said = [in_words(each)]
    if each.lost and report.baseline is not None:
        said.append(loss_in_words(each, report.baseline.allow_loss_k))
    message = "; ".join(said)
    if each.stops:
        kind = "limit_passed" if each.verdict == "fail" else "margin_too_small"
        return _Test(each.label, file, line, "failure", kind, message)
    if each.lost:
        return _Test(each.label, file, line, "failure", "margin_lost", message)
    note = f"{each.verdict}: {message}"
    return _Test(each.label, file, line, detail=note)


def _without_answer(each: NoAnswer) -> _Suite:
    first = each.problems[0] if each.problems else None
    tests = [
        _Test(
            "answer",
            each.document,
            first.line if first else None,
            "error",
            each.reason,
            first.message if first else "no answer",
            "\n".join(
                f"{clean(problem.file, 'utf-8')}:{problem.line}:{problem.column}: "
                f"{clean(problem.field + ': ' if problem.field else '', 'utf-8')}"
                f"{clean(problem.message, 'utf-8')}"
                for problem in each.problems
            ),
        )
    ]
    return _Suite(each.document, tests)


# From tests to XML ------------------------------------------------------------------------


def _counts(tests: Sequence[_Test]) -> dict[str, int]:
    outcomes = [test.outcome for test in tests]
    return {
        "tests": len(tests),
        "failures": outcomes.count("failure"),
        "errors": outcomes.count("error"),
        "skipped": outcomes.count("skipped"),
    }


def _suite_lines(suite: _Suite) -> list[str]:
    lines = [f"  <testsuite{_attributes(name=suite.name, **_counts(suite.tests))}>"]
    for test in suite.tests:
        head = _attributes(classname=suite.name, name=test.name, file=test.file, line=test.line)
        if test.outcome:
            inner = _attributes(message=test.message, type=test.type or None)
            body = f">{xml_lines(test.detail)}</{test.outcome}>" if test.detail else "/>"
            lines += [
                f"    <testcase{head}>",
                f"      <{test.outcome}{inner}{body}",
                "    </testcase>",
            ]
        else:
            lines += [
                f"    <testcase{head}>",
                f"      <system-out>{xml_text(test.detail)}</system-out>",
                "    </testcase>",
            ]
    if suite.notes:
        noted = "\n".join(xml_text(note) for note in suite.notes)
        lines.append(f"    <system-out>{noted}</system-out>")
    lines.append("  </testsuite>")
    return lines


def _attributes(**values: str | int | None) -> str:
    return "".join(
        f' {name}="{xml_text(str(value))}"' for name, value in values.items() if value is not None
    )


def xml_text(text: str) -> str:
    """Give a text for XML 1.0: markup escaped; what XML or a terminal must not see, shown."""
    return "".join(_ESCAPES.get(char, char) for char in clean(text, "utf-8"))


def xml_lines(text: str) -> str:
    """Give a text of several lines for XML."""
    return "\n".join(map(xml_text, text.split("\n")))
