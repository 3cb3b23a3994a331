"""The parser of the command line; each command adds its own arguments."""

import argparse
import os
import sys
from typing import Any, NoReturn

from enclosure_check import __version__
from enclosure_check.cli import check_command, completion_command, new_command, schema_command
from enclosure_check.cli.codes import CODES
from enclosure_check.cli.output import PROGRAM, printable

_EXAMPLES = """\
examples:
  enclosure-check new box.yaml
  enclosure-check check box.yaml
  enclosure-check check box.yaml --condition noon_sun --condition cold_soak
  enclosure-check check box.yaml --option white_finish --strict
  enclosure-check check box.yaml --format json --output box.report.json
  enclosure-check schema document > enclosure.schema.json
"""

# Each has `add(commands)`, which adds its parser and sets `run`, a function of its arguments.
COMMANDS = (check_command, new_command, schema_command, completion_command)


def _formatter(prog: str) -> argparse.RawDescriptionHelpFormatter:
    """Give a formatter for help; told its width, it need not load the compression libraries."""
    return argparse.RawDescriptionHelpFormatter(prog, width=_columns() - 2)


def _columns() -> int:
    """Give the columns of the terminal, as `shutil.get_terminal_size` finds them."""
    try:
        columns = int(os.environ["COLUMNS"])
    except (KeyError, ValueError):
        columns = 0
    if columns <= 0:
        try:
            columns = os.get_terminal_size(sys.__stdout__.fileno()).columns if sys.__stdout__ else 0
        except (ValueError, OSError):
            columns = 0
    return columns or 80


class Parser(argparse.ArgumentParser):
    """A parser whose options are never abbreviated and whose messages are printable."""

    def __init__(self, **settings: Any) -> None:
        super().__init__(
            allow_abbrev=False,
            formatter_class=_formatter,
            **settings,
        )

    def error(self, message: str) -> NoReturn:
        """End with exit code 2 and a message that is safe to print."""
        super().error(printable(message))


def parser() -> Parser:
    """Give the parser of the whole command line."""
    whole = Parser(
        prog=PROGRAM,
        description="Checks the passive cooling of an electronics enclosure described in YAML:\n"
        "temperatures of walls, air and parts, with a margin against every limit.",
        epilog=f"{_EXAMPLES}\n{CODES}",
    )
    whole.add_argument("--version", action="version", version=f"{PROGRAM} {__version__}")
    commands = whole.add_subparsers(
        prog=PROGRAM, title="commands", metavar="COMMAND", required=True
    )
    for command in COMMANDS:
        command.add(commands)
    return whole
