"""The steady solver: what converged means, what it says when it does not, many at once."""

import random
from dataclasses import replace

import numpy as np
import pytest
from support.cases import (
    COARSE,
    NODE_SHARE,
    OVERALL_SHARE,
    assert_balanced,
    board,
    box,
    case_of,
    network_of,
    part,
    patched,
    solved,
    solved_as,
)
from support.networks import LABEL, POWER, finished, one_node, started, together
from support.random_documents import random_document

from enclosure_check.network.inside_air import InsideAir
from enclosure_check.network.links import LinkKind
from enclosure_check.network.network import Network
from enclosure_check.solve.steady import (
    LEAST_HEAT_W,
    Outcome,
    SolveOptions,
    _stirred,
    heat_that_flows,
    solve_steady,
)

WARM = box(boards={"main": board(other_power_w=4)}, parts={"U1": part(power_w=2)})


# Converged ----------------------------------------------------------------------------------


def test_the_criterion_is_the_one_stated():
    options = SolveOptions()
    assert (options.node_tolerance, options.overall_tolerance) == (NODE_SHARE, OVERALL_SHARE)


@pytest.mark.parametrize("seed", range(5))
def test_converged_means_balanced(seed):
    document = random_document(random.Random(seed))
    case, network = case_of(document), network_of(document, COARSE)
    solution = solve_steady(network)
    assert solution.converged
    assert_balanced(solved_as(case, network, solution))


def test_what_is_reported_is_what_is_left():
    network = network_of(WARM)
    solution = solve_steady(network)
    left = np.abs(network.imbalance(solution.rise)[:, 0])
    left[network.fixed] = 0
    assert solution.worst_imbalance_w[0] == left.max()
    assert solution.worst_node[0] == left.argmax()
    links = network.heat(solution.rise)
    assert solution.heat_w == heat_that_flows(network, solution.rise, links)
    # 6 W put in and 6 W given to the surroundings.
    assert solution.heat_w[0] == pytest.approx(12.0, rel=1e-6)


def test_given_temperatures_stay_as_given():
    answer = solved(
        patched(WARM, {"surroundings": {"radiant_c": 10, "sky": "given", "sky_c": -20}})
    )
    network = answer.network
    assert (answer.solution.rise[network.fixed] == network.fixed_rise[network.fixed]).all()
    # Air, radiant surroundings and sky, and the node that takes up what is no heat.
    assert network.fixed.sum() == 4


def test_the_overall_criterion_counts_too():
    # Each of a thousand nodes within its share, all of them together not.
    loose = SolveOptions(node_tolerance=1.0, overall_tolerance=1e-6)
    network = network_of(WARM)
    solution = solve_steady(network, options=loose)
    left = network.imbalance(solution.rise)[network.unknown, 0]
    assert abs(left.sum()) <= 1e-6 * solution.heat_w[0]


def test_nothing_flows_nothing_to_do():
    solution = solve_steady(network_of(box()))
    assert solution.converged
    assert solution.steps[0] == 0
    assert np.abs(solution.rise).max() == 0
    assert solution.heat_w[0] < LEAST_HEAT_W


@pytest.mark.parametrize("off_k", [-60.0, 0.0, 30.0, 400.0])
def test_the_answer_does_not_depend_on_the_start(off_k):
    network = network_of(WARM, COARSE)
    expected = solve_steady(network)
    rng = np.random.default_rng(2)
    start = off_k * rng.random((len(network.unknown), 1))
    found = solve_steady(network, start)
    assert found.converged
    # Both to 1e-9 of 12 W; no node has less than a milliwatt per kelvin to its neighbours.
    np.testing.assert_allclose(found.rise, expected.rise, rtol=0, atol=1e-4)


def test_a_start_is_not_written_to():
    network = network_of(WARM)
    start = np.zeros((len(network.unknown), 1))
    solve_steady(network, start)
    assert not start.any()


def test_far_starts_fall_back_rather_than_over():
    """From 1,000 K off, steps have to be shortened or taken back; the answer is found."""
    network = network_of(WARM, COARSE)
    start = np.full((len(network.unknown), 1), 1000.0)
    start[::2] = -200.0
    found = solve_steady(network, start)
    assert found.converged
    assert found.steps[0] > solve_steady(network).steps[0]


def test_stirred_air_is_on_the_way_to_an_answer_and_not_in_it():
    """Where a first Newton fails the air is stirred less and less; the balance is the box's own."""
    network = network_of(WARM, COARSE)
    direct, by_way = solve_steady(network), _stirred(network, SolveOptions())
    assert by_way.converged
    np.testing.assert_allclose(by_way.rise, direct.rise, rtol=0, atol=1e-4)
    # Every stage counts among the steps.
    assert by_way.steps[0] > direct.steps[0]
    # The more it is stirred, the less the air differs from bottom to top.
    rises = {
        share: np.ptp(solve_steady(network.stirred(share)).rise[network.places.air_nodes])
        for share in (0.0, 0.03, 3.0)
    }
    assert np.ptp(direct.rise[network.places.air_nodes]) == pytest.approx(rises[0.0], abs=1e-6)
    assert rises[3.0] < rises[0.03] < rises[0.0]


def test_steps_of_a_first_try_count_when_another_way_is_taken():
    network = network_of(WARM, COARSE)
    few = solve_steady(network, options=SolveOptions(max_steps=2, by_stirring=False))
    later = solve_steady(network)
    both = few.improved(later)
    assert both.converged
    assert both.steps[0] == few.steps[0] + later.steps[0]
    assert later.improved(few).steps[0] == later.steps[0]


# Not converged ------------------------------------------------------------------------------


def test_too_few_steps():
    # The guess of a radiating box is no answer.
    solution = solve_steady(network_of(WARM), options=SolveOptions(max_steps=1, by_stirring=False))
    assert solution.outcome == (Outcome.TOO_MANY_STEPS,)
    assert not solution.converged
    assert solution.steps[0] == 1
    assert solution.worst_imbalance_w[0] > NODE_SHARE * solution.heat_w[0]


def test_a_balance_that_rounding_cannot_meet_stalls_and_names_the_node():
    builder, ambient = started()
    plain = builder.node("plain")
    one, other = builder.node("one"), builder.node("other")
    builder.conduct(plain, ambient, 1.0, LABEL)
    builder.conduct(other, ambient, 1.0, LABEL)
    builder.radiate(other, ambient, 0.01, 0.01, 0.9, LABEL)
    # A rise of a kelvin has steps of 2e-16 K: times this conductance that is 0.2 mW.
    builder.conduct(one, other, 1e12, LABEL)
    builder.heat(one, 1.234567, POWER)
    builder.heat(plain, 1.0, POWER)
    network = finished(builder)
    solution = solve_steady(network)
    assert solution.outcome == (Outcome.STALLED,)
    assert solution.worst_node[0] in (one, other)
    assert solution.fallbacks[0] > 0
    # Eight times shorter each time, from a thousandth to 1e5: ten steps, and it is given up.
    alone = solve_steady(network, options=SolveOptions(by_stirring=False))
    assert alone.fallbacks[0] <= 10


def test_heat_that_cannot_leave_names_the_hottest_node():
    document = patched(WARM, {"parts": {"U1": {"power_w": 3000, "theta_jc_top_k_per_w": 50}}})
    network = network_of(document, COARSE)
    solution = solve_steady(network)
    assert solution.outcome == (Outcome.TOO_HOT,)
    assert network.node_labels[solution.worst_node[0]] == "U1 junction"
    assert np.isfinite(solution.rise).all()


@pytest.mark.parametrize("power", [1e3, 1e5])
@pytest.mark.parametrize("kind", ["board", "part"])
def test_absurd_power_ends_without_a_warning(power, kind):
    changes = (
        {"boards": {"main": {"other_power_w": power}}}
        if kind == "board"
        else {"parts": {"U1": {"power_w": power, "bottom_contact_k_per_w": 1e5}}}
    )
    solution = solve_steady(network_of(patched(WARM, changes), COARSE))
    assert solution.outcome[0] in (Outcome.CONVERGED, Outcome.TOO_HOT)


def test_every_outcome_says_what_to_do():
    for outcome in Outcome:
        if outcome is not Outcome.CONVERGED:
            assert len(outcome.value) > 40
    assert Outcome.CONVERGED.value == "converged"


# Nothing radiates inside --------------------------------------------------------------------


def test_a_box_black_to_nothing_inside_is_solved():
    dark = {
        "finishes": {"none": {"emissivity": 0}},
        "defaults": {"wall": {"finish_inside": "none"}, "board": {"finish": "none"}},
        "parts": {"U1": {"finish": "none"}},
    }
    answer, usual = solved(patched(WARM, dark)), solved(WARM)
    for owner in ("wall:top", "board:main", "part:U1"):
        assert answer.flow(owner, "radiation_inside") == 0
    assert answer.flow("inside", "radiation") == 0
    junction = answer.network.places.parts["U1"].junction
    assert answer.temperature_c[junction] > usual.temperature_c[junction] + 1


# Many at once -------------------------------------------------------------------------------


def variants() -> list[Network]:
    """The same box with other powers, surroundings, finishes and films."""
    found = []
    for index, factor in enumerate((0.0, 0.3, 1.0, 4.0)):
        air_c = -20 + 25 * index
        network = network_of(
            patched(
                WARM,
                {
                    "surroundings": {
                        "air_c": air_c,
                        "radiant_c": air_c + 7 * index,
                        "sky": "clear",
                        "sun_w_per_m2": {"top": 10 + 100 * index},
                    },
                    "parts": {"U1": {"theta_jc_top_k_per_w": 5 + index, "power_w": 2}},
                    "finishes": {"own": {"emissivity": 0.2 * (index + 1)}},
                    "walls": {"left": {"finish_outside": "own"}},
                },
            ),
            COARSE,
        )
        sources = network.sources
        found.append(
            replace(network, sources=replace(sources, power=sources.power * (factor + 0.01)))
        )
    return [with_air_of(network, found[0]) for network in found]


def with_air_of(network: Network, other: Network) -> Network:
    """The same with the conduction of still air of another, which variants have in common."""

    def shared(kind: LinkKind, air: LinkKind) -> LinkKind:
        if isinstance(kind, InsideAir):
            return replace(kind, conduct_w_per_k=air.conduct_w_per_k)
        return kind

    kinds = zip(network.kinds, other.kinds, strict=True)
    return replace(network, kinds=tuple(shared(*pair) for pair in kinds))


def test_many_at_once_are_the_ones_alone():
    alone = variants()
    # So close that nothing is left of where the iterations came from.
    close = SolveOptions(node_tolerance=1e-11)
    answers = solve_steady(together(alone), options=close)
    assert answers.converged
    assert answers.rise.shape == (alone[0].size, len(alone))
    assert np.ptp(answers.rise, axis=1).max() > 20
    for index, network in enumerate(alone):
        expected = solve_steady(network, options=close)
        np.testing.assert_allclose(answers.rise[:, index], expected.rise[:, 0], rtol=0, atol=1e-7)
        assert answers.heat_w[index] == pytest.approx(expected.heat_w[0], rel=1e-8)


def test_many_at_once_take_the_steps_of_the_ones_alone():
    """From one start: the first guess of many is made with the links of the first."""
    alone = variants()
    start = np.full((len(alone[0].unknown), 1), 12.0)
    steps = solve_steady(together(alone), np.repeat(start, len(alone), axis=1)).steps
    assert steps.tolist() == [int(solve_steady(each, start).steps[0]) for each in alone]


def test_one_that_fails_does_not_disturb_the_others():
    alone = [one_node(2.0), one_node(1e5), one_node(3.0)]
    answers = solve_steady(together(alone))
    assert answers.outcome == (Outcome.CONVERGED, Outcome.TOO_HOT, Outcome.CONVERGED)
    assert not answers.converged
    assert answers.each_converged.tolist() == [True, False, True]
    assert answers.rise[-1, [0, 2]] == pytest.approx([2, 3], rel=1e-12)


def test_a_network_too_stiff_for_a_guess_is_answered_all_the_same():
    builder, ambient = started()
    one, other = builder.node("one"), builder.node("other")
    builder.conduct(other, ambient, 1.0, LABEL)
    builder.conduct(one, other, 1e17, LABEL)
    builder.heat(one, 1.0, POWER)
    assert isinstance(solve_steady(finished(builder)).outcome[0], Outcome)
