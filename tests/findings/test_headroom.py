"""Highest surroundings and largest power, proved by checking the document changed so."""

import pytest
from support.cases import Data, board, box, checked, part, patched, solved
from support.reports import SAMPLES

from enclosure_check.check import solve_case
from enclosure_check.description.load import load_document
from enclosure_check.findings import headroom
from enclosure_check.findings.assess import assess
from enclosure_check.findings.headroom import CLOSE_K, RUNAWAY

# No path through still air whose conductivity is taken at the surroundings' temperature: a
# document at another temperature has the same resistances.
WARM = box(
    boards={"main": board(other_power_w=1)},
    parts={
        "U1": part(
            power_w=0.8,
            theta_jc_top_k_per_w=5,
            theta_jb_k_per_w=4,
            limits={"junction": {"max_c": 95}, "case": {"max_c": 90, "min_c": 15}},
        ),
        "R1": part(
            place="right",
            side=None,
            at_mm=[50, 70],
            power_w=1,
            bottom_contact_k_per_w=1,
            limits={"case": {"max_c": 72}},
        ),
    },
)
# The searches end within 0.02 K of the margin wanted.
WITHIN_K = 0.05
VARIANTS = {
    "as it is": {},
    "margin wanted": {"requirements": {"margin_k": 7.5}},
    "touch": {"requirements": {"touch_max_c": 38, "margin_k": 2}},
    "already past": {"parts": {"U1": {"limits": {"junction": {"max_c": 35}}}}},
    "cold": {"surroundings": {"air_c": -35}},
    "high": {"surroundings": {"altitude_m": 4500}},
    "mounted": {
        "walls": {
            "back": {"mounting": {"kind": "bolted_to", "contact_w_per_m2k": 90, "surface_c": 35}}
        }
    },
    "radiant": {"surroundings": {"radiant_c": 45}},
    "sun": {"surroundings": {"sun_w_per_m2": {"top": 700}}},
    "sky": {"surroundings": {"sky": "given", "sky_c": -10}},
    "wind": {"surroundings": {"wind_m_per_s": 1.5, "wind_from": "left"}},
    "line": {"parts": {"U1": {"power_slope_pct_per_k": 0.4}}},
    "leakage": {"parts": {"U1": {"power_doubling_k": 90}}},
    "tilted": {"box": {"tilt": {"lean_back_deg": 90, "roll_right_deg": 30}}},
}


@pytest.fixture(params=VARIANTS, ids=str)
def document(request) -> Data:
    return patched(WARM, VARIANTS[request.param])


def shifted(document: Data, shift: float) -> Data:
    """All surroundings warmer together."""
    warm = patched(document, {})
    for key in ("air_c", "radiant_c", "sky_c"):
        if key in warm["surroundings"]:
            warm["surroundings"][key] += shift
    for wall in warm.get("walls", {}).values():
        if "surface_c" in wall.get("mounting", {}):
            wall["mounting"]["surface_c"] += shift
    return warm


def scaled(document: Data, factor: float) -> Data:
    """All power times a factor."""
    more = patched(document, {})
    for row in more["parts"].values():
        row["power_w"] *= factor
    for row in more["boards"].values():
        row["other_power_w"] *= factor
    return more


def least_margin(document: Data) -> tuple[float, str]:
    """The smallest margin to an upper limit, and which limit that is."""
    finding = checked(document)
    rows = [
        (row.margin_k, f"{row.name} {row.limit_kind}")
        for row in finding.parts
        if row.limit_side == "max"
    ]
    rows += [
        (row.touch_margin_k, f"{row.name} wall touch")
        for row in finding.walls
        if row.touch_margin_k is not None
    ]
    return min(rows)


def test_at_the_highest_air_the_margin_wanted_is_just_there(document):
    found = checked(document).headroom
    assert found.highest_air_c is not None
    shift = found.highest_air_c - document["surroundings"]["air_c"]
    assert abs(shift) > 1
    margin, name = least_margin(shifted(document, shift))
    assert margin == pytest.approx(found.wanted_margin_k, abs=WITHIN_K)
    assert found.air_limited_by == name


def test_at_the_largest_power_the_margin_wanted_is_just_there(document):
    found = checked(document).headroom
    assert found.power_pct is not None
    assert abs(found.power_pct - 100) > 1
    margin, name = least_margin(scaled(document, found.power_pct / 100))
    assert margin == pytest.approx(found.wanted_margin_k, abs=WITHIN_K)
    assert found.power_limited_by == name


def test_wanted_margin_lowers_both():
    bare, wanted = (
        checked(WARM).headroom,
        checked(patched(WARM, VARIANTS["margin wanted"])).headroom,
    )
    assert (bare.wanted_margin_k, wanted.wanted_margin_k) == (0, 7.5)
    # Warmer surroundings lower the rises a little, so a kelvin of margin costs a little over one.
    assert 7.5 < bare.highest_air_c - wanted.highest_air_c < 8.5
    assert wanted.power_pct < bare.power_pct


def test_past_a_limit_both_go_down():
    found = checked(patched(WARM, VARIANTS["already past"])).headroom
    assert found.highest_air_c < 25
    assert 0 < found.power_pct < 100


def test_lower_limits_do_not_count():
    cold = patched(WARM, {"surroundings": {"air_c": -35}})
    finding = checked(cold)
    assert finding.verdict == "fail"
    without = patched(cold, {"parts": {"U1": {"limits": {"case": {"min_c": None}}}}})
    assert checked(without).headroom == finding.headroom


def test_margin_already_met_is_the_answer():
    margin, name = least_margin(WARM)
    found = checked(patched(WARM, {"requirements": {"margin_k": margin - CLOSE_K / 2}})).headroom
    assert (found.highest_air_c, found.power_pct) == (25, 100)
    assert (found.air_limited_by, found.power_limited_by) == (name, name)


def test_no_limits_no_headroom():
    bare = patched(WARM, {"parts": {"U1": {"limits": None}, "R1": {"limits": None}}})
    found = checked(bare).headroom
    assert found.highest_air_c is None
    assert found.power_pct is None
    assert (found.air_limited_by, found.power_limited_by) == (None, None)


def test_no_power_leaves_the_air_alone():
    """Nothing warms the part, so the air may rise to its limit, and no factor on nothing helps."""
    off = patched(
        WARM,
        {
            "boards": {"main": {"other_power_w": 0}},
            "parts": {"U1": {"power_w": 0}, "R1": {"power_w": 0}},
        },
    )
    found = checked(off).headroom
    assert found.highest_air_c == pytest.approx(72, abs=WITHIN_K)
    assert found.air_limited_by == "R1 case"
    assert (found.power_pct, found.power_limited_by) == (None, None)


def test_surroundings_past_a_limit_leave_no_power():
    hot = patched(WARM, {"surroundings": {"air_c": 80}})
    found = checked(hot).headroom
    assert (found.power_pct, found.power_limited_by) == (None, None)
    assert found.highest_air_c < 72


def test_power_beyond_a_hundredfold_is_not_searched_for():
    little = scaled(WARM, 1e-4)
    found = checked(little).headroom
    assert (found.power_pct, found.power_limited_by) == (None, None)
    assert found.highest_air_c == pytest.approx(72, abs=0.1)


def test_air_colder_than_a_document_may_state_is_no_answer():
    hopeless = patched(WARM, {"parts": {"U1": {"power_w": 40}}})
    found = checked(hopeless).headroom
    assert least_margin(hopeless)[0] < -115
    assert (found.highest_air_c, found.air_limited_by) == (None, None)
    assert 0 < found.power_pct < 100


# Runaway ------------------------------------------------------------------------------------

LEAKY = patched(
    WARM,
    {
        "parts": {
            "R1": None,
            "U1": {
                "power_w": 5,
                "power_at_c": 125,
                "power_doubling_k": 15,
                "limits": {"junction": {"max_c": 300}, "case": None},
            },
        }
    },
)


def converges(document: Data) -> bool:
    try:
        solved(document)
    except AssertionError:
        return False
    return True


@pytest.fixture(scope="module")
def leaky():
    return checked(LEAKY).headroom


def test_runaway_comes_before_the_limit_and_is_named(leaky):
    assert (leaky.air_limited_by, leaky.power_limited_by) == (RUNAWAY, RUNAWAY)
    shift = leaky.highest_air_c - 25
    # Found within half a kelvin, and a hundredth of the power.
    assert shift > 1
    assert converges(shifted(LEAKY, shift))
    assert not converges(shifted(LEAKY, shift + 0.6))
    factor = leaky.power_pct / 100
    assert factor > 1
    assert converges(scaled(LEAKY, factor))
    assert not converges(scaled(LEAKY, 1.012 * factor))


def test_a_limit_below_the_runaway_is_found_all_the_same(leaky):
    """The first guess runs away, the answer does not."""
    limit = {"parts": {"U1": {"limits": {"junction": {"max_c": 75}}}}}
    made = patched(LEAKY, limit)
    found = checked(made).headroom
    assert found.highest_air_c < leaky.highest_air_c
    margin, name = least_margin(shifted(made, found.highest_air_c - 25))
    assert (margin, name) == (pytest.approx(0, abs=WITHIN_K), "U1 junction")
    assert found.air_limited_by == "U1 junction"


def test_headroom_is_that_of_its_own_case():
    answer = solved(WARM)
    assert assess(answer).headroom == checked(WARM).headroom


# Found at once, or searched for -------------------------------------------------------------


@pytest.mark.parametrize("path", SAMPLES, ids=[path.stem for path in SAMPLES])
def test_what_is_found_with_its_state_is_what_a_search_finds(path, monkeypatch):
    case = load_document(str(path)).cases()[0]
    answer = solve_case(case)
    found = assess(answer).headroom
    asked: list[int] = []

    def nothing_found(border, _):
        asked.append(len(border.numbers))
        return [None] * len(border.numbers)

    monkeypatch.setattr(headroom, "reached", nothing_found)
    searched = assess(answer).headroom
    assert asked == [2]
    assert (found.air_limited_by, found.power_limited_by) == (
        searched.air_limited_by,
        searched.power_limited_by,
    )
    assert found.highest_air_c == pytest.approx(searched.highest_air_c, abs=2 * CLOSE_K)
    assert found.power_pct == pytest.approx(searched.power_pct, abs=0.2)


def test_where_power_doubles_it_is_searched_for(monkeypatch):
    def refused(*_):
        raise AssertionError

    monkeypatch.setattr(headroom, "reached", refused)
    assert checked(LEAKY).headroom.air_limited_by == RUNAWAY
