"""Exit codes: what the process tells its caller."""

from enum import IntEnum
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from enclosure_check.findings.results import Report
    from enclosure_check.findings.run import Run


class ExitCode(IntEnum):
    """What the process tells its caller; 0 and 1 are answers, the others are none."""

    PASS = 0
    FAIL = 1
    BAD_INPUT = 2
    NOT_CONVERGED = 3
    INTERNAL_ERROR = 70
    INTERRUPTED = 130


CODES = """\
exit codes:
  0    every limit is kept
  1    a limit is passed; or a verdict is marginal, where the document states
       a margin wanted or --strict is given; or a margin fell by more than
       --allow-loss-k since the --baseline
  2    bad input, wrong usage, or an output that cannot be written
  3    no converged answer
  70   an error of this program; 130 interrupted
Of several documents the highest code counts.
Results go to standard output or to files, diagnostics to standard error.
Nothing is written when no document has an answer, but for the formats markdown,
junit and sarif, which tell why."""


class UsageError(Exception):
    """Arguments that do not go together."""


def exit_code(report: "Report", *, strict: bool) -> ExitCode:
    """Give the exit code of a report."""
    from enclosure_check.findings.run import stops

    lost = report.baseline is not None and report.baseline.verdict == "fail"
    failed = lost or stops(report.verdict, report, strict=strict)
    return ExitCode.FAIL if failed else ExitCode.PASS


def run_exit_code(run: "Run") -> ExitCode:
    """Give the exit code of a run: the highest of its documents."""
    codes = [exit_code(report, strict=run.strict) for report in run.documents]
    codes += [
        ExitCode.BAD_INPUT if each.reason == "bad_input" else ExitCode.NOT_CONVERGED
        for each in run.without_answer
    ]
    return max(codes, default=ExitCode.PASS)
