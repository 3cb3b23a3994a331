"""The report as JSON, for other programs."""

from collections.abc import Mapping
from dataclasses import fields, is_dataclass
from typing import Any

from enclosure_check.findings.results import Report
from enclosure_check.findings.run import Run
from enclosure_check.report.options import WriterOptions


def write_json(result: Report | Run, options: WriterOptions) -> str:  # noqa: ARG001 - the same anywhere
    """Give a report, or those of several documents, as JSON.

    The keys of the records, pure ASCII, the same bytes every time.

    Raises
    ------
    ValueError
        When a number is not finite: JSON has no word for it.
    """
    import json

    return json.dumps(plain(result), indent=2, allow_nan=False) + "\n"


def plain(value: Any) -> Any:
    """Give records as dictionaries and tuples as lists, all the way down."""
    if is_dataclass(value):
        return {field.name: plain(getattr(value, field.name)) for field in fields(value)}
    if isinstance(value, Mapping):
        return {key: plain(item) for key, item in value.items()}
    if isinstance(value, tuple):
        return [plain(item) for item in value]
    return value
