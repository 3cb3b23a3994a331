"""Exit codes: what the process tells its caller."""

from enum import IntEnum
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from enclosure_check.findings.results import Report


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
       a margin wanted or --strict is given
  2    bad input, wrong usage, or an output that cannot be written
  3    no converged answer
  70   an error of this program; 130 interrupted
Results go to standard output or to --output, diagnostics to standard error.
Nothing is written when there is an error."""


def exit_code(report: "Report", *, strict: bool) -> ExitCode:
    """Give the exit code of a report."""
    matters = strict or report.margin_stated
    if report.verdict == "fail" or (report.verdict == "marginal" and matters):
        return ExitCode.FAIL
    return ExitCode.PASS
