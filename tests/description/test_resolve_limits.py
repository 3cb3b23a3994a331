"""Derating curves: the temperature up to which the load in use is allowed."""

from itertools import pairwise

import pytest
from support.cases import board, box, case_of, part

from enclosure_check.description.case import LimitCase
from enclosure_check.description.resolve_limit import highest_allowed_c

# A film capacitor's or supply's curve as data sheets draw it: full load to 50 C, none at 70 C.
CURVE = [(-25.0, 100.0), (50.0, 100.0), (70.0, 0.0)]
TWO_SLOPES = [(-40.0, 100.0), (70.0, 100.0), (85.0, 50.0), (105.0, 0.0)]


@pytest.mark.parametrize(
    ("points", "load", "expected"),
    [
        # Straight lines between points, by hand.
        (CURVE, 100, 50),
        (CURVE, 75, 55),
        (CURVE, 50, 60),
        (CURVE, 10, 68),
        (CURVE, 0, 70),
        (TWO_SLOPES, 100, 70),
        (TWO_SLOPES, 75, 77.5),
        (TWO_SLOPES, 50, 85),
        (TWO_SLOPES, 25, 95),
        (TWO_SLOPES, 60, 82),
        # A curve that ends above the load allows it up to its end.
        ([(0.0, 100.0), (60.0, 40.0)], 30, 60),
        ([(0.0, 100.0), (60.0, 40.0)], 40, 60),
        # A step: two points close together.
        ([(0.0, 100.0), (50.0, 100.0), (50.001, 20.0), (80.0, 20.0)], 60, 50.0005),
        ([(0.0, 100.0), (50.0, 100.0), (50.001, 20.0), (80.0, 20.0)], 20, 80),
    ],
)
def test_highest_temperature_allowed(points, load, expected):
    assert highest_allowed_c(points, load) == pytest.approx(expected, abs=1e-12)


def test_more_load_is_never_allowed_to_a_higher_temperature():
    found = [highest_allowed_c(TWO_SLOPES, load) for load in range(0, 131)]
    assert all(later <= earlier for earlier, later in pairwise(found))


def test_load_that_is_never_allowed_fails_at_any_temperature_a_box_may_have():
    assert highest_allowed_c(CURVE, 100.1) == -125


def limits_of(limit) -> tuple[LimitCase, ...]:
    document = box(boards={"main": board()}, parts={"U1": part(limits={"case": limit})})
    return case_of(document).parts["U1"].limits


def derating(load):
    return {"load_pct": load, "allowed_pct": {"-25": 100, "50": 100, "70": 0}}


@pytest.mark.parametrize(
    ("limit", "expected"),
    [
        ({"max_c": 80}, LimitCase("case", 80, None, False)),
        ({"min_c": -40}, LimitCase("case", None, -40, False)),
        ({"max_c": 80, "min_c": -40}, LimitCase("case", 80, -40, False)),
        ({"derating": derating(50)}, LimitCase("case", 60, None, True)),
        ({"derating": derating(50), "max_c": 65}, LimitCase("case", 60, None, True)),
        ({"derating": derating(50), "max_c": 55}, LimitCase("case", 55, None, False)),
        ({"derating": derating(50), "min_c": -10}, LimitCase("case", 60, -10, True)),
    ],
)
def test_the_lower_of_limit_and_curve_holds(limit, expected):
    assert limits_of(limit) == (expected,)


def test_curve_points_may_be_written_in_any_number_form():
    curve = {"load_pct": 50, "allowed_pct": {"-4.0e1": 100, "50.": 100, "+70": 0}}
    assert limits_of({"derating": curve}) == (LimitCase("case", 60, None, True),)
