"""Tolerances must match a number, readings must name a condition."""

import pytest

from enclosure_check.description.problems import Problem
from enclosure_check.description.tolerances import like_paths, matches_number
from enclosure_check.description.yaml_nodes import read_yaml

TOP = """\
title: A box
defaults: {wall: {material: abs, thickness_mm: 2, finish_outside: black_paint}}
box: {width_mm: 100, height_mm: 80, depth_mm: 60}
surroundings: {air_c: 25}
"""
BOARD = """\
boards:
  main: {parallel_to: bottom, length_mm: 50, width_mm: 40, from_walls_mm: {bottom: 10}}
"""


def told(problems: list[Problem]) -> list[tuple[int, str, str]]:
    return [(each.line, each.field, each.message) for each in problems]


# Cross-checks -----------------------------------------------------------------------------

HOT_AND_COLD = "conditions: {hot: {}, cold: {}}\n"


@pytest.mark.parametrize(
    ("extra", "line", "message"),
    [
        (
            "measured: {run: {condition: hto}}\n",
            6,
            "given 'hto', which is no condition; did you mean 'hot'?",
        ),
        ("measured: {run: {air_c: 5}}\n", 6, "missing; needs one of the conditions 'hot', 'cold'"),
    ],
)
def test_a_run_on_the_bench_names_a_condition(refused, extra, line, message):
    assert told(refused(TOP + HOT_AND_COLD + extra)) == [(line, "measured.run.condition", message)]


def test_a_run_on_the_bench_of_a_document_without_conditions(load, refused):
    load(TOP + "measured: {run: {air_c: 5}}\n")
    (problem,) = refused(TOP + "measured: {run: {condition: hot}}\n")
    assert problem.message == "given 'hot', which is no condition"


def test_a_run_of_a_condition_that_is_itself_refused(refused):
    problems = refused(TOP + "conditions: {hot: 5}\nmeasured: {run: {condition: hot}}\n")
    assert [each.field for each in problems] == ["conditions.hot"]


def test_tolerances_match_a_number_in_some_combination(load):
    load(
        TOP + BOARD + "options: {a: {box: {tilt: {lean_back_deg: 5}}}}\n"
        "conditions: {hot: {surroundings: {altitude_m: 5}}, cold: {}}\n"
        "tolerances:\n  boards.*.length_mm: {pct: 1}\n  surroundings.altitude_m: {pct: 1}\n"
        "  box.tilt.lean_back_deg: {plus_minus: 1}\n  '*.air_c': {plus_minus: 1}\n"
    )


@pytest.mark.parametrize(
    ("pattern", "ending"),
    [
        ("boards.*.lenght_mm", "; did you mean 'boards.*.length_mm'?"),
        ("boards.mian.*", "; did you mean 'boards.main.*'?"),
        ("surroundings.altitude_m", "; did you mean 'surroundings.air_c'?"),
        ("box", ""),
        ("title", ""),
        ("'boards.*'", "; did you mean 'box.*'?"),
        ("tolerances.*.pct", ""),
        ("format", ""),
    ],
)
def test_a_tolerance_that_matches_nothing(refused, pattern, ending):
    problems = refused(TOP + BOARD + HOT_AND_COLD + f"tolerances:\n  {pattern}: {{pct: 1}}\n")
    name = pattern.strip("'")
    assert told(problems) == [(9, f"tolerances.{name}", f"matches no number here{ending}")]


@pytest.mark.parametrize(
    ("pattern", "matches"),
    [
        ("a.b", True),
        ("a.*", True),
        ("*.b", True),
        ("*.*", True),
        ("a", False),
        ("*", False),
        ("a.b.c", False),
        ("a.t", False),
        ("a.f", False),
        ("list.0", True),
        ("list.*", True),
        ("list.2", False),
        ("d.85.5", True),
        ("d.85.5.x", True),
        ("d.*.x", False),
        ("d.*.*.x", True),
        ("d.85.6", False),
        ("", False),
        ("a.", False),
        (".b", False),
    ],
)
def test_patterns(pattern, matches):
    text = "a: {b: 1, t: x, f: true}\nlist: [1, 2]\nd: {'85.5': 4, '85': {'5': {x: 1}}}\n"
    node = read_yaml(text.encode(), "x.yaml")
    assert matches_number(node, pattern) is matches


def test_paths_like_a_pattern():
    node = read_yaml(b"a: {b: 1, c: 2}\nd: [3]\nformat: 1\n", "x.yaml")
    assert list(like_paths([node], "a.*")) == ["a.*", "a.*", "d.*"]
    assert list(like_paths([node], "a")) == []
