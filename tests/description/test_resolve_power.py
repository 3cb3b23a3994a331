"""The heat of a converter by its output and efficiency."""

import pytest
from support.cases import board, box, case_of, errors_of, part

SUPPLY = {"output_w": 40, "efficiency_pct": 80}


def boxed(row=None, kind=None, **changes):
    types = {} if kind is None else {"supply": kind}
    row = part(**(row or {}), **({} if kind is None else {"type": "supply"}))
    return box(boards={"main": board()}, parts={"U1": row}, part_types=types, **changes)


def power(*given, **changes):
    return case_of(boxed(*given, **changes)).parts["U1"].power_w


def test_what_is_not_given_out_turns_to_heat():
    # 40 W out of 50 W taken in.
    assert power(SUPPLY) == pytest.approx(10)
    assert power({"output_w": 40, "efficiency_pct": 100}) == 0


def test_part_and_type_may_share_it():
    assert power({"output_w": 40}, {"efficiency_pct": 80}) == pytest.approx(10)
    assert power({"efficiency_pct": 50}, SUPPLY) == pytest.approx(40)


def test_modes_scale_it_or_state_the_heat():
    modes = {"half": {"power_pct": 50}, "idle": {}}
    row = {**SUPPLY, "power_by_mode_w": {"idle": 0.7}}
    assert power(row, modes=modes, mode="half") == pytest.approx(5)
    assert power(row, modes=modes, mode="idle") == 0.7


@pytest.mark.parametrize(
    ("row", "kind", "path", "message"),
    [
        ({"output_w": 40}, None, "parts.U1.efficiency_pct", "missing; it goes with `output_w`"),
        ({"efficiency_pct": 80}, None, "parts.U1.output_w", "goes with `efficiency_pct`"),
        ({**SUPPLY, "power_w": 3}, None, "parts.U1.power_w", "given together with `output_w`"),
        (SUPPLY, {"power_w": 3}, "part_types.supply.power_w", "given together with `output_w`"),
    ],
)
def test_what_does_not_fit(row, kind, path, message):
    found = errors_of(boxed(row, kind))
    assert list(found) == [path]
    assert message in found[path]


def test_nothing_is_assumed_of_a_converter():
    assert not any("no power stated" in line for line in case_of(boxed(SUPPLY)).assumptions)
