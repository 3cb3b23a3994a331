"""The command ``check``: documents against their limits."""

import argparse
from collections.abc import Sequence
from typing import TYPE_CHECKING, Any, NamedTuple

from enclosure_check.cli.baseline import DEFAULT_LOSS_K, against, read_baseline
from enclosure_check.cli.codes import CODES, ExitCode, UsageError, run_exit_code
from enclosure_check.cli.output import (
    CannotWriteError,
    Progress,
    print_result,
    same_file,
    save,
    say,
    terminal_options,
)

if TYPE_CHECKING:
    from enclosure_check.findings.run import Run

MOST_LOSS_K = 1000.0
DEFAULT_SENSITIVITIES, MOST_SENSITIVITIES = 5, 1000
FORMATS = ("text", "json", "markdown", "junit", "sarif")

_ABOUT = """\
Checks documents under their conditions and reports margins, worst first.

A folder stands for every .yaml and .yml file in it and its sub-folders that has
two of the keys box, boards, parts and surroundings at the left margin; names
that start with a dot and links that lead out of it are passed over."""

_EXAMPLES = """\
examples:
  enclosure-check check box.yaml
  enclosure-check check box.yaml --condition noon_sun --strict
  enclosure-check check box.yaml --explain U1
  enclosure-check check enclosures/ --quiet
  enclosure-check check enclosures/ --write json=run.json --write junit=run.xml
  enclosure-check check enclosures/ --baseline main.json --allow-loss-k 0.5
"""

_COLOUR = """\
Colour is added on a terminal only; NO_COLOR turns it off, FORCE_COLOR on."""


class Destination(NamedTuple):
    """A format and where it goes, None for standard output."""

    format: str
    path: str | None


def add(commands: Any) -> None:
    """Add the command's parser."""
    check = commands.add_parser(
        "check",
        help="check documents against their limits",
        description=_ABOUT,
        epilog=f"{_EXAMPLES}\n{CODES}\n{_COLOUR}",
    )
    check.set_defaults(run=run)
    check.add_argument(
        "files", metavar="FILE", nargs="+", help="a document, in YAML, or a folder with documents"
    )
    check.add_argument(
        "--condition",
        action="append",
        metavar="NAME",
        help="only this condition; may be given several times (default: all)",
    )
    check.add_argument("--option", metavar="NAME", help="with this design option applied")
    check.add_argument(
        "--explain",
        metavar="PART",
        help="where this part's heat goes and what a kelvin of margin costs, under the condition "
        "where its margin is smallest; of one document, in place of the text report",
    )
    check.add_argument(
        "--sensitivities",
        type=_count,
        nargs="?",
        const=DEFAULT_SENSITIVITIES,
        default=0,
        metavar="N",
        help="also tell the N numbers of the document that move the smallest margin of a part most "
        "(when given without N: %(const)s)",
    )
    check.add_argument(
        "--strict", action="store_true", help="exit 1 on a marginal verdict in any case"
    )
    check.add_argument(
        "--format", choices=FORMATS, default="text", help="of the report (default: %(default)s)"
    )
    check.add_argument(
        "--allow-folder",
        action="append",
        default=[],
        metavar="PATH",
        help="part lists may lie there too, besides the document's own folder; may be repeated",
    )
    check.add_argument(
        "--large",
        action="store_true",
        help="also check documents that take longer than some seconds",
    )
    check.add_argument(
        "--output",
        metavar="PATH",
        help="write the report there, at once or not at all (default: standard output)",
    )
    check.add_argument(
        "--write",
        action="append",
        default=[],
        type=_destination,
        metavar="FORMAT=PATH",
        help="also write a report of this format there; may be given several times",
    )
    check.add_argument(
        "--baseline",
        metavar="FILE",
        help="compare with an earlier JSON report: exit 1 when a margin fell by more than allowed, "
        "even when it is still there",
    )
    check.add_argument(
        "--allow-loss-k",
        type=_loss,
        metavar="K",
        help=f"what a margin may lose against the baseline (default: {DEFAULT_LOSS_K:g})",
    )
    check.add_argument(
        "--quiet",
        action="store_true",
        help="one line per document, the verdict and the smallest margin, in place of the text "
        "report; no progress",
    )


def _destination(text: str) -> Destination:
    name, found, path = text.partition("=")
    if not (found and path):
        raise argparse.ArgumentTypeError(f"given {text!r}, allowed: FORMAT=PATH")
    if name not in FORMATS:
        allowed = ", ".join(FORMATS)
        raise argparse.ArgumentTypeError(f"given {name!r}, allowed formats: {allowed}")
    return Destination(name, path)


def _count(text: str) -> int:
    if not text.isdecimal() or not 1 <= int(text) <= MOST_SENSITIVITIES:
        raise argparse.ArgumentTypeError(f"given {text!r}, allowed: 1 to {MOST_SENSITIVITIES}")
    return int(text)


def _loss(text: str) -> float:
    try:
        loss = float(text)
    except ValueError:
        loss = -1.0
    if not 0 <= loss <= MOST_LOSS_K:
        raise argparse.ArgumentTypeError(f"given {text!r}, allowed: 0 to {MOST_LOSS_K:g} K")
    return loss


def run(arguments: argparse.Namespace) -> ExitCode:
    """Check documents and give the reports out.

    Raises
    ------
    CannotWriteError
        When a report cannot be written where it is wanted.
    UsageError
        When arguments do not go together.
    """
    from enclosure_check.cli.answers import Asked, answer_all
    from enclosure_check.cli.documents import find_documents, is_several
    from enclosure_check.cli.whole_process import prepare
    from enclosure_check.workers import see_off

    if arguments.quiet and arguments.format != "text":
        raise UsageError("--quiet shortens the text report; it does not go with --format")
    if arguments.allow_loss_k is not None and arguments.baseline is None:
        raise UsageError("--allow-loss-k needs a --baseline to compare with")
    if arguments.explain is not None and (
        arguments.quiet or arguments.baseline is not None or is_several(arguments.files)
    ):
        raise UsageError("--explain goes with one document, and not with --quiet or --baseline")
    if arguments.sensitivities and (arguments.explain is not None or arguments.quiet):
        raise UsageError("--sensitivities does not go with --explain or --quiet")
    conditions = None
    if arguments.condition:
        conditions = tuple(dict.fromkeys(arguments.condition))
    destinations = [*arguments.write, Destination(arguments.format, arguments.output)]
    documents = find_documents(arguments.files)
    _refuse_overwriting(destinations, documents.paths)
    earlier = None
    if arguments.baseline is not None:
        earlier = read_baseline(arguments.baseline, documents.paths)
    # A process that does other things as well is not forked.
    processes = prepare() if arguments.whole_process else 1
    with Progress(wanted=not arguments.quiet) as progress:
        run, said = answer_all(
            documents.paths,
            documents.refused,
            Asked(
                arguments.option,
                conditions,
                arguments.strict,
                arguments.explain,
                arguments.sensitivities,
                arguments.allow_folder,
                arguments.large,
                processes,
            ),
            progress.tell,
        )
    if earlier is not None:
        run = against(run, earlier, arguments.baseline, arguments.allow_loss_k)
    for line in said:
        say(line)
    give_out(run, destinations, several=is_several(arguments.files), short=arguments.quiet)
    see_off()
    return run_exit_code(run)


def _refuse_overwriting(destinations: Sequence[Destination], documents: Sequence[str]) -> None:
    """Refuse to write on a document, or two reports to one place."""
    import os

    paths = [path for _, path in destinations if path is not None]
    for place, path in enumerate(paths):
        if any(same_file(path, document) for document in documents):
            raise CannotWriteError(f"{path}: is the document itself, not overwritten")
        if os.path.abspath(path) in map(os.path.abspath, paths[:place]):
            raise UsageError(f"{path}: two reports cannot go to one place")


def give_out(
    run: "Run", destinations: Sequence[Destination], *, several: bool, short: bool
) -> None:
    """Write a run in every format wanted: all are made before the first is written.

    A format that cannot tell what went wrong is left out where no document has an answer.

    Raises
    ------
    CannotWriteError
        When one cannot be written.
    """
    from dataclasses import replace

    from enclosure_check.report.options import WriterOptions
    from enclosure_check.report.writers import SHOW_ERRORS, WRITERS

    made = []
    for name, path in destinations:
        if run.documents or name in SHOW_ERRORS:
            options = terminal_options() if path is None else WriterOptions()
            options = replace(options, several=several, short=short and name == "text")
            made.append((path, WRITERS[name](run, options)))
    for path, text in made:
        if path is None:
            print_result(text)
        else:
            save(path, text)
