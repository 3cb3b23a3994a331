"""One answer per document: its report, or why there is none."""

from collections.abc import Callable, Iterable, Sequence
from functools import partial
from typing import NamedTuple

from enclosure_check import __version__
from enclosure_check.check import NotConvergedError, check, check_and_explain
from enclosure_check.description.load import LoadedDocument, load_document
from enclosure_check.description.problems import DocumentError, Problem
from enclosure_check.description.size import refuse_large
from enclosure_check.description.yaml_nodes import locate
from enclosure_check.findings.results import Report
from enclosure_check.findings.run import NoAnswer, ProblemFinding, Reason, Run, run_of


class Asked(NamedTuple):
    """What is asked of each document."""

    option: str | None
    conditions: Sequence[str] | None
    strict: bool
    explain: str | None = None
    """A part of it."""
    sensitivities: int = 0
    """How many of the smallest margin."""
    allowed_folders: Sequence[str] = ()
    large: bool = False
    """Whether documents may be larger than those of a stranger."""
    processes: int = 1
    """How many may work at once."""


def answer_all(
    paths: Sequence[str],
    refused: Iterable[tuple[str, str]],
    asked: Asked,
    tell: Callable[[str], None],
) -> tuple[Run, list[str]]:
    """Check documents one after the other; what stops one does not stop the others.

    Parameters
    ----------
    paths
        The documents.
    refused
        Folders without documents, with the reason.
    asked
        What is asked of each.
    tell
        Told what is being done, as it goes on.

    Returns
    -------
    tuple
        The run, and the diagnostics of all documents without an answer.
    """
    reports: list[Report] = []
    without: list[NoAnswer] = []
    said: list[str] = []
    for count, path in enumerate(paths, 1):
        lead = f"{count} of {len(paths)}: {path}" if len(paths) > 1 else path
        answer, lines = _answer(path, asked, partial(_tell_under, tell, lead))
        said += lines
        if isinstance(answer, Report):
            reports.append(answer)
        else:
            without.append(answer)
    for folder, reason in refused:
        problem = Problem(folder, 1, 1, "", reason)
        said.append(str(problem))
        without.append(_no_answer(folder, "bad_input", [problem]))
    return run_of(__version__, asked.strict, tuple(reports), tuple(without)), said


def _tell_under(tell: Callable[[str], None], lead: str, name: str) -> None:
    tell(f"{lead}: {name}")


def _answer(
    path: str, asked: Asked, tell: Callable[[str], None]
) -> tuple[Report | NoAnswer, list[str]]:
    document: LoadedDocument | None = None
    try:
        document = load_document(path, allowed_folders=asked.allowed_folders)
        return _report(document, asked, tell), []
    except DocumentError as error:
        lines = [str(problem) for problem in error.problems]
        return _no_answer(path, "bad_input", error.problems), lines
    except NotConvergedError as error:
        assert document is not None
        at = locate(document.node, ("conditions", error.condition), at_key=True)
        problem = Problem(path, *at, "", str(error))
        return _no_answer(path, "not_converged", [problem]), [f"{path}: {error}"]


def _report(document: LoadedDocument, asked: Asked, tell: Callable[[str], None]) -> Report:
    option, conditions = asked.option, asked.conditions
    if not asked.large:
        refuse_large(document.file, document.cases(option=option, conditions=conditions))
    if asked.explain is None:
        return check(
            document,
            option=option,
            conditions=conditions,
            tell=tell,
            sensitivities=asked.sensitivities,
            processes=asked.processes,
        )
    return check_and_explain(
        document, asked.explain, option=option, conditions=conditions, tell=tell
    )


def _no_answer(path: str, reason: Reason, problems: Iterable[Problem]) -> NoAnswer:
    return NoAnswer(
        path,
        reason,
        tuple(
            ProblemFinding(each.file, each.line, each.column, each.field, each.message)
            for each in problems
        ),
    )
