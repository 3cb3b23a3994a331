"""The air inside beside numerical experiments: what the model promises of sealed boxes."""

import pytest
from published.experiments_inside import CASES, Sealed, ours

# What the model promises: 2 to 3 % of it are the experiments' own.
TOTAL = 0.12
SHARE = 0.08
SMALL_SHARE = 0.05
WIDE = [case for case in CASES if case.name in ("B", "C")]
NARROW = [case for case in CASES if case.name in ("B20", "B10")]
LOW = next(case for case in CASES if case.name == "D")
# Rise of the air at each height hoped for in the wide boxes, 8 % of the board's 20 K. The narrow ones
# are further off: in their experiments the slices hold the air of the gaps too, which the model keeps
# apart from the air around them.
PROFILE_K = 1.6


def named(cases):
    return pytest.mark.parametrize("case", cases, ids=[case.name for case in cases])


@named(CASES)
def test_total_heat(case: Sealed):
    assert ours(case.name).total_w == pytest.approx(case.total_w, rel=TOTAL)


@named(WIDE)
def test_ceiling_and_floor(case: Sealed):
    found = ours(case.name)
    assert found.ceiling == pytest.approx(case.ceiling, abs=SHARE)
    assert abs(found.floor) < SMALL_SHARE


@named(NARROW)
def test_narrow_gaps_pass_heat_straight_across(case: Sealed):
    found = ours(case.name)
    assert found.facing == pytest.approx(case.facing, abs=SHARE)
    assert found.facing > ours("B").facing + 0.1
    assert abs(found.floor) < SMALL_SHARE


def test_a_board_close_over_the_floor():
    assert ours("D").floor == pytest.approx(LOW.floor, rel=0.12)


@pytest.mark.parametrize(
    "case",
    [
        pytest.param(
            case,
            id=case.name,
            marks=pytest.mark.xfail(strict=True, reason="1.61 K too warm at 0.9 of the height")
            if case.name == "B"
            else (),
        )
        for case in WIDE
    ],
)
def test_profile(case: Sealed):
    for theirs, got in zip(case.profile_k, ours(case.name).profile_k, strict=True):
        assert got == pytest.approx(theirs, abs=PROFILE_K)


@named([case for case in CASES if case.profile_k is not None])
def test_air_is_stratified(case: Sealed):
    """Nearly as cold as the walls at the floor, warmer from height to height."""
    profile = ours(case.name).profile_k
    assert list(profile) == sorted(profile)
    assert profile[0] < 0.1 * profile[-1]
