"""The result of one run over one or several documents: their reports, and what had no answer."""

from __future__ import annotations

from typing import Annotated, Literal

from enclosure_check.findings.about import about as _about
from enclosure_check.findings.results import Report, Verdict, worst
from enclosure_check.records import dataclass

Reason = Literal["bad_input", "not_converged"]


@dataclass(frozen=True)
class ProblemFinding:
    """Why a document has no answer."""

    file: Annotated[str, _about("The file it is in.")]
    line: Annotated[int, _about("Line, from 1.")]
    column: Annotated[int, _about("Column, from 1.")]
    field: Annotated[str, _about("Dotted path of the field, empty where there is none.")]
    message: Annotated[str, _about("What is wrong.")]


@dataclass(frozen=True)
class NoAnswer:
    """A document that could not be checked."""

    document: Annotated[str, _about("Path of the document or folder.")]
    reason: Annotated[Reason, _about("Whether it is unfit or has no steady temperatures.")]
    problems: Annotated[tuple[ProblemFinding, ...], _about("Everything found wrong.")]


@dataclass(frozen=True)
class Run:
    """The result of checking several documents at once."""

    format: Annotated[Literal[1], _about("Version of this report format.")]
    version: Annotated[str, _about("Version of the program.")]
    verdict: Annotated[
        Verdict | Literal["error"],
        _about("The worst verdict of all documents; error when one has no answer."),
    ]
    strict: Annotated[bool, _about("Whether a marginal verdict stops in any case.")]
    documents: Annotated[tuple[Report, ...], _about("Reports, in the order asked for.")]
    without_answer: Annotated[tuple[NoAnswer, ...], _about("Documents without an answer.")]
    unchecked: Annotated[
        tuple[str, ...],
        _about("Documents of the earlier result compared with that were not asked for."),
    ]


def run_of(
    version: str, strict: bool, documents: tuple[Report, ...], without_answer: tuple[NoAnswer, ...]
) -> Run:
    """Put the results of a run together."""
    verdict = worst([report.verdict for report in documents])
    return Run(
        format=1,
        version=version,
        verdict="error" if without_answer else verdict,
        strict=strict,
        documents=documents,
        without_answer=without_answer,
        unchecked=(),
    )


def stops(verdict: Verdict, report: Report, *, strict: bool) -> bool:
    """Tell whether a verdict stops a build: marginal does where a margin is stated."""
    return verdict == "fail" or (verdict == "marginal" and (strict or report.margin_stated))
