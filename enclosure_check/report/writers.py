"""The table of report formats; each is imported when it is asked for."""

from collections.abc import Callable

from enclosure_check.findings.run import Run
from enclosure_check.report.options import WriterOptions

Writer = Callable[[Run, WriterOptions], str]


def _text(run: Run, options: WriterOptions) -> str:
    if not options.several and not options.short:
        if hasattr(run.documents[0], "explain"):
            from enclosure_check.report.explain import write_explanation

            return write_explanation(run.documents[0], options)
        from enclosure_check.report.text import write_text

        return write_text(run.documents[0], options)
    from enclosure_check.report.run_text import write_run

    return write_run(run, options)


def _json(run: Run, options: WriterOptions) -> str:
    from enclosure_check.report.json_report import write_json

    return write_json(run if options.several else run.documents[0], options)


def _markdown(run: Run, options: WriterOptions) -> str:
    from enclosure_check.report.markdown import write_markdown

    return write_markdown(run, options)


def _junit(run: Run, options: WriterOptions) -> str:
    from enclosure_check.report.junit import write_junit

    return write_junit(run, options)


def _sarif(run: Run, options: WriterOptions) -> str:
    from enclosure_check.report.sarif import write_sarif

    return write_sarif(run, options)


WRITERS: dict[str, Writer] = {
    "text": _text,
    "json": _json,
    "markdown": _markdown,
    "junit": _junit,
    "sarif": _sarif,
}
# Those that show what has no answer; the others need a document that has one.
SHOW_ERRORS = frozenset({"markdown", "junit", "sarif"})
