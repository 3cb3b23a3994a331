"""Reports to lay out: of small documents, and changed by hand where no document gives the case.

Import it as ``from support.reports import report_of`` (``tests`` is on the path).
"""

from dataclasses import replace
from pathlib import Path
from typing import Any

import yaml

from enclosure_check.check import check
from enclosure_check.description.load import load_document
from enclosure_check.findings.results import ConditionFinding, Report

SAMPLES = sorted((Path(__file__).parent.parent.parent / "sample_boards").glob("*.yaml"))

SMALL: dict[str, Any] = {
    "title": "Small box",
    "box": {"width_mm": 100, "height_mm": 120, "depth_mm": 60},
    "defaults": {
        "wall": {"material": "pc_abs", "thickness_mm": 2, "finish_outside": "white_plastic"}
    },
    "parts": {
        "X1": {
            "place": "air",
            "length_mm": 20,
            "width_mm": 20,
            "height_mm": 10,
            "power_w": 1.5,
            "limits": {"case": {"max_c": 110}},
        }
    },
    "surroundings": {"air_c": 25},
}


def write_document(folder: Path, document: Any = SMALL) -> Path:
    path = folder / "box.yaml"
    path.write_text(yaml.safe_dump(document, sort_keys=False, allow_unicode=True), "utf-8")
    return path


def report_of(folder: Path, document: Any = SMALL) -> Report:
    return check(load_document(str(write_document(folder, document))))


def with_condition(report: Report, **changes: Any) -> Report:
    """The report with its first condition changed."""
    first, *others = report.conditions
    changed: ConditionFinding = replace(first, **changes)
    return replace(report, conditions=(changed, *others))
