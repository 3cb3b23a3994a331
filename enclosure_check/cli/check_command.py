"""The command ``check``: a document against its limits."""

import argparse
from typing import Any

from enclosure_check.cli.codes import CODES, ExitCode, exit_code
from enclosure_check.cli.output import (
    CannotWriteError,
    print_result,
    same_file,
    save,
    say,
    terminal_options,
)

FORMATS = ("text", "json")

_COLOUR = """\
Colour is added on a terminal only; NO_COLOR turns it off, FORCE_COLOR on."""


def add(commands: Any) -> None:
    """Add the command's parser."""
    check = commands.add_parser(
        "check",
        help="check a document against its limits",
        description="Checks a document under its conditions and reports margins, worst first.",
        epilog=f"{CODES}\n{_COLOUR}",
    )
    check.set_defaults(run=run)
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


def run(arguments: argparse.Namespace) -> ExitCode:
    """Check a document and give the report out.

    Raises
    ------
    CannotWriteError
        When the report cannot be written where it is wanted.
    """
    from enclosure_check.check import NotConvergedError, check
    from enclosure_check.description.load import load_document
    from enclosure_check.description.problems import DocumentError

    conditions = None
    if arguments.condition:
        conditions = tuple(dict.fromkeys(arguments.condition))
    if arguments.output is not None and same_file(arguments.output, arguments.file):
        raise CannotWriteError(f"{arguments.output}: is the document itself, not overwritten")
    try:
        document = load_document(arguments.file)
        report = check(document, option=arguments.option, conditions=conditions)
    except DocumentError as error:
        for problem in error.problems:
            say(str(problem))
        return ExitCode.BAD_INPUT
    except NotConvergedError as error:
        say(f"{arguments.file}: {error}")
        return ExitCode.NOT_CONVERGED
    from enclosure_check.report.writers import WRITERS

    write = WRITERS[arguments.format]
    if arguments.output is None:
        print_result(write(report, terminal_options()))
    else:
        from enclosure_check.report.options import WriterOptions

        save(arguments.output, write(report, WriterOptions()))
    return exit_code(report, strict=arguments.strict)
