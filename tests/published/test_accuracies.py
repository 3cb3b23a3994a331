"""Accuracies of our own forms: those of the causes are what the rule gives, no more and no less."""

import math

import pytest
from published.accuracies import Found, accuracies, warmer
from published.evidence import OWN, every_row, line
from published.experiments_inside import BOARD_RISE_K, CASES, ours, solved

from enclosure_check.findings.causes import CAUSES


def test_the_rule():
    found = Found("x", "y", {"a": 3.0, "b": -4.0})
    assert found.rms_pct == pytest.approx(math.sqrt(12.5))
    assert found.half_width_pct == 8


@pytest.mark.parametrize("family", sorted(set(accuracies()) & set(CAUSES)))
def test_causes_have_what_the_experiments_say(family):
    found, row = accuracies()[family], CAUSES[family]
    assert row.unit == "%"
    assert row.half_width == found.half_width_pct
    assert f"of {len(found.deviations)} deviations" in row.basis


@pytest.mark.parametrize("name", [case.name for case in CASES])
def test_air_is_measured_by_the_boards_rise_where_there_are_two_temperatures(name):
    case = next(each for each in CASES if each.name == name)
    assert warmer(solved(case, ours(name).total_w)) == pytest.approx(BOARD_RISE_K, abs=0.05)


def test_all_causes_that_rest_on_the_rule_are_found_by_it():
    ours = {family for family, row in CAUSES.items() if "twice the root mean square" in row.basis}
    assert ours == set(accuracies()) & set(CAUSES)


def test_rows_that_they_come_from_are_marked():
    marked = [row for row in every_row() if row.own]
    assert {row.kind for row in marked} == {"numerical experiment"}
    assert all(f" {OWN} |" in line(row) for row in marked)
    named = {(row.case.partition(":")[0].partition(" ")[0], row.quantity) for row in marked}
    counts = {family: len(found.deviations) for family, found in accuracies().items()}
    slices = [what for _, what in named if what.startswith("slice of air")]
    # The middle slices answer for both halves.
    assert len(slices) == 25 == counts["air_below"] + counts["air_above"] - 5
    shares = [what for _, what in named if what.startswith("share, ")]
    assert len(shares) == counts["shares"]
    faces = [what for case, what in named if case.startswith("X")]
    assert len(faces) == counts["faces"] + counts["top_share"]
    sides = [what for _, what in named if what.endswith("of the board, W")]
    assert len(sides) == counts["board_top"] + counts["board_rim"]
    totals = [case for case, what in named if what == "total, W"]
    assert len(totals) == counts["gap_films"]
