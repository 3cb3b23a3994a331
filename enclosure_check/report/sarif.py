"""The report as SARIF 2.1.0, for programs that mark lines of files.

Static Analysis Results Interchange Format (SARIF) Version 2.1.0, OASIS Standard, 2020.
"""

from collections.abc import Iterator, Mapping
from typing import Any, NamedTuple

from enclosure_check.findings.results import Position, Report
from enclosure_check.findings.run import NoAnswer, Run
from enclosure_check.report.judged import Judged, file_of, in_words, judged, loss_in_words
from enclosure_check.report.layout import clean
from enclosure_check.report.options import WriterOptions

SCHEMA = (
    "https://docs.oasis-open.org/sarif/sarif/v2.1.0/errata01/os/schemas/sarif-schema-2.1.0.json"
)
ROOT = "%SRCROOT%"

# What a result is about: level, in short, in full.
RULES: dict[str, tuple[str, str, str]] = {
    "limit-passed": (
        "error",
        "A limit is passed.",
        "The temperature computed lies beyond a limit that the document states.",
    ),
    "margin-too-small": (
        "warning",
        "A margin is smaller than wanted.",
        "The limit is kept, but the margin wanted, or the band of the temperature, reaches past "
        "it. An error where that stops a build.",
    ),
    "margin-lost": (
        "error",
        "A margin fell.",
        "The margin fell by more than allowed since the result compared with.",
    ),
    "no-longer-checked": (
        "warning",
        "Something is no longer checked.",
        "The result compared with holds a condition or part that this one does not.",
    ),
    "to-be-looked-at": (
        "note",
        "Something to be looked at.",
        "What makes an answer less certain, such as a law used outside its range.",
    ),
    "bad-input": ("error", "A document is unfit.", "The document was not checked."),
    "not-converged": (
        "error",
        "There is no answer.",
        "No steady temperatures were found, so nothing can be said of margins.",
    ),
}
_ORDER = tuple(RULES)

_Json = dict[str, Any]


class _Result(NamedTuple):
    rule: str
    message: str
    document: str
    line: int | None
    column: int | None
    fingerprint: tuple[str, ...]
    """What makes it the same result from one run to the next."""
    level: str = ""
    properties: Mapping[str, Any] | None = None


def write_sarif(run: Run, options: WriterOptions) -> str:  # noqa: ARG001 - the same anywhere
    """Give a run as SARIF: a result for each limit that is not kept, where its part stands."""
    import json

    results = [*_results(run)]
    log = {
        "$schema": SCHEMA,
        "version": "2.1.0",
        "runs": [
            {
                "tool": {
                    "driver": {
                        "name": "enclosure-check",
                        "version": run.version,
                        "rules": [_rule(name) for name in _ORDER],
                    }
                },
                "invocations": [{"executionSuccessful": not run.without_answer}],
                "originalUriBaseIds": {
                    ROOT: {"description": {"text": "The folder the check was started in."}}
                },
                "artifacts": [
                    {
                        "location": _location(report.document),
                        "roles": ["analysisTarget"],
                        "hashes": {"sha-256": report.digest},
                    }
                    for report in run.documents
                ],
                "columnKind": "unicodeCodePoints",
                "results": [_result(each) for each in results],
            }
        ],
    }
    return json.dumps(log, indent=2, allow_nan=False) + "\n"


# From findings to results -----------------------------------------------------------------


def _results(run: Run) -> Iterator[_Result]:
    for report in run.documents:
        for each in judged(report, strict=run.strict):
            yield from _of_limit(report, each)
        yield from _of_document(report)
    for unanswered in run.without_answer:
        yield from _of_error(unanswered)
    for document in run.unchecked:
        message = f"{text(document)} is in the baseline, but was not checked."
        yield _Result("no-longer-checked", message, document, None, None, (document,))


def _of_limit(report: Report, each: Judged) -> Iterator[_Result]:
    where = (each.condition, each.name, each.kind, each.side)
    lead = f"{text(each.label)} under {text(each.condition)}: {in_words(each)}"
    numbers = {
        "condition": each.condition,
        "temperature_c": each.temperature_c,
        "limit_c": each.limit_c,
        "margin_k": each.margin_k,
        **({} if each.band_k is None else {"band_k": each.band_k}),
    }
    if each.verdict != "pass":
        rule = "limit-passed" if each.verdict == "fail" else "margin-too-small"
        level = "error" if each.stops else "warning"
        yield _at(rule, f"{lead}.", report, each.position, where, level, numbers)
    if each.lost and report.baseline is not None:
        message = f"{lead}; {loss_in_words(each, report.baseline.allow_loss_k)}."
        yield _at("margin-lost", message, report, each.position, where, "error", numbers)


def _of_document(report: Report) -> Iterator[_Result]:
    for condition in report.conditions:
        for warning in condition.warnings:
            message = f"Under {text(condition.name)}: {text(warning)}"
            where = (condition.name, warning)
            yield _at("to-be-looked-at", message, report, None, where)
    if report.baseline is not None:
        for what, names in (
            ("Condition", report.baseline.conditions_removed),
            ("Part", report.baseline.parts_removed),
        ):
            for name in names:
                message = f"{what} {text(name)} is in the baseline, but was not checked."
                yield _at("no-longer-checked", message, report, None, (what, name))


def _at(
    rule: str,
    message: str,
    report: Report,
    position: Position | None,
    where: tuple[str, ...],
    level: str = "",
    properties: Mapping[str, Any] | None = None,
) -> _Result:
    line, column = (None, None) if position is None else (position.line, position.column)
    fingerprint = (report.document, *where)
    file = file_of(report, position)
    return _Result(rule, message, file, line, column, fingerprint, level, properties)


def _of_error(each: NoAnswer) -> Iterator[_Result]:
    rule = each.reason.replace("_", "-")
    for problem in each.problems:
        field = f"{text(problem.field)}: " if problem.field else ""
        yield _Result(
            rule,
            f"{field}{text(problem.message)}",
            problem.file,
            problem.line,
            problem.column,
            (each.document, problem.field, problem.message),
        )


# From results to JSON ---------------------------------------------------------------------


def _rule(name: str) -> _Json:
    level, short, full = RULES[name]
    return {
        "id": name,
        "shortDescription": {"text": short},
        "fullDescription": {"text": full},
        "defaultConfiguration": {"level": level},
    }


def _result(each: _Result) -> _Json:
    from hashlib import sha256

    place: _Json = {"artifactLocation": _location(each.document)}
    if each.line is not None:
        place["region"] = {"startLine": each.line, "startColumn": each.column}
    # Length of each piece before it: no two lists of names give the same text.
    named = "".join(f"{len(piece)}:{piece}" for piece in (each.rule, *each.fingerprint))
    digest = sha256(named.encode("utf-8", "backslashreplace")).hexdigest()
    result: _Json = {
        "ruleId": each.rule,
        "ruleIndex": _ORDER.index(each.rule),
        "level": each.level or RULES[each.rule][0],
        "message": {"text": each.message},
        "locations": [{"physicalLocation": place}],
        "partialFingerprints": {"finding/v1": digest},
    }
    if each.properties is not None:
        result["properties"] = {
            key: clean(value, "utf-8") if isinstance(value, str) else value
            for key, value in each.properties.items()
        }
    return result


def _location(path: str) -> _Json:
    """Give a path as a URI, relative to where the check was started unless it is absolute."""
    from urllib.parse import quote

    plain = path
    while plain.startswith("./"):
        plain = plain[2:].lstrip("/")
    encoded = quote(plain, safe="/", errors="surrogateescape")
    if path.startswith("/"):
        return {"uri": f"file://{encoded}"}
    return {"uri": encoded, "uriBaseId": ROOT}


# What SARIF 2.1.0 gives a meaning within a message: ``[text](target)`` is a link (3.11.6), ``{0}``
# a placeholder (3.11.5); section numbers from memory.
_SHOWN = {char: f"\\x{ord(char):02x}" for char in "[]{}"}


def text(words: str) -> str:
    """Give a user's text within a message: no link, no placeholder, no control character."""
    return "".join(_SHOWN.get(char, char) for char in clean(words, "utf-8"))
