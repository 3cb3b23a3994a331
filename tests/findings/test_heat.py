"""Walls, the balance of the whole box, and the inside air."""

import math
import random

import pytest
from support.cases import board, box, checked, part, patched, solved
from support.random_documents import random_document

from enclosure_check.description.names import WALL_NAMES
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
    out += balance.cables_w
    assert balance.imbalance_w == pytest.approx(balance.generated_w + balance.sun_w - out, abs=1e-9)
    for key in ("convection_w", "radiation_w", "sun_w", "openings_w", "mounting_w", "cables_w"):
        total = sum(getattr(wall, key) for wall in finding.walls)
        assert getattr(balance, key) == pytest.approx(total, abs=1e-12)
    power = sum(row.power_w for row in finding.part_heat)
    power += sum(row.other_power_w for row in answer.case.boards.values())
    assert balance.generated_w == pytest.approx(power, rel=1e-12)


def test_walls_one_by_one():
    answer = solved(WARM)
    places, at = answer.network.places, answer.temperature_c
    rows = {row.name: row for row in assess(answer).walls}
    assert tuple(rows) == WALL_NAMES
    corners = 0.0
    for name, row in rows.items():
        outside, inside = places.wall_outside[name].cells, places.wall_inside[name].cells
        assert row.outside_c == pytest.approx(at[outside].mean(), rel=1e-9)
        assert row.outside_max_c == at[outside].max()
        assert row.inside_c == pytest.approx(at[inside].mean(), rel=1e-9)
        assert (row.openings_w, row.cables_w) == (0, 0)
        comes_in = -sum(
            answer.flow(f"wall:{name}", role) for role in ("convection_inside", "radiation_inside")
        )
        # What goes straight across a gap counts with the face at its lower end of the axis.
        comes_in += straight_to(answer, name)
        leaves = row.convection_w + row.radiation_w + row.mounting_w
        runs_along = sum(
            answer.flow(f"corner:{one}-{other}", "corner") * (1 if name == one else -1)
            for one in WALL_NAMES
            for other in WALL_NAMES
            if name in (one, other)
        )
        corners += runs_along
        # What leaves a wall outside, and round its corners, is what comes to it and from the sun.
        assert leaves + runs_along == pytest.approx(comes_in + row.sun_w, abs=1e-6)
    assert corners == pytest.approx(0, abs=1e-9)
    assert rows["bottom"].mounting == "bolted_to"
    assert rows["bottom"].mounting_w > 0
    assert (rows["bottom"].convection_w, rows["bottom"].radiation_w) == (0, 0)
    assert (rows["left"].convection_w, rows["left"].mounting_w) == (0, 0)
    assert rows["top"].sun_w == pytest.approx(0.68 * 500 * 0.204 * 0.104, rel=1e-12)
    assert [name for name, row in rows.items() if row.sun_w] == ["top"]


def straight_to(answer, name) -> float:
    """Heat that comes straight across a gap to a wall and is counted with the other face [W].

    Films and what crosses a gap are added up by their label: all that leaves the first face. What
    of it ends at a cell of the wall, and what of the wall's own ends at another's cell, is known
    by the links' ends.
    """
    network = answer.network
    own = set(network.places.wall_inside[name].cells.ravel().tolist())
    air = set(network.places.air_nodes.tolist())
    owner = {label: at for at, label in enumerate(network.labels)}
    mine = owner[f"wall:{name}", "convection_inside"]
    total, start = 0.0, 0
    for kind in network.kinds:
        heat = answer.heat_w[start : start + len(kind.a)]
        start += len(kind.a)
        if type(kind).__name__ != "InsideAir":
            continue
        for a, b, label, watts in zip(kind.a, kind.b, kind.label, heat, strict=True):
            if b in own and a not in air and label != mine:
                total += watts
    return total


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
            # A hand finds the hottest place of a wall.
            assert row.touch_margin_k == row.touch_max_c - row.outside_max_c
            assert row.outside_max_c > row.outside_c
            assert row.touch_verdict == "pass"


@pytest.mark.parametrize(("over", "verdict"), [(2.1, "pass"), (1.9, "marginal"), (-0.1, "fail")])
def test_touch_verdict(over, verdict):
    outside = next(row.outside_max_c for row in checked(WARM).walls if row.name == "right")
    limit = {"walls": {"right": {"touch_max_c": outside + over}}}
    finding = checked(patched(WARM, limit))
    row = next(row for row in finding.walls if row.name == "right")
    assert row.touch_margin_k == pytest.approx(over, abs=1e-6)
    assert row.touch_verdict == verdict
    assert finding.verdict == verdict


def test_heat_runs_round_the_corners_to_cooler_walls():
    answer = solved(WARM)
    rows = {row.name: row for row in assess(answer).walls}
    flow = answer.flow("corner:right-bottom", "corner")
    assert rows["right"].outside_c > rows["bottom"].outside_c + 1
    assert flow > 0.1
    # All that runs from wall to wall: the corners of the cooled bottom carry its heat to it.
    into = flow + sum(
        answer.flow(f"corner:{n}-bottom", "corner") for n in ("left", "front", "back")
    )
    assert into < rows["bottom"].mounting_w


# Air ----------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("lean", "height"),
    # 150 high and 100 deep: standing, on its back, and half way between.
    [(0, 150), (90, 100), (180, 150), (45, 250 * math.sqrt(0.5))],
)
def test_air_from_bottom_to_top(lean, height):
    tilted = patched(WARM, {"box": {"tilt": {"lean_back_deg": lean}}})
    answer = solved(tilted)
    air = assess(answer).air
    layers = [layer.air_c for layer in air.profile]
    heights = [layer.height_mm for layer in air.profile]
    nodes = answer.network.places.air_nodes
    assert layers == [answer.temperature_c[node] for node in nodes]
    assert (heights[0], heights[-1]) == (0, pytest.approx(height))
    assert air.top_c == layers[-1]
    # The profile is linear between its heights: the mean is the area under it.
    steps = zip(heights, heights[1:], layers, layers[1:], strict=False)
    area = sum((z1 - z0) * (t0 + t1) / 2 for z0, z1, t0, t1 in steps)
    assert air.mean_c == pytest.approx(area / height, abs=1e-6)
    # Warm over cold, from the cooled floor up.
    assert air.top_c > air.mean_c > layers[0]


def test_a_sealed_box_has_no_flow():
    assert checked(WARM).openings.flow_g_per_s == 0
