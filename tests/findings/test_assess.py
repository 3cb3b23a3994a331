"""What a finding says of its case, of the solver, and what should be looked at."""

import re

import pytest
from support.cases import NODE_SHARE, board, box, case_of, checked, part, patched, solved
from support.reports import SMALL, report_of

from enclosure_check.findings.assess import assess

WARM = box(
    boards={"main": board(other_power_w=4)},
    parts={
        "U1": part(power_w=2, limits={"case": {"max_c": 95}}),
        "U2": part(at_mm=[20, 20], power_w=1),
        "U3": part(at_mm=[90, 20]),
    },
)


def warnings(document) -> list[str]:
    """What is said beside the range audit and bands that lean."""
    lines = checked(document).warnings
    return [line for line in lines if not re.search("outside its range|to first order", line)]


def test_the_case_is_named():
    document = patched(
        WARM,
        {"modes": {"low": {"power_pct": 50}}, "mode": "low", "surroundings": {"altitude_m": 800}},
    )
    finding = checked(document)
    assert (finding.name, finding.option, finding.mode) == ("base", None, "low")
    assert (finding.surrounding_air_c, finding.altitude_m) == (25, 800)
    assert finding.assumptions == case_of(document).assumptions
    assert finding.heat_balance.generated_w == pytest.approx(3.5, rel=1e-12)


def test_the_solver_is_reported():
    answer = solved(WARM)
    found, solution = assess(answer).solver, answer.solution
    assert found.unknowns == len(answer.network.unknown)
    assert found.iterations == solution.steps[0] > 0
    assert found.fallbacks == solution.fallbacks[0]
    assert found.worst_imbalance_w == solution.worst_imbalance_w[0]
    assert found.worst_imbalance_w < NODE_SHARE * solution.heat_w[0]
    assert found.worst_node == answer.network.node_labels[solution.worst_node[0]]


def test_parts_without_a_limit_are_named():
    assert warnings(WARM) == ["no limit stated, so not judged: U2, U3"]
    one = {"limits": {"junction": {"max_c": 100}}}
    assert warnings(patched(WARM, {"parts": {"U2": one, "U3": one}})) == []


def test_nothing_to_judge_at_all():
    bare = patched(WARM, {"parts": {"U1": {"limits": None}}})
    assert warnings(bare) == ["no limit is stated anywhere, so there is nothing to fail"]
    assert checked(bare).verdict == "pass"
    assert warnings(patched(bare, {"requirements": {"touch_max_c": 90}})) == []


def test_warnings_of_the_document_come_with_their_field():
    overlapping = patched(WARM, {"parts": {"U2": {"at_mm": [62, 50]}}})
    assert "parts.U2: its outline overlaps that of U1" in warnings(overlapping)


def test_laws_outside_their_range_are_warned_of():
    lines = [line for line in checked(WARM).warnings if "outside its range" in line]
    laws = {row.correlation for row in checked(WARM).ranges if not row.inside_range}
    assert len(lines) == len(laws) > 0
    # A large, warm box: its walls are inside the range of every law but the one for boxes.
    big = box(
        box={"width_mm": 600, "height_mm": 600, "depth_mm": 600},
        boards={"main": board(length_mm=550, width_mm=550, other_power_w=150)},
    )
    outside = {row.correlation for row in checked(big).ranges if not row.inside_range}
    assert outside <= {"box_shelter", "yovanovich_cuboid"}


def test_a_band_whose_ends_lead_nowhere_is_said_to_be_of_first_order(tmp_path, monkeypatch):
    monkeypatch.setattr("enclosure_check.findings.confidence.Bands.ends", lambda *_: None)
    (condition,) = report_of(tmp_path, SMALL).conditions
    assert condition.parts[0].band_k > 0
    assert condition.band_check is None
    assert [line for line in condition.warnings if "X1 case, +-" in line]


def test_steps_to_the_ends_that_find_no_state_end_quietly(tmp_path):
    """Two parts in the air of a small box; warnings of arithmetic would fail this test."""
    part = SMALL["parts"]["X1"]
    document = {
        **SMALL,
        "parts": {"X1": {**part, "power_w": 2.0}, "X2": {**part, "power_w": 0.5}},
        "surroundings": {"air_c": 30},
    }
    (condition,) = report_of(tmp_path, document).conditions
    followed = condition.band_check is not None
    assert followed != any("holds to first order only" in line for line in condition.warnings)
