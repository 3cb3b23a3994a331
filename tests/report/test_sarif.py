"""SARIF 2.1.0: valid by its published schema, and what the standard asks beyond that.

The schema is that of the OASIS standard, as models of ``pydantic-sarif``, which are generated from it.
"""

import json
import re
from dataclasses import replace
from urllib.parse import unquote

import pytest
from support.gate import EVIL, EVIL_RUN, LOST_RUN, MARGINAL, PLAIN_RUN, with_errors

from enclosure_check.findings.results import Position
from enclosure_check.report.junit import write_junit
from enclosure_check.report.options import WriterOptions
from enclosure_check.report.sarif import RULES, write_sarif


def read(run):
    text = write_sarif(run, WriterOptions())
    assert text.isascii()
    assert text.endswith("}\n")
    return json.loads(text)


def results(log):
    return log["runs"][0]["results"]


def validated(log) -> None:
    model = pytest.importorskip("pydantic_sarif.model", reason="comes with the test extra")
    model.StaticAnalysisResultsFormatSarifVersion210JsonSchema.model_validate_json(json.dumps(log))


def faults(log) -> list[str]:
    """What the schema cannot say: indices that agree, ranges, messages, places, fingerprints."""
    found = []
    (run,) = log["runs"]
    rules = run["tool"]["driver"]["rules"]
    if len({rule["id"] for rule in rules}) != len(rules):
        found.append("a rule twice")
    for each in run["results"]:
        if rules[each["ruleIndex"]]["id"] != each["ruleId"]:
            found.append("ruleIndex")
        if each["level"] not in ("error", "warning", "note"):
            found.append("level")
        message = each["message"]["text"]
        # 3.11.5 and 3.11.6: no placeholder and no link may come from a name.
        if not message or set(message) & set("[]{}"):
            found.append(f"message {message!r}")
        for location in each["locations"]:
            place = location["physicalLocation"]
            found += faults_of_place(place["artifactLocation"], run)
            region = place.get("region", {"startLine": 1, "startColumn": 1})
            if region["startLine"] < 1 or region["startColumn"] < 1:
                found.append("region")
    prints = [tuple(each["partialFingerprints"].items()) for each in run["results"]]
    if len(set(prints)) != len(prints):
        found.append("a fingerprint twice")
    for artifact in run["artifacts"]:
        found += faults_of_place(artifact["location"], run)
    return found


def faults_of_place(place, run) -> list[str]:
    uri = place["uri"]
    found = [] if re.fullmatch(r"(?:file://)?(?:[\w.~/-]|%[0-9A-F]{2})+", uri) else [f"uri {uri}"]
    if "uriBaseId" in place and place["uriBaseId"] not in run["originalUriBaseIds"]:
        found.append("uriBaseId")
    if uri.startswith("file:") == ("uriBaseId" in place):  # 3.4.4: of relative ones only
        found.append("base of an absolute uri")
    return found


@pytest.mark.parametrize("make", [PLAIN_RUN, LOST_RUN, EVIL_RUN, with_errors])
def test_schema_and_structure(make, tmp_path):
    log = read(make(tmp_path))
    assert log["version"] == "2.1.0"
    validated(log)
    assert faults(log) == []


def test_a_wrong_log_is_seen(tmp_path):
    log = read(PLAIN_RUN(tmp_path))
    results(log)[0]["ruleIndex"] = 3
    results(log)[0]["message"]["text"] = "[a](b)"
    assert faults(log)
    results(log)[0]["severity"] = "high"
    with pytest.raises(ValueError, match="severity"):
        validated(log)


def test_each_finding_is_on_the_line_of_its_part(tmp_path):
    log = read(PLAIN_RUN(tmp_path))
    (found,) = [each for each in results(log) if each["ruleId"] == "limit-passed"]
    place = found["locations"][0]["physicalLocation"]
    assert place["artifactLocation"] == {"uri": "box.yaml", "uriBaseId": "%SRCROOT%"}
    lines = (tmp_path / "box.yaml").read_text("utf-8").splitlines()
    assert lines[place["region"]["startLine"] - 1] == "  X1:"
    assert place["region"]["startColumn"] == 3
    assert found["level"] == "error"
    assert found["message"]["text"].startswith("X1 case max under hot: ")


def test_a_wall_too_warm_to_touch_is_on_the_line_it_follows(tmp_path):
    run = PLAIN_RUN(tmp_path)
    (report,) = run.documents
    first, *others = report.conditions
    walls = tuple(replace(wall, touch_verdict="fail") for wall in first.walls)
    report = replace(report, conditions=(replace(first, walls=walls), *others))
    log = read(replace(run, documents=(report,)))
    found = [each for each in results(log) if "wall touch" in each["message"]["text"]]
    assert len(found) == 6
    lines = (tmp_path / "box.yaml").read_text("utf-8").splitlines()
    for each in found:
        region = each["locations"][0]["physicalLocation"]["region"]
        assert lines[region["startLine"] - 1].strip() == "wall:"


@pytest.mark.parametrize(
    ("stated", "strict", "level"),
    [(True, False, "error"), (False, True, "error"), (False, False, "warning")],
)
def test_marginal_is_an_error_where_it_stops(tmp_path, stated, strict, level):
    log = read(replace(MARGINAL(tmp_path, stated), strict=strict))
    found = [each for each in results(log) if each["ruleId"] == "margin-too-small"]
    assert [each["level"] for each in found] == [level]


def test_lost_margins_and_what_is_gone(tmp_path):
    found = results(read(LOST_RUN(tmp_path)))
    rules = {each["ruleId"] for each in found}
    assert {"margin-lost", "no-longer-checked"} <= rules
    assert "limit-passed" not in rules
    gone = {each["message"]["text"] for each in found if each["ruleId"] == "no-longer-checked"}
    assert gone == {
        "Condition cool is in the baseline, but was not checked.",
        "Part X2 is in the baseline, but was not checked.",
    }


def test_errors_stand_at_their_place(tmp_path):
    log = read(with_errors(tmp_path))
    assert log["runs"][0]["invocations"] == [{"executionSuccessful": False}]
    found = {each["ruleId"]: each for each in results(log)}
    place = found["bad-input"]["locations"][0]["physicalLocation"]
    assert place["region"] == {"startLine": 3, "startColumn": 7}
    assert found["not-converged"]["level"] == "error"


def test_fingerprints_stay_when_lines_and_numbers_change(tmp_path):
    def prints(run):
        return {each["partialFingerprints"]["finding/v1"] for each in results(read(run))}

    run = PLAIN_RUN(tmp_path)
    (report,) = run.documents
    moved = tuple(
        replace(
            condition,
            parts=tuple(
                replace(part, position=None, temperature_c=1.0) for part in condition.parts
            ),
        )
        for condition in report.conditions
    )
    assert prints(run) == prints(replace(run, documents=(replace(report, conditions=moved),)))


def test_names_cannot_break_out(tmp_path):
    log = read(EVIL_RUN(tmp_path))
    uri = log["runs"][0]["artifacts"][0]["location"]["uri"]
    assert unquote(uri) == f"boards/{EVIL[2]} %20.yaml"
    for each in results(log):
        assert each["message"]["text"].isprintable()
        assert each.get("properties", {}).get("condition", "").isprintable()


@pytest.mark.parametrize(
    ("path", "uri"),
    [
        ("/a b/box.yaml", "file:///a%20b/box.yaml"),
        ("././/box.yaml", "box.yaml"),
        ("../box.yaml", "../box.yaml"),
        ("a:b/%41#?.yaml", "a%3Ab/%2541%23%3F.yaml"),
        ("\udcff.yaml", "%FF.yaml"),  # a name that is no UTF-8, as the system hands it over
    ],
)
def test_paths_become_uris(tmp_path, path, uri):
    run = PLAIN_RUN(tmp_path)
    report = replace(run.documents[0], document=path)
    log = read(replace(run, documents=(report,)))
    location = log["runs"][0]["artifacts"][0]["location"]
    base = {} if path.startswith("/") else {"uriBaseId": "%SRCROOT%"}
    assert location == {"uri": uri, **base}
    assert faults(log) == []


def test_a_part_of_a_part_list_is_marked_there(tmp_path):
    run = PLAIN_RUN(tmp_path)
    (report,) = run.documents
    listed = Position(12, 4, "lists/placement.csv")
    conditions = tuple(
        replace(each, parts=tuple(replace(part, position=listed) for part in each.parts))
        for each in report.conditions
    )
    run = replace(run, documents=(replace(report, conditions=conditions),))
    (found,) = [each for each in results(read(run)) if each["ruleId"] == "limit-passed"]
    place = found["locations"][0]["physicalLocation"]
    assert place["artifactLocation"]["uri"] == "lists/placement.csv"
    assert place["region"] == {"startLine": 12, "startColumn": 4}
    assert 'file="lists/placement.csv" line="12"' in write_junit(run, WriterOptions())


def test_every_rule_is_described():
    assert all(level in ("error", "warning", "note") for level, _, _ in RULES.values())


def test_the_same_bytes_every_time(tmp_path):
    texts = {write_sarif(LOST_RUN(tmp_path), WriterOptions()) for _ in range(2)}
    assert len(texts) == 1
    assert str(tmp_path) not in texts.pop()
