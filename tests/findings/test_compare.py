"""What changed against an earlier result."""

import json
from dataclasses import replace

import pytest
from support.reports import SMALL, report_of

from enclosure_check.findings.compare import compared, holds_any
from enclosure_check.findings.earlier import read_earlier
from enclosure_check.findings.run import NoAnswer, run_of
from enclosure_check.report.json_report import write_json
from enclosure_check.report.options import WriterOptions

X1 = SMALL["parts"]["X1"]
X2 = {**X1, "power_w": 0.5}
TWO = {
    **SMALL,
    "parts": {"X1": X1, "X2": {**X2, "limits": {"case": {"max_c": 90, "min_c": -20}}}},
    "requirements": {"touch_max_c": 60},
    "conditions": {"warm": {"surroundings": {"air_c": 30}}, "cool": {}},
}


def earlier_of(*results):
    return read_earlier(write_json(run_of("1", False, results, ()), WriterOptions()).encode())


def against(now, then, allow=0.1):
    run = compared(run_of("1", False, (now,), ()), earlier_of(then), "main.json", allow)
    return run.documents[0].baseline


def changed(**parts):
    return {**TWO, "parts": {**TWO["parts"], **parts}}


def test_the_same_is_the_same(tmp_path):
    report = report_of(tmp_path, TWO)
    found = against(report, report, 0.0)
    assert (found.verdict, found.known, found.same_document) == ("pass", True, True)
    # Two conditions, each with three limits of parts and six of walls.
    assert len(found.limits) == 2 * 9
    assert {each.change_k for each in found.limits} == {0.0}
    assert found.inputs == ()


def test_margins_that_fell_are_told_and_the_largest_first(tmp_path):
    then = report_of(tmp_path, TWO)
    now = report_of(tmp_path, changed(X1={**X1, "power_w": 2.0}))
    found = against(now, then)
    assert found.verdict == "fail"
    assert not found.same_document
    changes = [each.change_k for each in found.limits]
    assert changes == sorted(changes)
    worst = found.limits[0]
    assert (worst.name, worst.limit_kind, worst.limit_side) == ("X1", "case", "max")
    for each in found.limits:
        assert each.change_k == each.new_margin_k - each.old_margin_k
        assert each.lost == (each.change_k < -0.1)
        assert each.old_limit_c == each.new_limit_c
        assert each.new_temperature_c > each.old_temperature_c
    (value,) = found.inputs
    assert (value.path, value.state, value.old, value.new) == (
        "parts.X1.power_w",
        "changed",
        1.5,
        2.0,
    )


def test_a_loss_is_one_only_beyond_what_is_allowed(tmp_path):
    then = report_of(tmp_path, TWO)
    now = report_of(tmp_path, changed(X1={**X1, "power_w": 2.0}))
    fell = -against(now, then).limits[0].change_k
    assert fell > 1
    assert against(now, then, fell - 1e-6).verdict == "fail"
    assert against(now, then, fell).verdict == "pass"  # rounding is no loss
    assert against(then, now, 0.0).limits[0].lost  # the lowest temperatures came nearer
    assert against(then, now, 0.0).limits[0].limit_side == "min"


def test_it_fails_even_where_every_verdict_passes(tmp_path):
    then = report_of(tmp_path, TWO)
    now = report_of(tmp_path, changed(X1={**X1, "power_w": 1.6}))
    assert now.verdict == "pass"
    assert against(now, then).verdict == "fail"


def test_a_limit_that_was_tightened_or_taken_away(tmp_path):
    then = report_of(tmp_path, TWO)
    now = report_of(tmp_path, changed(X2={**X2, "limits": {"case": {"max_c": 85}}}))
    found = against(now, then)
    by_key = {(e.condition, e.name, e.limit_side): e for e in found.limits if e.name == "X2"}
    tightened, gone = by_key["warm", "X2", "max"], by_key["warm", "X2", "min"]
    assert (tightened.old_limit_c, tightened.new_limit_c) == (90, 85)
    assert tightened.change_k == pytest.approx(-5, abs=1e-9)
    assert tightened.lost
    assert (gone.new_margin_k, gone.change_k, gone.lost) == (None, None, False)
    assert gone.old_margin_k > 0
    assert found.limits[-1].change_k is None  # at the end
    back = against(then, now)
    assert {e.change_k for e in back.limits if e.limit_side == "min"} == {None}


def test_parts_and_conditions_that_came_and_went(tmp_path):
    then = report_of(tmp_path, TWO)
    document = {
        **TWO,
        "parts": {"X1": X1, "X3": {key: X1[key] for key in X1 if key != "limits"}},
        "conditions": {"cool": {}, "cold": {"surroundings": {"air_c": -10}}},
    }
    found = against(report_of(tmp_path, document), then)
    assert (found.parts_added, found.parts_removed) == (("X3",), ("X2",))
    assert (found.conditions_added, found.conditions_removed) == (("cold",), ("warm",))
    assert {each.condition for each in found.limits} == {"cool"}
    paths = {each.path: each.state for each in found.inputs}
    assert paths["parts.X3.power_w"] == "added"
    assert paths["parts.X2.limits.case.min_c"] == "removed"
    assert paths["conditions.cold.surroundings.air_c"] == "added"


def test_a_number_and_the_same_in_words_differ(tmp_path):
    report = report_of(tmp_path)
    found = against(
        replace(report, inputs={"a": 1.0, "b": True}), replace(report, inputs={"a": "1", "b": 1.0})
    )
    assert [(each.path, each.old, each.new) for each in found.inputs] == [
        ("a", "1", 1.0),
        ("b", 1.0, True),
    ]


def test_without_inputs_then(tmp_path):
    report = report_of(tmp_path)
    data = json.loads(write_json(report, WriterOptions()))
    del data["inputs"]
    run = run_of("1", False, (report,), ())
    found = compared(run, read_earlier(json.dumps(data).encode()), "f", 0.1).documents[0].baseline
    assert not found.inputs_known
    assert found.inputs == ()


# Which document is which ------------------------------------------------------------------


def test_one_against_one_whatever_the_paths(tmp_path):
    report = report_of(tmp_path)
    elsewhere = replace(report, document="/old/place.yaml")
    assert against(report, elsewhere).known
    assert holds_any(["new.yaml"], earlier_of(elsewhere))


def test_several_are_matched_by_path(tmp_path):
    report = report_of(tmp_path)
    a, b, c = (replace(report, document=name) for name in ("a.yaml", "f/b.yaml", "c.yaml"))
    now = run_of(
        "1", False, (replace(a, document="./a.yaml"), replace(b, document="f\\b.yaml"), c), ()
    )
    found = compared(now, earlier_of(a, b, replace(c, document="d.yaml")), "main.json", 0.1)
    assert [each.baseline.known for each in found.documents] == [True, True, False]
    assert [each.baseline.verdict for each in found.documents] == ["pass"] * 3
    assert found.unchecked == ("d.yaml",)


def test_a_document_without_an_answer_is_not_called_unchecked(tmp_path):
    report = report_of(tmp_path)
    a, b = (replace(report, document=name) for name in ("a.yaml", "b.yaml"))
    now = run_of("1", False, (a,), (NoAnswer("b.yaml", "bad_input", ()),))
    assert compared(now, earlier_of(a, b), "main.json", 0.1).unchecked == ()


def test_holding_none(tmp_path):
    report = replace(report_of(tmp_path), document="a.yaml")
    earlier = earlier_of(report, replace(report, document="b.yaml"))
    assert not holds_any(["c.yaml"], earlier)
    assert holds_any(["c.yaml", "b.yaml"], earlier)
    assert not holds_any([], earlier)
