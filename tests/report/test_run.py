"""Several documents in one report: the table, the lines, the JSON and its schema."""

import json
from dataclasses import replace

import pytest
from jsonschema import Draft202012Validator
from support.gate import LOST_RUN
from support.reports import report_of

from enclosure_check.findings.run import NoAnswer, ProblemFinding, Run, run_of, stops
from enclosure_check.report.changes import about_inputs
from enclosure_check.report.json_report import write_json
from enclosure_check.report.layout import cells_of
from enclosure_check.report.options import WriterOptions
from enclosure_check.report.run_text import verdict_line, write_run
from enclosure_check.report.schema import DIALECT, report_schema, run_schema

NONE = NoAnswer(
    "bad\x1b[31m.yaml",
    "bad_input",
    (ProblemFinding("bad.yaml", 3, 5, "box.width_mm", "given 'wide'"),),
)


@pytest.fixture
def report(tmp_path):
    return replace(report_of(tmp_path), document="box.yaml")


@pytest.fixture
def run(report) -> Run:
    fail = replace(report, document="x" * 90 + "/電源.yaml", verdict="fail")
    return run_of("1", False, (report, fail), (NONE,))


def test_the_verdict_is_the_worst_and_error_without_an_answer(report):
    fail = replace(report, verdict="fail")
    assert run_of("1", False, (report,), ()).verdict == "pass"
    assert run_of("1", False, (report, fail), ()).verdict == "fail"
    assert run_of("1", False, (report,), (NONE,)).verdict == "error"


@pytest.mark.parametrize(
    ("verdict", "margin_stated", "strict", "expected"),
    [
        ("pass", True, True, False),
        ("marginal", False, False, False),
        ("marginal", True, False, True),
        ("marginal", False, True, True),
        ("fail", False, False, True),
    ],
)
def test_what_stops(report, verdict, margin_stated, strict, expected):
    report = replace(report, margin_stated=margin_stated)
    assert stops(verdict, report, strict=strict) is expected


@pytest.mark.parametrize("width", [80, 140])
def test_text_fits_and_holds_each_report(run, width):
    shown = write_run(run, WriterOptions(width=width, several=True))
    lines = shown.splitlines()
    assert lines[0] == "3 documents: 1 FAIL, 1 pass, 1 WITHOUT AN ANSWER."
    assert max(map(cells_of, lines)) <= width
    assert any(line.lstrip().startswith("...xxx") and "/電源.yaml" in line for line in lines)
    assert lines.count("Small box") == 2
    assert "\x1b" not in shown
    assert r"  - bad\x1b[31m.yaml" in lines


def test_in_short_one_line_each_whatever_is_in_a_name(report, run):
    shown = write_run(run, WriterOptions(short=True))
    assert len(shown.splitlines()) == 2
    sly = replace(report, document="a\n\x1b[31mb.yaml")
    shown = write_run(run_of("1", False, (sly,), ()), WriterOptions(short=True, encoding="ascii"))
    assert shown == "a\\n\\x1b[31mb.yaml: pass, smallest margin 26.1 K: X1 case max\n"


def test_a_line_without_any_limit(report):
    (condition,) = report.conditions
    report = replace(report, conditions=(replace(condition, parts=()),))
    assert verdict_line(report) == "box.yaml: pass, no limit stated"


def test_json_follows_its_schema(run):
    schema = run_schema()
    Draft202012Validator.check_schema(schema)
    assert schema["$schema"] == DIALECT
    text = write_json(run, WriterOptions())
    assert text.isascii()
    data = json.loads(text)
    assert list(Draft202012Validator(schema).iter_errors(data)) == []
    assert data["without_answer"][0]["problems"][0]["line"] == 3
    for change in ({"verdict": "perhaps"}, {"documents": [{}]}, {"without_answer": [{}]}):
        assert list(Draft202012Validator(schema).iter_errors({**data, **change}))


def test_every_field_of_a_run_is_described():
    schema = run_schema()
    for name in ("NoAnswer", "ProblemFinding"):
        record = schema["$defs"][name]
        assert sorted(record["required"]) == sorted(record["properties"])
        assert all(each["description"] for each in record["properties"].values())
    assert all("description" in each for each in schema["properties"].values())


def test_a_baseline_in_a_report_follows_the_schema(tmp_path):
    run = LOST_RUN(tmp_path)
    assert run.documents[0].baseline.limits
    data = json.loads(write_json(run, WriterOptions()))
    assert list(Draft202012Validator(run_schema()).iter_errors(data)) == []
    (document,) = data["documents"]
    assert list(Draft202012Validator(report_schema()).iter_errors(document)) == []
    del document["baseline"]["limits"][0]["lost"]
    assert list(Draft202012Validator(report_schema()).iter_errors(document))


@pytest.mark.parametrize(
    ("changes", "line"),
    [
        ({"inputs": (), "same_document": True}, "The document is the same."),
        ({"inputs": (), "same_document": False}, "No value of the document changed."),
        ({"inputs_known": False}, "The baseline does not list what its document stated."),
        ({"old_option": "<fins>"}, "Option: then (<fins>), now none."),
        ({"same_document": True}, None),  # its values changed all the same, by an option
    ],
)
def test_what_a_list_of_changed_values_does_not_show(tmp_path, changes, line):
    (report,) = LOST_RUN(tmp_path).documents
    baseline = replace(report.baseline, old_version=report.version, **changes)
    lines = about_inputs(baseline, report, lambda text: f"({text})")
    assert lines == ([] if line is None else [line])


def test_another_version_of_the_program_is_told(tmp_path):
    (report,) = LOST_RUN(tmp_path).documents
    baseline = replace(report.baseline, old_version="0.0.1")
    (line,) = about_inputs(baseline, report, lambda text: f"({text})")
    assert line.startswith(f"Program: then version (0.0.1), now {report.version};")
