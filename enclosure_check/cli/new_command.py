"""The command ``new``: a starter document that runs as it stands."""

import argparse
from typing import Any

from enclosure_check.cli.codes import ExitCode
from enclosure_check.cli.output import PROGRAM, CannotWriteError, print_result, save
from enclosure_check.description.starters import KINDS, SCHEMA_FILE, starter

_EXAMPLES = """\
examples:
  enclosure-check new box.yaml
  enclosure-check new box.yaml --kind padded_outdoor --schema
  enclosure-check check box.yaml

--schema writes enclosure.schema.json beside the document and names it in the
document's first line, by the modeline of the YAML language server: editors
with that server complete and check keys then, others see a comment."""


def add(commands: Any) -> None:
    """Add the command's parser."""
    kinds = "\n".join(f"  {name:<16}{words}" for name, words in KINDS.items())
    new = commands.add_parser(
        "new",
        help="write a starter document",
        description="Writes a starter document, with comments, that runs as it stands.\n\n"
        f"kinds:\n{kinds}",
        epilog=_EXAMPLES,
    )
    new.set_defaults(run=run)
    new.add_argument("path", metavar="PATH", help="the document to write")
    new.add_argument(
        "--kind", choices=tuple(KINDS), default="sealed_wall", help="default: %(default)s"
    )
    new.add_argument("--schema", action="store_true", help="write the JSON Schema beside it")
    new.add_argument("--force", action="store_true", help="replace what is there")


def run(arguments: argparse.Namespace) -> ExitCode:
    """Write the starter, and the schema where it is wanted.

    Raises
    ------
    CannotWriteError
        When it is there already, or cannot be written.
    """
    import os

    path: str = arguments.path
    beside = os.path.join(os.path.dirname(path), SCHEMA_FILE)
    files = {path: starter(arguments.kind, schema=SCHEMA_FILE if arguments.schema else None)}
    if arguments.schema:
        from enclosure_check.cli.schema_command import schema_text

        # The document last: where the schema cannot be written there is no document either.
        files = {beside: schema_text("document"), **files}
    for each, text in files.items():
        if not arguments.force and os.path.lexists(each) and not _holds(each, text):
            raise CannotWriteError(f"{each}: is there already; --force replaces it")
    for each, text in files.items():
        save(each, text)
    print_result(f"{path} is written. Check it: {PROGRAM} check {path}\n")
    return ExitCode.PASS


def _holds(path: str, text: str) -> bool:
    """Tell whether a file holds just this text: then nothing is lost by writing it again."""
    try:
        with open(path, encoding="utf-8", newline="") as file:
            return file.read(len(text) + 1) == text
    except (OSError, ValueError):
        return False
