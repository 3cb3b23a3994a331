"""The vented box against the numerical experiment: flow, outlet, and the air below mid-height."""

import pytest
from published import experiment_vented


def test_flow_and_outlet():
    theirs, ours = experiment_vented.THEIRS, experiment_vented.ours()
    assert ours.flow_g_per_s == pytest.approx(theirs.flow_g_per_s, rel=0.15)
    assert ours.outlet_k == pytest.approx(theirs.outlet_k, rel=0.15)


def test_board():
    theirs, ours = experiment_vented.THEIRS, experiment_vented.ours()
    assert ours.board_k == pytest.approx(theirs.board_k, rel=0.15)


def test_air_below_mid_height_stays_cold():
    theirs, ours = experiment_vented.THEIRS, experiment_vented.ours()
    for own, their in zip(ours.profile_k[:3], theirs.profile_k[:3], strict=True):
        assert abs(own - their) < 3.0
    assert ours.profile_k[1] < 0.2 * ours.outlet_k


def test_what_leaves_is_what_is_put_in():
    ours = experiment_vented.ours()
    assert ours.flow_g_per_s * 1e-3 * 1007.0 * ours.outlet_k == pytest.approx(
        experiment_vented.POWER_W, rel=2e-3
    )
