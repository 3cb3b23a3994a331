"""The command ``completion``: a script by which a shell completes commands and options."""

import argparse
from typing import Any

from enclosure_check.cli.codes import ExitCode
from enclosure_check.cli.output import PROGRAM, print_result

SHELL_NAMES = ("bash", "zsh", "fish")

_EXAMPLES = """\
examples (in the file that the shell reads when it starts):
  source <(enclosure-check completion bash)
  source <(enclosure-check completion zsh)
  enclosure-check completion fish | source"""


def add(commands: Any) -> None:
    """Add the command's parser."""
    completion = commands.add_parser(
        "completion",
        help="print a completion script for a shell",
        description="Prints a script by which a shell completes commands, options and paths.",
        epilog=_EXAMPLES,
    )
    completion.set_defaults(run=run)
    completion.add_argument("shell", choices=SHELL_NAMES, help="which one")


def run(arguments: argparse.Namespace) -> ExitCode:
    """Print the script."""
    from enclosure_check.cli.arguments import parser
    from enclosure_check.cli.completion import SHELLS, commands_of

    print_result(SHELLS[arguments.shell](PROGRAM, commands_of(parser())))
    return ExitCode.PASS
