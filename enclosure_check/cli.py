"""The command line: arguments in, exit code out; the only place that prints."""

import argparse
import gc
import os
import sys
from collections.abc import Iterator, Sequence
from contextlib import contextmanager
from enum import IntEnum
from typing import TYPE_CHECKING, Any, NoReturn

from enclosure_check import __version__

if TYPE_CHECKING:
    from enclosure_check.findings.results import Report
    from enclosure_check.report.options import WriterOptions

PROGRAM = "enclosure-check"
NARROWEST, WIDEST = 80, 140
FORMATS = ("text", "json")


class ExitCode(IntEnum):
    """What the process tells its caller; 0 and 1 are answers, the others are none."""

    PASS = 0
    FAIL = 1
    BAD_INPUT = 2
    NOT_CONVERGED = 3
    INTERNAL_ERROR = 70
    INTERRUPTED = 130


_CODES = """\
exit codes:
  0    every limit is kept
  1    a limit is passed; or a verdict is marginal, where the document states
       a margin wanted or --strict is given
  2    bad input, wrong usage, or an output that cannot be written
  3    no converged answer
  70   an error of this program; 130 interrupted
Results go to standard output or to --output, diagnostics to standard error.
Nothing is written when there is an error."""

_EXAMPLES = """\
examples:
  enclosure-check check box.yaml
  enclosure-check check box.yaml --condition noon_sun --condition cold_soak
  enclosure-check check box.yaml --option white_finish --strict
  enclosure-check check box.yaml --format json --output box.report.json
  enclosure-check schema document > enclosure.schema.json
"""

_COLOUR = """\
Colour is added on a terminal only; NO_COLOR turns it off, FORCE_COLOR on."""


class CannotWriteError(Exception):
    """Results that could not be written where they were wanted."""


def main(argv: Sequence[str] | None = None) -> int:
    """Run one command.

    Parameters
    ----------
    argv
        Arguments without the program's name; those of the process when left out.

    Returns
    -------
    int
        An `ExitCode`.
    """
    try:
        with _quick_start(whole_process=argv is None):
            arguments = _parser().parse_args(argv)
            return int(arguments.run(arguments))
    except SystemExit as ended:  # argparse, after --help, --version or wrong usage
        return ended.code if isinstance(ended.code, int) else int(ExitCode.BAD_INPUT)
    except CannotWriteError as error:
        _say(f"{PROGRAM}: {error}")
        return int(ExitCode.BAD_INPUT)
    except KeyboardInterrupt:
        return int(ExitCode.INTERRUPTED)
    except Exception:
        import traceback

        traceback.print_exc()
        _say(f"{PROGRAM}: internal error, no result; the lines above say where")
        return int(ExitCode.INTERNAL_ERROR)


# Commands ---------------------------------------------------------------------------------


def _check(arguments: argparse.Namespace) -> ExitCode:
    from enclosure_check.check import NotConvergedError, check
    from enclosure_check.description.load import load_document
    from enclosure_check.description.problems import DocumentError

    conditions = None
    if arguments.condition:
        conditions = tuple(dict.fromkeys(arguments.condition))
    if arguments.output is not None and _same_file(arguments.output, arguments.file):
        raise CannotWriteError(f"{arguments.output}: is the document itself, not overwritten")
    try:
        document = load_document(arguments.file)
        report = check(document, option=arguments.option, conditions=conditions)
    except DocumentError as error:
        for problem in error.problems:
            _say(str(problem))
        return ExitCode.BAD_INPUT
    except NotConvergedError as error:
        _say(f"{arguments.file}: {error}")
        return ExitCode.NOT_CONVERGED
    from enclosure_check.report.writers import WRITERS

    write = WRITERS[arguments.format]
    if arguments.output is None:
        _print(write(report, _terminal()))
    else:
        from enclosure_check.report.options import WriterOptions

        _save(arguments.output, write(report, WriterOptions()))
    return exit_code(report, strict=arguments.strict)


def exit_code(report: "Report", *, strict: bool) -> ExitCode:
    """Give the exit code of a report."""
    matters = strict or report.margin_stated
    if report.verdict == "fail" or (report.verdict == "marginal" and matters):
        return ExitCode.FAIL
    return ExitCode.PASS


def _schema(arguments: argparse.Namespace) -> ExitCode:
    import json

    from enclosure_check.report.schema import document_schema, report_schema

    if arguments.of == "report":
        schema = report_schema()
    else:
        from enclosure_check.description.document import Document

        schema = document_schema(Document.model_json_schema())
    _print(json.dumps(schema, indent=2) + "\n")
    return ExitCode.PASS


# Arguments --------------------------------------------------------------------------------


class _Parser(argparse.ArgumentParser):
    """A parser whose options are never abbreviated and whose messages are printable."""

    def __init__(self, **settings: Any) -> None:
        super().__init__(
            allow_abbrev=False,
            formatter_class=argparse.RawDescriptionHelpFormatter,
            **settings,
        )

    def error(self, message: str) -> NoReturn:
        super().error(_printable(message))


def _parser() -> argparse.ArgumentParser:
    parser = _Parser(
        prog=PROGRAM,
        description="Checks the passive cooling of an electronics enclosure described in YAML:\n"
        "temperatures of walls, air and parts, with a margin against every limit.",
        epilog=f"{_EXAMPLES}\n{_CODES}",
    )
    parser.add_argument("--version", action="version", version=f"{PROGRAM} {__version__}")
    commands = parser.add_subparsers(
        prog=PROGRAM, title="commands", metavar="COMMAND", required=True
    )
    check = commands.add_parser(
        "check",
        help="check a document against its limits",
        description="Checks a document under its conditions and reports margins, worst first.",
        epilog=f"{_CODES}\n{_COLOUR}",
    )
    check.set_defaults(run=_check)
    check.add_argument("file", metavar="FILE", help="the document, in YAML")
    check.add_argument(
        "--condition",
        action="append",
        metavar="NAME",
        help="only this condition; may be given several times (default: all)",
    )
    check.add_argument("--option", metavar="NAME", help="with this design option applied")
    check.add_argument(
        "--strict", action="store_true", help="exit 1 on a marginal verdict in any case"
    )
    check.add_argument(
        "--format", choices=FORMATS, default="text", help="of the report (default: %(default)s)"
    )
    check.add_argument(
        "--output",
        metavar="PATH",
        help="write the report there, at once or not at all (default: standard output)",
    )
    schema = commands.add_parser(
        "schema",
        help="print a JSON Schema",
        description="Prints the JSON Schema (draft 2020-12) of the document, for editors, or of\n"
        "the JSON report.",
    )
    schema.set_defaults(run=_schema)
    schema.add_argument("of", choices=("document", "report"), help="which one")
    return parser


# Output -----------------------------------------------------------------------------------


def _printable(text: str) -> str:
    """Give a text with control characters as escapes; line ends stay."""
    return "".join(
        char if char.isprintable() or char == "\n" else ascii(char)[1:-1] for char in text
    )


def _say(text: str) -> None:
    """Print a diagnostic."""
    if sys.stderr is not None:
        print(_printable(text), file=sys.stderr)


def _terminal() -> "WriterOptions":
    """Find out what standard output can show."""
    from enclosure_check.report.options import WriterOptions

    is_terminal = sys.stdout is not None and sys.stdout.isatty()
    width = NARROWEST
    if is_terminal:
        from shutil import get_terminal_size

        width = min(max(get_terminal_size().columns, NARROWEST), WIDEST)
    colour = is_terminal and os.environ.get("TERM") != "dumb"
    if os.environ.get("FORCE_COLOR"):
        colour = True
    if os.environ.get("NO_COLOR"):
        colour = False
    encoding = getattr(sys.stdout, "encoding", None) or "ascii"
    return WriterOptions(width, colour, encoding)


def _print(text: str) -> None:
    """Print a result, all of it now, so that a failure is noticed."""
    if sys.stdout is None:
        raise CannotWriteError("standard output is closed")
    try:
        sys.stdout.write(text)
        sys.stdout.flush()
    except BrokenPipeError:
        # The reader has seen enough. Python flushes once more when it ends: let that go nowhere.
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
    except OSError as error:
        raise CannotWriteError(f"standard output cannot be written: {error.strerror}") from None


def _same_file(one: str, other: str) -> bool:
    try:
        return os.path.samefile(one, other)
    except (OSError, ValueError):
        return False


def _save(path: str, text: str) -> None:
    """Write a file at once: it is either replaced by all of the text or left as it was.

    A link is followed; what is no file (a device, a pipe) is written to as it is.

    Raises
    ------
    CannotWriteError
        When it cannot be written; nothing is left behind.
    """
    data = text.encode("utf-8")
    try:
        if os.path.exists(path) and not os.path.isfile(path):
            with open(path, "wb") as file:
                file.write(data)
        else:
            _replace(os.path.realpath(path), data)
    except (OSError, ValueError) as error:
        reason = error.strerror if isinstance(error, OSError) and error.strerror else str(error)
        raise CannotWriteError(f"{path}: cannot be written: {reason}") from None


def _replace(target: str, data: bytes) -> None:
    """Write a temporary file beside the target and put it in its place, mode kept."""
    folder, name = os.path.split(target)
    mode = None
    if os.path.exists(target):
        with open(target, "ab"):  # raises where the file may not be written
            mode = os.stat(target).st_mode & 0o7777
    temporary = os.path.join(folder, f".{name[:200]}.{os.getpid()}.tmp")
    descriptor = os.open(temporary, os.O_WRONLY | os.O_CREAT | os.O_EXCL, 0o666)
    try:
        with open(descriptor, "wb") as file:
            file.write(data)
            file.flush()
            os.fsync(file.fileno())
        if mode is not None:
            os.chmod(temporary, mode)
        os.replace(temporary, target)
    except BaseException:
        os.unlink(temporary)
        raise


@contextmanager
def _quick_start(whole_process: bool) -> Iterator[None]:
    """Spare what a short run has no use for.

    The cyclic garbage collector would mostly look at modules as they load, and again as the
    process ends. Matrices here are small: threads for linear algebra take longer to start than
    they save. Validation uses no plug-ins of other packages.
    """
    os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")
    os.environ.setdefault("PYDANTIC_DISABLE_PLUGINS", "__all__")
    enabled = gc.isenabled()
    gc.disable()
    try:
        yield
    finally:
        if whole_process:
            gc.freeze()
        if enabled:
            gc.enable()
