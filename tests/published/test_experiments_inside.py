"""The air inside beside numerical experiments: what the model promises of sealed boxes."""

import numpy as np
import pytest
from published.experiments_inside import CASES, FACES_W, HEIGHTS, Sealed, ours, solved
from published.faces import heat_by_face
from published.slices import FILM_CONTENT
from scipy.integrate import solve_bvp

# What the model promises: 2 to 3 % of it are the experiments' own.
TOTAL = 0.12
SHARE = 0.08
SMALL_SHARE = 0.05
WIDE = [case for case in CASES if case.name in ("B", "C")]
LEVEL = [case for case in CASES if case.name in FACES_W]
NARROW = [case for case in CASES if case.name in ("B20", "B10")]
LOW = next(case for case in CASES if case.name == "D")
# Mean rise of slices hoped for, 8 % of the board's 20 K.
PROFILE_K = 1.6


def named(cases):
    return pytest.mark.parametrize("case", cases, ids=[case.name for case in cases])


@named(CASES)
def test_total_heat(case: Sealed):
    assert ours(case.name).total_w == pytest.approx(case.total_w, rel=TOTAL)


@named(CASES)
def test_ceiling(case: Sealed):
    assert ours(case.name).ceiling == pytest.approx(case.ceiling, abs=SHARE)


@named(WIDE)
def test_floor(case: Sealed):
    assert abs(ours(case.name).floor) < SMALL_SHARE


@named(LEVEL)
def test_faces_of_a_flat_board(case: Sealed):
    """Its upper side, and its rim, which is thinner than the films."""
    found = heat_by_face(solved(case, ours(case.name).total_w))
    theirs = FACES_W[case.name]
    assert found["board board, top side"] == pytest.approx(theirs["top side"], rel=0.12)
    assert found["board board, rim"] == pytest.approx(theirs["rim"], rel=0.25)


@named(NARROW)
def test_narrow_gaps_pass_heat_straight_across(case: Sealed):
    found = ours(case.name)
    assert found.facing == pytest.approx(case.facing, abs=SHARE)
    assert found.facing > ours("B").facing + 0.1
    assert abs(found.floor) < SMALL_SHARE


def test_a_board_close_over_the_floor():
    assert ours("D").floor == pytest.approx(LOW.floor, rel=0.12)


SLICES = [
    pytest.param(
        case.name,
        place,
        id=f"{case.name}-{HEIGHTS[place]:g}",
        marks=pytest.mark.xfail(strict=True, reason="2.8 K too cold over the board")
        if (case.name, HEIGHTS[place]) == ("B20", 0.9)
        else (),
    )
    for case in CASES
    if case.profile_k is not None
    for place in range(len(HEIGHTS))
]


@pytest.mark.parametrize(("name", "place"), SLICES)
def test_slice_of_air(name: str, place: int):
    case = next(case for case in CASES if case.name == name)
    assert case.profile_k is not None
    assert ours(name).slices_k[place] == pytest.approx(case.profile_k[place], abs=PROFILE_K)


def test_what_a_laminar_film_holds():
    """Similarity equations of Ostrach (1953) at Pr 0.71, solved anew."""
    prandtl = 0.71

    def slopes(_, y):
        f, df, ddf, t, dt = y
        return np.vstack((df, ddf, 2 * df**2 - 3 * f * ddf - t, dt, -3 * prandtl * f * dt))

    def ends(near, far):
        return np.array([near[0], near[1], near[3] - 1, far[1], far[3]])

    eta = np.linspace(0, 12, 300)
    fade = np.exp(-0.6 * eta)
    start = np.stack(
        (0.6 * (1 - np.exp(-eta)), 0.6 * eta * fade**2, 0.7 * np.exp(-eta), fade, -0.5 * fade)
    )
    solution = solve_bvp(slopes, ends, eta, start, tol=1e-6, max_nodes=20_000)
    assert solution.success
    # Air is drawn towards the face: of several solutions the one that is.
    assert solution.sol(eta[-1])[0] > 0
    content = np.trapezoid(solution.sol(eta)[3], eta) * -solution.sol(0.0)[4]
    assert content == pytest.approx(FILM_CONTENT, abs=0.001)


@named([case for case in CASES if case.profile_k is not None])
def test_air_is_stratified(case: Sealed):
    """Nearly as cold as the walls at the floor, warmer from height to height."""
    profile = ours(case.name).profile_k
    assert list(profile) == sorted(profile)
    assert profile[0] < 0.1 * profile[-1]
