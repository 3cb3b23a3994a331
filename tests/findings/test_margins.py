"""Margins and verdicts of parts and walls, where a part's heat goes, boards and readings."""

import random

import pytest
from support.cases import board, box, checked, part, patched, solved, temperatures
from support.random_documents import random_document

from enclosure_check.findings.assess import assess
from enclosure_check.findings.parts import point
from enclosure_check.findings.results import judge, worst

WARM = box(
    boards={"main": board(other_power_w=1)},
    parts={
        "U1": part(
            power_w=0.8,
            theta_jc_top_k_per_w=5,
            theta_jb_k_per_w=4,
            limits={
                "junction": {"max_c": 100, "min_c": -40},
                "case": {"max_c": 90},
                "board": {"max_c": 85},
                "air": {"max_c": 55},
            },
        ),
        "R1": part(
            place="right",
            side=None,
            at_mm=[50, 70],
            power_w=1,
            bottom_contact_k_per_w=1,
            limits={"case": {"max_c": 70}},
        ),
    },
)


# Verdicts -----------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("margin", "wanted", "verdict"),
    [
        (10, 0, "pass"),
        (0, 0, "pass"),
        (-1e-9, 0, "fail"),
        (5, 5, "pass"),
        (4.999, 5, "marginal"),
        (0, 5, "marginal"),
        (-0.001, 5, "fail"),
    ],
)
def test_verdict_on_a_margin(margin, wanted, verdict):
    assert judge(margin, wanted) == verdict


@pytest.mark.parametrize(
    ("verdicts", "expected"),
    [
        ([], "pass"),
        (["pass", "pass"], "pass"),
        (["pass", "marginal"], "marginal"),
        (["fail", "pass", "marginal"], "fail"),
    ],
)
def test_the_worst_verdict_counts(verdicts, expected):
    assert worst(verdicts) == expected


# Parts --------------------------------------------------------------------------------------


def test_margins_are_limit_less_temperature():
    answer = solved(WARM)
    nodes, at = answer.network.places.parts["U1"], answer.temperature_c
    found = {(row.name, row.limit_kind, row.limit_side): row for row in assess(answer).parts}
    assert len(found) == 6
    for kind, limit, node in (
        ("junction", 100, nodes.junction),
        ("case", 90, nodes.case),
        ("board", 85, nodes.board),
        ("air", 55, nodes.air),
    ):
        row = found["U1", kind, "max"]
        assert (row.limit_c, row.derated) == (limit, False)
        assert row.temperature_c == at[node]
        assert row.margin_k == limit - at[node]
        assert row.local_air_c == at[nodes.air]
    cold = found["U1", "junction", "min"]
    assert cold.margin_k == at[nodes.junction] + 40
    temps = [at[node] for node in (nodes.junction, nodes.case, nodes.board, nodes.air)]
    assert len(set(temps)) == 4


def test_worst_margin_first():
    margins = [row.margin_k for row in checked(WARM).parts]
    assert margins == sorted(margins)
    assert len(set(margins)) == len(margins)


def limited(limit, requirements=None):
    changes = {
        "parts": {"U1": {"limits": {"case": None, "board": None, "air": None, "junction": limit}}}
    }
    return patched(WARM, {**changes, "requirements": requirements or {}})


@pytest.fixture(scope="module")
def junction_c() -> float:
    return temperatures(solved(WARM))["U1 junction"]


@pytest.mark.parametrize(
    ("over", "wanted", "verdict"),
    [
        (0.01, None, "marginal"),
        (20.0, None, "pass"),
        (-0.01, None, "fail"),
        (4.9, 5, "marginal"),
        (5.1, 5, "pass"),
        (-0.01, 5, "fail"),
    ],
)
@pytest.mark.parametrize("side", ["max", "min"])
def test_verdict_of_a_part(junction_c, side, over, wanted, verdict):
    limit = junction_c + over if side == "max" else junction_c - over
    made = limited(
        {f"{side}_c": limit, ("min_c" if side == "max" else "max_c"): None}, {"margin_k": wanted}
    )
    finding = checked(patched(made, {"parts": {"R1": {"limits": None}}}))
    (row,) = finding.parts
    assert row.limit_side == side
    assert row.margin_k == pytest.approx(over, abs=1e-6)
    assert row.verdict == verdict
    assert finding.verdict == verdict


@pytest.mark.parametrize(
    ("share_of_band", "confidence", "verdict"),
    [
        # Without a confidence wanted the band must not reach past the limit.
        (0.99, None, "marginal"),
        (1.01, None, "pass"),
        # With one: so many standard deviations, half of the band each, on one side.
        (0.99 * 1.6448536 / 2, 95, "marginal"),
        (1.01 * 1.6448536 / 2, 95, "pass"),
        (0.99 * 0.6744898 / 2, 75, "marginal"),
        (1.01 * 0.6744898 / 2, 75, "pass"),
        (0.001, 50, "pass"),
        (-0.001, 50, "fail"),
    ],
)
@pytest.mark.parametrize("wanted", [None, 3])
def test_verdict_by_band_and_confidence(wanted, share_of_band, confidence, verdict):
    """The quantiles are those of printed tables of the normal distribution."""
    free = limited(
        {"max_c": 300, "min_c": None}, {"margin_k": wanted, "confidence_pct": confidence}
    )
    free = patched(free, {"parts": {"R1": {"limits": None}}})
    (row,) = checked(free).parts
    over = share_of_band * row.band_k
    if wanted and confidence:
        over += wanted if over > 0 else 0.0
    if wanted and not confidence:
        # The wanted margin is less than the band here, and is kept with it.
        assert wanted < row.band_k
    limit = row.temperature_c + over
    made = patched(free, {"parts": {"U1": {"limits": {"junction": {"max_c": limit}}}}})
    finding = checked(made)
    assert finding.parts[0].margin_k == pytest.approx(over, abs=1e-6)
    assert finding.parts[0].verdict == verdict


def test_derated_limit_is_marked_at_its_upper_side_only():
    curve = {"load_pct": 50, "allowed_pct": {"20": 100, "120": 0}}
    made = limited({"max_c": None, "derating": curve, "min_c": -40})
    rows = {row.limit_side: row for row in checked(made).parts if row.name == "U1"}
    assert (rows["max"].limit_c, rows["max"].derated) == (70, True)
    assert (rows["min"].limit_c, rows["min"].derated) == (-40, False)


def test_verdict_of_the_case_is_the_worst_of_parts_and_walls():
    easy = patched(WARM, {"requirements": {"touch_max_c": 150}})
    assert checked(easy).verdict == "pass"
    hot_walls = patched(WARM, {"requirements": {"touch_max_c": 20}})
    finding = checked(hot_walls)
    assert {row.verdict for row in finding.parts} == {"pass"}
    assert finding.verdict == "fail"


def test_a_point_that_a_part_does_not_have():
    with pytest.raises(ValueError, match="'R1' has no board"):
        point(solved(WARM), "R1", "board")


# Where the heat goes ------------------------------------------------------------------------


@pytest.mark.parametrize("seed", range(12))
def test_the_heat_of_every_part_is_accounted_for(seed):
    document = random_document(random.Random(seed))
    answer = solved(document)
    flows = float(answer.solution.heat_w[0])
    rows = assess(answer).part_heat
    assert {row.name for row in rows} == set(answer.case.parts)
    for row in rows:
        leaves = row.to_mount_w + row.to_pad_w + row.to_air_w + row.to_radiation_w
        # Each of its nodes balances to 1e-9 of the heat that flows.
        assert leaves == pytest.approx(row.power_w, rel=0, abs=5e-9 * max(flows, 1e-4))


def test_part_heat_names_its_temperatures_hottest_first():
    answer = solved(WARM)
    rows = {row.name: row for row in assess(answer).part_heat}
    nodes, at = answer.network.places.parts["U1"], answer.temperature_c
    assert rows["U1"].junction_c == at[nodes.junction]
    assert rows["U1"].case_c == at[nodes.case]
    assert rows["U1"].board_c == at[nodes.board]
    assert rows["R1"].board_c is None
    hottest = [row.junction_c for row in assess(answer).part_heat]
    assert hottest == sorted(hottest, reverse=True)
    assert rows["U1"].power_w == pytest.approx(0.8, rel=1e-12)
    # The drop from junction to case carries what the top gives off.
    up = rows["U1"].to_air_w + rows["U1"].to_radiation_w
    assert rows["U1"].junction_c - rows["U1"].case_c == pytest.approx(5 * up, rel=1e-6)
    assert rows["U1"].junction_c - rows["U1"].board_c == pytest.approx(
        4 * rows["U1"].to_mount_w, rel=1e-6
    )


def test_power_that_grows_is_reported_as_it_is():
    grown = patched(WARM, {"parts": {"U1": {"power_slope_pct_per_k": 0.4}}})
    row = next(row for row in checked(grown).part_heat if row.name == "U1")
    assert row.power_w == pytest.approx(0.8 * (1 + 0.004 * (row.junction_c - 25)), rel=1e-9)


def test_pad_heat():
    pad = {"to": "front", "thickness_mm": 50, "conductivity_w_per_mk": 5}
    answer = solved(patched(WARM, {"parts": {"U1": {"pad": pad}}}))
    row = next(row for row in assess(answer).part_heat if row.name == "U1")
    assert row.to_pad_w > 0.01
    assert row.to_pad_w == answer.flow("part:U1", "pad")


# Boards -------------------------------------------------------------------------------------


def test_board_mean_and_hottest_place():
    answer = solved(WARM)
    (row,) = assess(answer).boards
    cells = answer.temperature_c[answer.network.places.boards["main"].cells]
    assert row.mean_c == pytest.approx(cells.mean(), rel=1e-9)
    nodes = answer.network.places.parts["U1"]
    entering = answer.flow("part:U1", "to_board")
    # The middle under the part is hotter than the mean under it.
    assert nodes.peak_k_per_w > 0
    assert row.hottest_c == pytest.approx(
        answer.temperature_c[nodes.board] + nodes.peak_k_per_w * entering, rel=1e-12
    )
    assert (row.hottest_at, row.hottest_at_mm) == ("U1", pytest.approx((60, 50)))
    assert row.hottest_c > cells.max()


def test_board_without_parts_is_hottest_in_a_cell():
    answer = solved(patched(WARM, {"parts": {"U1": None}}))
    (row,) = assess(answer).boards
    assert row.hottest_at is None
    cells = answer.temperature_c[answer.network.places.boards["main"].cells]
    assert row.hottest_c == cells.max()
    column, level = (int(at[0]) for at in (cells == cells.max()).nonzero())
    columns, levels = cells.shape
    # 120 mm wide and 100 mm high.
    assert row.hottest_at_mm == pytest.approx(
        (120 * (column + 0.5) / columns, 100 * (level + 0.5) / levels)
    )
    # Warm air rises: the board is warmer in its upper half.
    assert row.hottest_at_mm[1] > 50


@pytest.mark.parametrize(
    ("parallel_to", "sides", "seen_from"),
    [("back", (60, 20), "front"), ("left", (60, 20), "right"), ("bottom", (60, 20), "top")],
)
def test_map_of_a_board(parallel_to, sides, seen_from):
    """A part near the right and lower edge, seen from the front, the right or the top."""
    length, width = sides
    side = {"back": "front", "left": "right", "bottom": "top"}[parallel_to]
    made = box(
        boards={"main": board(parallel_to=parallel_to, length_mm=80, width_mm=80)},
        parts={"U1": part(side=side, at_mm=[length, width], power_w=1, theta_jb_k_per_w=2)},
    )
    (row,) = checked(made).boards
    assert row.seen_from == seen_from
    assert row.hottest_at_mm == pytest.approx((60, 20))
    rows, columns = len(row.map_c), len(row.map_c[0])
    hottest = max((value, i, j) for i, line in enumerate(row.map_c) for j, value in enumerate(line))
    assert hottest[1] == pytest.approx(rows * 0.75, abs=1)
    assert hottest[2] == pytest.approx(columns * 0.75, abs=1)


def test_board_whose_parts_are_all_cooler_than_itself():
    idle = patched(
        WARM, {"parts": {"U1": {"power_w": 0}}, "boards": {"main": {"other_power_w": 8}}}
    )
    (row,) = checked(idle).boards
    assert row.hottest_at is None


# Readings -----------------------------------------------------------------------------------


def test_readings_beside_the_prediction():
    run = {
        "parts": {"U1": {"junction": 60, "case": 50, "board": 55, "air": 40}},
        "walls": {"top": {"outside_c": 33, "inside_c": 34}},
        "air_c": 41,
    }
    answer = solved(patched(WARM, {"measured": {"bench": run}}))
    places, names = answer.network.places, temperatures(answer)
    nodes = places.parts["U1"]
    predicted = {
        ("U1", "junction"): answer.temperature_c[nodes.junction],
        ("U1", "case"): answer.temperature_c[nodes.case],
        ("U1", "board"): answer.temperature_c[nodes.board],
        ("U1", "air"): names["air at U1"],
        ("top", "outside"): answer.temperature_c[places.wall_outside["top"].mean],
        ("top", "inside"): answer.temperature_c[places.wall_inside["top"].mean],
        ("air", "mean"): names["inside air, mean"],
    }
    finding = assess(answer)
    rows = finding.readings
    assert {(row.name, row.point): row.predicted_c for row in rows} == predicted
    for row in rows:
        assert row.run == "bench"
        assert row.difference_k == row.predicted_c - row.measured_c
        assert row.band_k > 0
        assert row.inside_band == (abs(row.difference_k) <= row.band_k)
    assert [row.measured_c for row in rows] == [60, 50, 55, 40, 33, 34, 41]
    assert {row.inside_band for row in rows} == {True, False}
    bias = {row.kind: row for row in finding.reading_bias}
    assert {kind: row.count for kind, row in bias.items()} == {"part": 4, "wall": 2, "air": 1}
    walls = [row for row in rows if row.kind == "wall"]
    assert bias["wall"].mean_difference_k == pytest.approx(
        sum(row.difference_k for row in walls) / 2
    )
    assert bias["wall"].rms_difference_k == pytest.approx(
        (sum(row.difference_k**2 for row in walls) / 2) ** 0.5
    )
    assert bias["wall"].inside_band == sum(row.inside_band for row in walls)
