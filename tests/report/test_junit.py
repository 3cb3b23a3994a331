"""JUnit XML: one case per part, limit and condition, in a structure that readers agree on.

No standards body publishes a schema; the rules are those stated in the writer's module.
"""

from dataclasses import replace
from xml.etree import ElementTree

import pytest
from support.gate import (
    EVIL,
    EVIL_RUN,
    LOST_RUN,
    MARGINAL,
    PLAIN_RUN,
    with_errors,
)

from enclosure_check.report.junit import write_junit
from enclosure_check.report.options import WriterOptions

# What an element may hold, its attributes that must and may be there.
CHILDREN = {
    "testsuites": {"testsuite"},
    "testsuite": {"testcase", "system-out"},
    "testcase": {"failure", "error", "skipped", "system-out"},
    "failure": set(),
    "error": set(),
    "skipped": set(),
    "system-out": set(),
}
COUNTS = {"tests", "failures", "errors", "skipped"}
REQUIRED = {
    "testsuites": {"name", *COUNTS},
    "testsuite": {"name", *COUNTS},
    "testcase": {"name", "classname"},
    "failure": {"message", "type"},
    "error": {"message", "type"},
    "skipped": {"message"},
    "system-out": set(),
}
ALLOWED = {**REQUIRED, "testcase": {*REQUIRED["testcase"], "file", "line"}}
OUTCOMES = {"failures": "failure", "errors": "error", "skipped": "skipped"}


def read(run) -> ElementTree.Element:
    text = write_junit(run, WriterOptions())
    assert text.startswith('<?xml version="1.0" encoding="UTF-8"?>\n<testsuites ')
    return ElementTree.fromstring(text.encode("utf-8"))


def faults(root: ElementTree.Element) -> list[str]:
    """Everything that breaks the rules."""
    found = [] if root.tag == "testsuites" else [f"top is {root.tag}"]
    for element in root.iter():
        if element.tag not in CHILDREN:
            found.append(f"unknown {element.tag}")
            continue
        given = set(element.attrib)
        found += [f"{element.tag} lacks {name}" for name in REQUIRED[element.tag] - given]
        found += [f"{element.tag} has {name}" for name in given - ALLOWED[element.tag]]
        found += [
            f"{element.tag} holds {child.tag}"
            for child in element
            if child.tag not in CHILDREN[element.tag]
        ]
        if element.tag == "testcase":
            outcomes = [child for child in element if child.tag != "system-out"]
            found += ["several outcomes"] if len(outcomes) > 1 else []
            if not element.attrib.get("line", "1").isdigit():
                found.append("line is no number")
        if "tests" in given:
            cases = list(element.iter("testcase"))
            counts = {"tests": len(cases)}
            for name, tag in OUTCOMES.items():
                counts[name] = sum(case.find(tag) is not None for case in cases)
            found += [
                f"{element.tag} {name} is {element.attrib[name]}, not {count}"
                for name, count in counts.items()
                if element.attrib.get(name) != str(count)
            ]
    names = [(case.get("classname"), case.get("name")) for case in root.iter("testcase")]
    found += ["a case twice"] if len(names) != len(set(names)) else []
    return found


@pytest.mark.parametrize("make", [PLAIN_RUN, LOST_RUN, EVIL_RUN, with_errors])
def test_structure(make, tmp_path):
    assert faults(read(make(tmp_path))) == []


@pytest.mark.parametrize(
    "text",
    [
        "<testsuite/>",
        "<testsuites name='a' tests='1' failures='0' errors='0' skipped='0'/>",
        "<testsuites name='a' tests='0' failures='0' errors='0' skipped='0'><x/></testsuites>",
    ],
)
def test_a_wrong_structure_is_seen(text):
    assert faults(ElementTree.fromstring(text))


def test_a_case_per_part_limit_and_condition(tmp_path):
    run = PLAIN_RUN(tmp_path)
    root = read(run)
    (report,) = run.documents
    assert [suite.get("name") for suite in root] == [
        f"box.yaml: {condition.name}" for condition in report.conditions
    ]
    for suite, condition in zip(root, report.conditions, strict=True):
        limits = {f"{p.name} {p.limit_kind} {p.limit_side}" for p in condition.parts}
        limits |= {f"{w.name} wall touch max" for w in condition.walls if w.touch_max_c is not None}
        cases = suite.findall("testcase")
        assert {case.get("name") for case in cases} == limits
        assert len(cases) == len(limits) >= 8
        assert {case.get("file") for case in cases} == {"box.yaml"}
        lines = {p.name: p.position.line for p in condition.parts}
        for case in cases:
            name = case.get("name").split()[0]
            if name in lines:
                assert case.get("line") == str(lines[name])


def outcomes(root) -> dict[str, tuple[str, str]]:
    found = {}
    for case in root.iter("testcase"):
        for child in case:
            if child.tag != "system-out":
                found[f"{case.get('classname')}: {case.get('name')}"] = (
                    child.tag,
                    child.get("type"),
                )
    return found


def test_a_limit_passed_is_a_failure(tmp_path):
    root = read(PLAIN_RUN(tmp_path))
    assert outcomes(root) == {"box.yaml: hot: X1 case max": ("failure", "limit_passed")}
    (failure,) = root.iter("failure")
    assert " C against max 80.0 C, margin -" in failure.get("message")


@pytest.mark.parametrize(("stated", "strict"), [(True, False), (False, True), (False, False)])
def test_marginal_is_a_failure_where_it_stops(tmp_path, stated, strict):
    run = replace(MARGINAL(tmp_path, stated), strict=strict)
    root = read(run)
    expected = {"box.yaml: base: X1 case max": ("failure", "margin_too_small")}
    assert outcomes(root) == (expected if stated or strict else {})
    if not (stated or strict):
        assert root.find(".//testcase/system-out").text.startswith("marginal: ")


def test_a_lost_margin_is_a_failure(tmp_path):
    found = outcomes(read(LOST_RUN(tmp_path)))
    assert set(found.values()) == {("failure", "margin_lost")}


def test_no_answer_is_an_error(tmp_path):
    found = outcomes(read(with_errors(tmp_path)))
    assert found["wrong.yaml: answer"] == ("error", "bad_input")
    assert found["runaway.yaml: answer"] == ("error", "not_converged")


def test_without_a_limit_the_case_is_skipped(tmp_path):
    run = PLAIN_RUN(tmp_path)
    (report,) = run.documents
    conditions = tuple(replace(each, parts=(), walls=()) for each in report.conditions)
    root = read(replace(run, documents=(replace(report, conditions=conditions),)))
    assert faults(root) == []
    assert {outcome[0] for outcome in outcomes(root).values()} == {"skipped"}


def test_names_cannot_break_out(tmp_path):
    text = write_junit(EVIL_RUN(tmp_path), WriterOptions())
    root = ElementTree.fromstring(text.encode())
    names = " ".join(case.get("name") for case in root.iter("testcase"))
    for name in EVIL:
        shown = "".join(c if c.isprintable() else c.encode("unicode_escape").decode() for c in name)
        assert shown in names
    assert not [char for char in text if not char.isprintable() and char != "\n"]


def test_the_same_bytes_every_time(tmp_path):
    texts = {write_junit(LOST_RUN(tmp_path), WriterOptions()) for _ in range(2)}
    assert len(texts) == 1
    assert str(tmp_path) not in texts.pop()
