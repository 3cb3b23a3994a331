"""The table of report formats."""

from collections.abc import Callable

from enclosure_check.findings.results import Report
from enclosure_check.report.json_report import write_json
from enclosure_check.report.options import WriterOptions
from enclosure_check.report.text import write_text

WRITERS: dict[str, Callable[[Report, WriterOptions], str]] = {
    "text": write_text,
    "json": write_json,
}
