"""Walls, the balance of the whole box, and the inside air."""

import math
import random

import pytest
from support.cases import board, box, checked, part, patched, solved, temperatures
from support.random_documents import random_document

from enclosure_check.description.base import WALL_NAMES
from enclosure_check.findings.assess import assess

WARM = box(
    surroundings={"sky": "clear", "sun_w_per_m2": {"top": 500}},
    walls={
        "bottom": {"mounting": {"kind": "bolted_to", "contact_w_per_m2k": 40, "surface_c": 22}},
        "left": {"mounting": {"kind": "insulated"}, "touch_max_c": 45},
    },
    requirements={"touch_max_c": 60, "margin_k": 2},
    boards={"main": board(other_power_w=4)},
    parts={"U1": part(power_w=2, power_slope_pct_per_k=0.3)},
)


@pytest.mark.parametrize("seed", range(12))
def test_heat_in_is_heat_out(seed):
    answer = solved(random_document(random.Random(seed)))
    finding = assess(answer)
    balance = finding.heat_balance
    assert abs(balance.imbalance_w) <= 1e-6 * max(float(answer.solution.heat_w[0]), 1e-4)
    out = balance.convection_w + balance.radiation_w + balance.openings_w + balance.mounting_w
    assert balance.imbalance_w == pytest.approx(balance.generated_w + balance.sun_w - out, abs=1e-9)
    for key in ("convection_w", "radiation_w", "sun_w", "openings_w", "mounting_w"):
        total = sum(getattr(wall, key) for wall in finding.walls)
        assert getattr(balance, key) == pytest.approx(total, abs=1e-12)
    power = sum(row.power_w for row in finding.part_heat)
    power += sum(row.other_power_w for row in answer.case.boards.values())
    assert balance.generated_w == pytest.approx(power, rel=1e-12)


def test_walls_one_by_one():
    answer = solved(WARM)
    names = temperatures(answer)
    rows = {row.name: row for row in assess(answer).walls}
    assert tuple(rows) == WALL_NAMES
    for name, row in rows.items():
        assert row.outside_c == row.outside_max_c == names[f"{name} wall outside"]
        assert row.inside_c == names[f"{name} wall inside"]
        assert row.openings_w == 0
        # What leaves a wall outside is what comes through it and along it and from the sun.
        along = sum(
            answer.flow(f"corner:{one}-{other}", "corner") * (1 if name == one else -1)
            for one in WALL_NAMES
            for other in WALL_NAMES
            if name in (one, other)
        )
        # Half of what runs round the corners runs at the outside; those at the inside are counted
        # with the heat that comes to the inside of the wall.
        comes_in = -sum(
            answer.flow(f"wall:{name}", role) for role in ("convection_inside", "radiation_inside")
        )
        leaves = row.convection_w + row.radiation_w + row.mounting_w
        assert leaves + along == pytest.approx(comes_in + row.sun_w, abs=1e-6)
    assert rows["bottom"].mounting == "bolted_to"
    assert rows["bottom"].mounting_w > 0
    assert (rows["bottom"].convection_w, rows["bottom"].radiation_w) == (0, 0)
    assert (rows["left"].convection_w, rows["left"].mounting_w) == (0, 0)
    assert rows["top"].sun_w == pytest.approx(0.68 * 500 * 0.204 * 0.104, rel=1e-12)
    assert [name for name, row in rows.items() if row.sun_w] == ["top"]


def test_touch_margins():
    rows = {row.name: row for row in checked(WARM).walls}
    assert {name: row.touch_max_c for name, row in rows.items()} == {
        "left": 45,
        "right": 60,
        "front": 60,
        "back": 60,
        "bottom": None,
        "top": 60,
    }
    for row in rows.values():
        if row.touch_max_c is None:
            assert (row.touch_margin_k, row.touch_verdict) == (None, None)
        else:
            assert row.touch_margin_k == row.touch_max_c - row.outside_c
            assert row.touch_verdict == "pass"


@pytest.mark.parametrize(("over", "verdict"), [(2.1, "pass"), (1.9, "marginal"), (-0.1, "fail")])
def test_touch_verdict(over, verdict):
    outside = temperatures(solved(WARM))["right wall outside"]
    limit = {"walls": {"right": {"touch_max_c": outside + over}}}
    finding = checked(patched(WARM, limit))
    row = next(row for row in finding.walls if row.name == "right")
    assert row.touch_margin_k == pytest.approx(over, abs=1e-6)
    assert row.touch_verdict == verdict
    assert finding.verdict == verdict


def test_heat_runs_round_the_corners_to_cooler_walls():
    answer = solved(WARM)
    names = temperatures(answer)
    flow = answer.flow("corner:right-bottom", "corner")
    drop = sum(
        names[f"right wall {face}"] - names[f"bottom wall {face}"] for face in ("outside", "inside")
    )
    assert names["right wall outside"] > names["bottom wall outside"]
    # Aluminium, 138 W/mK, half of 2 mm at each face; lengths away from the 100 mm edge: the
    # right wall's 150 mm of height, the bottom's 200 mm of width; each a third of its length.
    conductance = 3 * 0.100 * 138 * 0.001 / (0.150 + 0.200)
    assert flow == pytest.approx(conductance * drop, rel=1e-6)


# Air ----------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("lean", "height"),
    # 150 high and 100 deep: standing, on its back, and half way between.
    [(0, 150), (90, 100), (180, 150), (45, 250 * math.sqrt(0.5))],
)
def test_air_is_one_body_from_bottom_to_top(lean, height):
    tilted = patched(WARM, {"box": {"tilt": {"lean_back_deg": lean}}})
    answer = solved(tilted)
    air = assess(answer).air
    mean = temperatures(answer)["inside air"]
    assert (air.mean_c, air.top_c) == (mean, mean)
    assert [layer.air_c for layer in air.profile] == [mean, mean]
    assert [layer.height_mm for layer in air.profile] == pytest.approx([0, height])


def test_a_sealed_box_has_no_flow():
    assert checked(WARM).openings.flow_g_per_s == 0
