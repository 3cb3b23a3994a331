"""Power that grows with temperature: lowest steady state, and runaway where there is none.

One node over one resistance R, in closed form. Exponential, ``P = P0 exp(l (T - T0))``: with
``z = l R P0 exp(l (Ta - T0))`` the steady rises solve ``l x = z exp(l x)``, so ``x = -W(-z) / l``
with Lambert's function W; the lower one is the principal branch, and none exists past
``z = 1/e``. In a line, ``P = P0 (1 + s (T - T0))``: ``x = R P0 (1 + s (Ta - T0)) / (1 - s R P0)``,
none past ``s R P0 = 1``. Both by hand (a balance of one node).
"""

import math
import random
from dataclasses import replace

import numpy as np
import pytest
from scipy.special import lambertw
from support.cases import COARSE, board, box, network_of, part, patched
from support.networks import AMBIENT_K, LABEL, POWER, finished, one_node, started, together
from support.random_documents import random_document, with_strong_growth

from enclosure_check.solve.steady import Outcome, solve_steady


def exponential(z: float, doubling: float, resistance: float, stated_at_k: float):
    """One node whose ``z`` is as given; z = 1/e is the threshold."""
    growth = math.log(2) / doubling
    power = z / (growth * resistance * math.exp(growth * (AMBIENT_K - stated_at_k)))
    return one_node(power, resistance, stated_at_k=stated_at_k, doublings=1 / doubling), growth


@pytest.mark.parametrize("stated_at_k", [AMBIENT_K - 60, AMBIENT_K, AMBIENT_K + 150])
@pytest.mark.parametrize("resistance", [0.2, 30.0])
@pytest.mark.parametrize("doubling", [8.0, 20.0, 60.0])
@pytest.mark.parametrize("share", [1e-3, 0.3, 0.9, 0.99, 0.9999])
def test_below_the_threshold_the_lower_state_is_found(share, doubling, resistance, stated_at_k):
    network, growth = exponential(share / math.e, doubling, resistance, stated_at_k)
    solution = solve_steady(network)
    assert solution.outcome == (Outcome.CONVERGED,)
    expected = -lambertw(-share / math.e).real / growth
    # Near the threshold the balance is flat: an imbalance of 1e-9 of the heat moves the rise by
    # 1e-9 / sqrt(1 - share) of it and its curvature by no more.
    assert solution.rise[-1, 0] == pytest.approx(expected, rel=1e-6)


@pytest.mark.parametrize("stated_at_k", [AMBIENT_K - 60, AMBIENT_K, AMBIENT_K + 150])
@pytest.mark.parametrize("resistance", [0.2, 30.0])
@pytest.mark.parametrize("doubling", [8.0, 20.0, 60.0])
@pytest.mark.parametrize("share", [1.0001, 1.1, 3.0, 100.0])
def test_above_the_threshold_it_is_runaway(share, doubling, resistance, stated_at_k):
    network, _ = exponential(share / math.e, doubling, resistance, stated_at_k)
    solution = solve_steady(network)
    assert solution.outcome == (Outcome.RUNAWAY,)
    assert network.node_labels[solution.worst_node[0]] == "junction"


@pytest.mark.parametrize("stated_at_k", [AMBIENT_K - 10, AMBIENT_K, AMBIENT_K + 10])
@pytest.mark.parametrize("gain", [0.05, 0.5, 0.9, 0.99])
def test_power_along_a_line_below_its_threshold(gain, stated_at_k):
    power, resistance = 2.0, 3.0
    slope = gain / (power * resistance)
    network = one_node(power, resistance, stated_at_k=stated_at_k, slope=slope)
    solution = solve_steady(network)
    assert solution.outcome == (Outcome.CONVERGED,)
    flat = 1 + slope * (AMBIENT_K - stated_at_k)
    # A line that starts below nothing puts in nothing.
    expected = max(power * resistance * flat, 0) / (1 - gain)
    assert solution.rise[-1, 0] == pytest.approx(expected, rel=1e-6)


@pytest.mark.parametrize("gain", [1.01, 1.5, 20.0])
def test_power_along_a_line_above_its_threshold(gain):
    power, resistance = 2.0, 3.0
    network = one_node(power, resistance, slope=gain / (power * resistance))
    assert solve_steady(network).outcome == (Outcome.RUNAWAY,)


def test_power_that_falls_with_temperature_never_runs_away():
    network = one_node(10.0, 5.0, slope=-0.01)
    solution = solve_steady(network)
    assert solution.outcome == (Outcome.CONVERGED,)
    assert solution.rise[-1, 0] == pytest.approx(50 / 1.5, rel=1e-9)


def test_a_growing_power_out_of_scale_before_it_grows_is_not_runaway():
    network = one_node(1e5, 1.0, slope=1e-9)
    assert solve_steady(network).outcome == (Outcome.TOO_HOT,)


def test_from_a_hot_start_the_lower_state_is_found():
    """A start past the upper, unstable state must not be taken for the answer."""
    network, growth = exponential(0.5 / math.e, 20.0, 1.0, AMBIENT_K)
    upper = -lambertw(-0.5 / math.e, -1).real / growth
    lower = -lambertw(-0.5 / math.e).real / growth
    for start in (upper, upper + 1, upper + 30):
        solution = solve_steady(network, np.array([[start]]))
        assert solution.outcome == (Outcome.CONVERGED,)
        assert solution.rise[-1, 0] == pytest.approx(lower, rel=1e-6)


def test_two_nodes_of_which_one_grows():
    """A node that grows beside one that does not, over a common resistance; by hand as above."""
    builder, ambient = started()
    common, hot = builder.node("common"), builder.node("hot")
    builder.conduct(common, ambient, 1 / 2.0, LABEL)
    builder.conduct(hot, common, 1 / 5.0, LABEL)
    builder.heat(common, 4.0, POWER)
    growth = math.log(2) / 25
    builder.heat(hot, 0.6, POWER, stated_at_k=AMBIENT_K, doublings=1 / 25)
    solution = solve_steady(finished(builder))
    # The growing node stands 8 K higher for the other's heat, over 7 K/W in all.
    z = growth * 7.0 * 0.6 * math.exp(growth * 8.0)
    expected = 8.0 - lambertw(-z).real / growth
    assert z < 1 / math.e
    assert solution.rise[hot, 0] == pytest.approx(expected, rel=1e-6)


def test_variants_that_run_away_beside_others_that_do_not():
    shares = [0.1, 2.0, 0.99, 50.0, 0.7]
    networks = [exponential(share / math.e, 20.0, 1.0, AMBIENT_K)[0] for share in shares]
    solution = solve_steady(together(networks))
    for index, network in enumerate(networks):
        alone = solve_steady(network)
        assert solution.outcome[index] is alone.outcome[0]
        assert (alone.outcome[0] is Outcome.CONVERGED) == (shares[index] < 1)
        if shares[index] < 1:
            assert solution.rise[-1, index] == pytest.approx(alone.rise[-1, 0], rel=1e-9)


# In a box -----------------------------------------------------------------------------------

LEAKY = box(
    boards={"main": board()},
    parts={"U1": part(theta_jb_k_per_w=8, power_at_c=125, power_doubling_k=15)},
)


def leaky(power: float):
    return network_of(patched(LEAKY, {"parts": {"U1": {"power_w": power}}}), COARSE)


def test_leakage_stated_hot_is_no_runaway_in_a_cold_box():
    """4 W at 125 C are 0.04 W at 25 C; a guess from the power stated lies past the upper state."""
    network = leaky(4.0)
    solution = solve_steady(network)
    assert solution.outcome == (Outcome.CONVERGED,)
    junction = network.places.parts["U1"].junction
    assert 0 < solution.rise[junction, 0] < 10


def test_leakage_runs_away_between_two_powers_and_the_last_state_is_stable():
    low, high = 15.0, 60.0
    assert solve_steady(leaky(high)).outcome == (Outcome.RUNAWAY,)
    while high / low > 1.001:
        middle = math.sqrt(low * high)
        if solve_steady(leaky(middle)).converged:
            low = middle
        else:
            high = middle
    assert solve_steady(leaky(high)).outcome == (Outcome.RUNAWAY,)
    last = solve_steady(leaky(low))
    network = leaky(low)
    junction = network.places.parts["U1"].junction
    # At the threshold of one node over a resistance the rise is 1/l = 15 K / ln 2. Films that
    # improve with the rise put it some per cent higher, and short of the threshold by a share of
    # 1e-3 it is short by sqrt(2e-3), 4 %.
    assert last.rise[junction, 0] == pytest.approx(15 / math.log(2), rel=0.15)
    # And more power than at the threshold, held at any temperature, has no state near it.
    sources = network.sources
    more = replace(network, sources=replace(sources, power=sources.power * 1.01))
    assert not solve_steady(more, last.rise[network.unknown]).converged


# Any box ------------------------------------------------------------------------------------

HOTTEST_K = 2_000.0


def climbed(network) -> np.ndarray | None:
    """The lowest steady state, found slowly: power held at ever higher temperatures, from cold.

    As far as more power cools nothing each state lies below every steady one; so where this ends is
    the lowest there is, and where it climbs past all bounds there is none below them.
    """
    sources = network.sources
    rise, start = np.full((network.size, 1), -60.0), None
    for _ in range(400):
        power = sources.heat(rise[sources.node], network.reference_k)
        # Power that falls with temperature is left to do so.
        growing = (sources.slope > 0) | (sources.doublings > 0)
        held = replace(
            sources,
            power=np.where(growing, power, sources.power),
            slope=np.where(growing, 0.0, sources.slope),
            doublings=np.where(growing, 0.0, sources.doublings),
        )
        solution = solve_steady(replace(network, sources=held), start)
        if not solution.converged or solution.rise.max() > HOTTEST_K:
            return None
        if np.abs(solution.rise - rise).max() < 1e-7:
            return solution.rise
        rise, start = solution.rise, solution.rise[network.unknown]
    raise AssertionError("neither climbs away nor comes to rest")


# Some that a plain Newton iteration takes for runaway, or does not get to, and that are none; some
# that are plain; and one that does run away.
@pytest.mark.parametrize("seed", [7, 18, 24, 0, 20])
def test_the_lowest_state_of_any_box_is_found_and_nothing_else_is_runaway(seed):
    rng = random.Random(seed)
    network = network_of(with_strong_growth(random_document(rng), rng), COARSE)
    solution = solve_steady(network)
    expected = climbed(network)
    if expected is None:
        assert solution.outcome == (Outcome.RUNAWAY,)
    else:
        assert solution.outcome == (Outcome.CONVERGED,)
        # The climb ends within 1e-7 K a step, which a gain of 0.99 makes 1e-5 K of the state.
        np.testing.assert_allclose(solution.rise, expected, rtol=0, atol=1e-3)
