"""Air through openings: derivatives, what is carried where, and the limits of it in whole boxes."""

import math
import random
from dataclasses import replace

import numpy as np
import pytest
from support.cases import (
    COARSE,
    assert_balanced,
    board,
    box,
    case_of,
    network_of,
    patched,
    solved,
    solved_as,
)
from support.random_openings import random_vented_document

from enclosure_check.findings.openings import openings_finding
from enclosure_check.network.build import build_network
from enclosure_check.network.films import DIFFERENCE_K
from enclosure_check.network.openings import PIECES
from enclosure_check.network.passages import Obstacle, passage_losses
from enclosure_check.network.vents import Vents
from enclosure_check.physics.air import GRAVITY, air
from enclosure_check.solve.steady import solve_steady

REFERENCE_K = np.array([298.15])
LOW = {"kind": "hole", "width_mm": 60, "height_mm": 8, "at_mm": [100, 10]}
HIGH = {**LOW, "at_mm": [100, 140]}


def vented(low=None, high=None, **changes):
    """A box with a warm board, a slot low in the front and one high in the back."""
    return patched(
        box(
            boards={"main": board(other_power_w=8.0)},
            walls={
                "front": {"openings": {"in": patched(LOW, low or {})}},
                "back": {"openings": {"out": patched(HIGH, high or {})}},
            },
        ),
        changes,
    )


def vents_of(network) -> Vents:
    return next(kind for kind in network.kinds if isinstance(kind, Vents))


def layers(network, seed=0, variants=1):
    rng = np.random.default_rng(seed)
    rise = rng.uniform(-5, 30, (network.size, variants))
    air_nodes = network.places.air_nodes
    rise[air_nodes] = np.sort(rng.uniform(1, 25, (len(air_nodes), variants)), axis=0)
    return rise


def rises(document, options=COARSE):
    answer = solved(document, options)
    return answer.solution.rise[:, 0], answer


# One by one ------------------------------------------------------------------------------------


@pytest.mark.parametrize("seed", range(3))
def test_mass_and_heat_are_kept_at_every_air_node(seed):
    """What comes in by openings and from below leaves upwards, out, or with a stream."""
    network = network_of(vented(low={"at_mm": [100, 110]}), COARSE)
    kind = vents_of(network)
    state = kind.state(layers(network, seed)[kind.air], REFERENCE_K)
    assert state.leaving.sum() == pytest.approx(state.entering.sum(), rel=1e-9)
    # Everything at one temperature over the outside: the same heat leaves as mass does.
    rise = np.zeros((network.size, 1))
    rise[kind.air] = 10.0
    heat = kind.evaluate(rise, REFERENCE_K)[:, 0]
    even = kind.state(rise[kind.air], REFERENCE_K)
    out = heat[len(kind.air) - 1 :].sum()
    assert out == pytest.approx(10.0 * float(even.heat_capacity[0] * even.leaving.sum()), rel=1e-9)


def test_air_that_comes_in_high_falls_and_stirs_what_it_falls_through():
    low = vents_of(network_of(vented(), COARSE))
    high = vents_of(network_of(vented(low={"at_mm": [100, 120]}), COARSE))
    even = np.linspace(12, 12.5, len(low.air))[:, None]
    still, stirred = low.state(even, REFERENCE_K), high.state(even, REFERENCE_K)
    # By a low inlet nothing but the draught itself rises; by a high one far more than it.
    middle = len(low.air) // 2
    assert still.column[middle, 0] == pytest.approx(still.leaving.sum(), rel=1e-6)
    assert stirred.column[1, 0] > 1.5 * stirred.leaving.sum()
    # Taken down is warmer air than that below: heat is carried downwards by the stream.
    assert stirred.stream_heat[1, 0] < 0


def test_inflow_stays_where_it_has_become_as_warm_as_the_air():
    """In strong layers it has taken up so much warm air on its way that it never sees the floor."""
    high = vents_of(network_of(vented(low={"at_mm": [100, 120]}), COARSE))
    layers_k = np.linspace(2, 20, len(high.air))[:, None]
    state = high.state(layers_k, REFERENCE_K)
    assert state.column[3, 0] > 1.5 * state.leaving.sum()
    assert abs(state.column[0, 0]) < 1e-6 * state.leaving.sum()
    assert abs(state.stream_heat[0, 0]) < 1e-6 * abs(state.stream_heat[3, 0])


def test_warm_air_rises_into_a_cold_box_the_same_way_upside_down():
    """Mirror the box and the sign of all differences: flows mirror, within what density changes."""
    up = vents_of(network_of(vented(low={"at_mm": [100, 120]}, high={"at_mm": [100, 140]}), COARSE))
    down = vents_of(network_of(vented(low={"at_mm": [100, 10]}, high={"at_mm": [100, 30]}), COARSE))
    layer = np.linspace(0.02, 0.2, len(up.air))[:, None]
    warm = up.state(layer, REFERENCE_K)
    cold = down.state(-layer[::-1], REFERENCE_K)
    np.testing.assert_allclose(warm.leaving.sum(), cold.leaving.sum(), rtol=2e-3)
    np.testing.assert_allclose(warm.column, -cold.column[::-1], atol=2e-3 * warm.column.max())


def test_pressure_inside_and_neutral_level_between_two_equal_openings():
    """Even air inside and two like openings: half-way between them, but for the densities."""
    network = network_of(vented(), COARSE)
    kind = vents_of(network)
    state = kind.state(np.full((len(kind.air), 1), 1.0), REFERENCE_K)
    assert kind.neutral_height(state) == pytest.approx(0.075, abs=0.001)


def test_one_opening_alone_passes_both_ways_when_tall_and_none_when_flat():
    document = vented(high={"blocked_pct": 100}, low={"height_mm": 80, "at_mm": [100, 60]})
    kind = vents_of(network_of(document, COARSE))
    assert len(kind.names) == 1
    assert len(kind.opening) == PIECES
    layer = np.full((len(kind.air), 1), 15.0)
    state = kind.state(layer, REFERENCE_K)
    out, into = state.leaving.sum(), state.entering.sum()
    assert out == pytest.approx(into, rel=1e-9)
    # (Cd W / 3) sqrt(g' H^3), within the pieces and the densities of the two streams.
    rho = air(REFERENCE_K, kind.pressure_pa).density[0]
    inside = air(REFERENCE_K + 15.0, kind.pressure_pa).density[0]
    loss = float(kind.loss[0, 0])
    drive = GRAVITY * (rho - inside) / (0.5 * (rho + inside))
    exact = 0.06 / 3 / math.sqrt(loss) * math.sqrt(drive * 0.08**3) * 0.5 * (rho + inside)
    assert out == pytest.approx(exact, rel=0.05)


# In whole boxes --------------------------------------------------------------------------------


def test_closed_openings_leave_the_sealed_box():
    sealed, _ = rises(patched(vented(), {"walls": None}))
    closed, answer = rises(vented(low={"blocked_pct": 100}, high={"blocked_pct": 100}))
    np.testing.assert_allclose(closed, sealed, atol=1e-9)
    assert openings_finding(answer).each == ()
    assert openings_finding(answer).flow_g_per_s == 0.0


def test_openings_cool_and_the_more_open_the_more():
    sealed, _ = rises(patched(vented(), {"walls": None}))
    means = [sealed.mean()]
    for height in (1, 3, 9):
        opened, answer = rises(vented(low={"height_mm": height}, high={"height_mm": height}))
        means.append(opened.mean())
        assert_balanced(answer)
    assert (np.diff(means) < 0).all()


def test_openings_without_end_bring_the_air_outside_in():
    """The area of the pieces multiplied, whatever wall there is to hold them."""
    whole = {"kind": "hole", "width_mm": 198, "height_mm": 148, "at_mm": [100, 75]}
    document = vented()
    document["walls"] = {name: {"openings": {"all": whole}} for name in ("front", "back")}
    network = network_of(document, COARSE)
    hottest = []
    for more in (1.0, 1e1, 1e2, 1e3):
        kinds = tuple(
            replace(kind, area=more * kind.area) if isinstance(kind, Vents) else kind
            for kind in network.kinds
        )
        solution = solve_steady(replace(network, kinds=kinds))
        assert solution.converged
        hottest.append(float(solution.rise[network.places.air_nodes].max()))
    # A draught of its own making, held back by viscosity, goes as the root of the area at least.
    falls = np.array(hottest[1:]) / hottest[:-1]
    assert (falls < 0.6).all()
    assert hottest[-1] < 0.5


def test_what_openings_carry_closes_the_balance():
    _, answer = rises(vented())
    found = openings_finding(answer)
    by_name = {row.name: row for row in found.each}
    assert by_name["in"].inflow_g_per_s == pytest.approx(found.flow_g_per_s, rel=1e-6)
    assert by_name["out"].outflow_g_per_s == pytest.approx(found.flow_g_per_s, rel=1e-6)
    assert by_name["in"].air_out_c is None
    out = by_name["out"]
    assert out.air_out_c is not None
    carried = found.flow_g_per_s * 1e-3 * 1007 * (out.air_out_c - 25.0)
    assert out.heat_w == pytest.approx(carried, rel=2e-3)
    assert 0 < out.heat_w < 8.0
    assert found.neutral_height_mm is not None
    assert 10 < found.neutral_height_mm < 140
    # Loss times velocity head is the pressure at the opening.
    rho = float(air(273.15 + out.air_out_c, 101325.0).density)
    assert out.velocity_m_per_s == pytest.approx(
        found.flow_g_per_s * 1e-3 / rho / (out.free_area_mm2 * 1e-6), rel=1e-3
    )


def test_stirred_air_with_openings_is_the_stack_formula():
    """One temperature inside: flow and rise as the formula of two openings gives them by itself."""
    document = vented(stirred=True)
    rise, answer = rises(document)
    network = answer.network
    kind = vents_of(network)
    profile = rise[kind.air]
    assert np.ptp(profile) < 0.01 * profile.mean()
    inside = air(REFERENCE_K + profile.mean(), kind.pressure_pa).density[0]
    outside = air(REFERENCE_K, kind.pressure_pa).density[0]
    found = openings_finding(answer)
    area = 480e-6
    loss = {row.name: row.loss_coefficient for row in found.each}
    head = GRAVITY * (outside - inside) * 0.130
    flow = math.sqrt(head / ((loss["in"] / outside + loss["out"] / inside) / (2 * area**2)))
    assert found.flow_g_per_s * 1e-3 == pytest.approx(flow, rel=0.01)


def test_stirred_sealed_box_has_one_air():
    rise, answer = rises(patched(vented(stirred=True), {"walls": None}))
    profile = rise[answer.network.places.air_nodes]
    assert np.ptp(profile) < 2e-3 * profile.mean()


def test_no_heat_no_flow():
    document = vented()
    document["boards"]["main"]["other_power_w"] = 0.0
    rise, answer = rises(document)
    assert np.abs(rise).max() < 1e-6
    assert openings_finding(answer).flow_g_per_s < 1e-3


@pytest.mark.parametrize("up", [(0, 0, 1), (0, 0, -1), (1, 0, 0), (0.5, -0.3, 0.8)])
def test_like_openings_at_both_ends_give_the_same_answer_upside_down(up):
    """A box that is the same upside down has to be as warm that way."""
    document = vented()
    openings = {"low": LOW, "high": HIGH}
    document["walls"] = {name: {"openings": openings} for name in ("front", "back")}
    found = []
    for sign in (1.0, -1.0):
        case = case_of(document)
        length = float(np.linalg.norm(up))
        turned = replace(case, up=tuple(sign * x / length for x in up))
        network = build_network(turned, COARSE)
        answer = solved_as(turned, network, solve_steady(network))
        assert answer.solution.converged
        flow = openings_finding(answer).flow_g_per_s
        found.append((answer.at(network.places.boards["main"].mean), flow))
    np.testing.assert_allclose(found[0], found[1], rtol=1e-6)


# Boards in the way -------------------------------------------------------------------------------

INSIDE = (0.2, 0.1, 0.3)
UP = (0.0, 0.0, 1.0)


def test_nothing_in_the_way_costs_nothing():
    quadratic, friction = passage_losses([], INSIDE, UP, 7)
    assert not quadratic.any()
    assert not friction.any()


def test_board_across_the_way_is_a_plate_with_a_hole():
    lying = Obstacle(2, (0.0, 0.0, 0.149), (0.2, 0.05, 0.151))
    quadratic, friction = passage_losses([lying], INSIDE, UP, 7)
    # Idelchik's thin plate with half its area free: 4.37 on the velocity in front of it.
    assert quadratic.sum() == pytest.approx(4.37 * 0.5**2 / (2 * 0.01**2), rel=0.04)
    assert np.count_nonzero(quadratic) == 1
    assert not friction.any()


def test_boards_along_the_way_make_channels():
    """Boards right across the depth at even distances: ``12 nu L / (n w d^3)`` in all."""
    edges = np.linspace(0, 0.2, 5)[1:-1]
    upright = [Obstacle(0, (x, 0.0, 0.0), (x, 0.1, 0.3)) for x in edges]
    _, friction = passage_losses(upright, INSIDE, UP, 7)
    assert friction.sum() == pytest.approx(12 * 0.3 / (4 * 0.1 * 0.05**3), rel=1e-9)


def test_upside_down_the_way_is_the_other_way_round():
    lying = Obstacle(2, (0.0, 0.0, 0.039), (0.2, 0.05, 0.041))
    up, _ = passage_losses([lying], INSIDE, UP, 7)
    down, _ = passage_losses([lying], INSIDE, (0.0, 0.0, -1.0), 7)
    np.testing.assert_array_equal(up, down[::-1])


def test_a_shelf_nearly_from_wall_to_wall_throttles_the_draught():
    shelf = {
        "parallel_to": "bottom",
        "length_mm": 199,
        "width_mm": 99.5,
        "thickness_mm": 1.6,
        "copper": {"one": {"thickness_um": 35, "coverage_pct": 50}},
        "from_walls_mm": {"bottom": 70},
    }
    document = vented()
    document["boards"]["main"] = {
        **document["boards"]["main"],
        "width_mm": 40,
        "from_walls_mm": {"bottom": 20},
    }
    _, free = rises(document)
    document["boards"]["shelf"] = shelf
    _, throttled = rises(document)
    assert openings_finding(throttled).flow_g_per_s < 0.7 * openings_finding(free).flow_g_per_s


# Derivatives -------------------------------------------------------------------------------------

# Openings on several walls, of several kinds, and tall ones among them, through which air passes.
VENTED_SEEDS = (0, 6, 15, 20)
VENTED = [network_of(random_vented_document(random.Random(seed)), COARSE) for seed in VENTED_SEEDS]
each_vented = pytest.mark.parametrize("network", VENTED, ids=[str(seed) for seed in VENTED_SEEDS])


def five_point(function, step):
    near, far = function(step) - function(-step), function(2 * step) - function(-2 * step)
    return (8 * near - far) / (12 * step)


def test_what_is_differenced_lets_air_through():
    for network in VENTED:
        kind = vents_of(network)
        state = kind.state(layers(network)[kind.air], REFERENCE_K)
        assert state.leaving.sum() > 0
    assert max(len(vents_of(network).names) for network in VENTED) > 2


@each_vented
@pytest.mark.parametrize("seed", [1, 2])
def test_derivative_by_every_air_temperature(network, seed):
    kind, rise = vents_of(network), layers(network, seed)
    found = kind.slopes(rise, REFERENCE_K).reshape(len(kind.a), len(kind.air))
    expected = np.zeros_like(found)
    for column, node in enumerate(kind.air):

        def heat(step, node=node):
            moved = rise.copy()
            moved[node] += step
            return kind.evaluate(moved, REFERENCE_K)[:, 0]

        expected[:, column] = five_point(heat, 2e-3)
    # One-sided over 1e-4 K of shares rounded over 0.2 K, and rounding of the heat over that.
    rounding = 1e-14 * np.abs(kind.evaluate(rise, REFERENCE_K)).max() / DIFFERENCE_K
    np.testing.assert_allclose(
        found, expected, rtol=5e-4, atol=5e-5 * np.abs(expected).max() + rounding
    )


@each_vented
def test_variants_together_are_the_variants_alone(network):
    kind, rise = vents_of(network), layers(network, 5, variants=3)
    reference = np.array([253.15, 298.15, 340.15])
    together = kind.evaluate(rise, reference)
    slopes = kind.slopes(rise, reference)
    scale = np.abs(together).max()
    for v in range(3):
        alone = kind.evaluate(rise[:, v : v + 1], reference[v : v + 1])
        np.testing.assert_allclose(together[:, v : v + 1], alone, rtol=1e-9, atol=1e-12 * scale)
        one = kind.slopes(rise[:, v : v + 1], reference[v : v + 1])
        np.testing.assert_allclose(
            slopes[:, v : v + 1], one, rtol=1e-6, atol=1e-8 * np.abs(slopes).max()
        )


@pytest.mark.parametrize("seed", range(12))
def test_random_vented_boxes_balance(seed):
    """Every kind of opening, any attitude: mass inside at every solve, heat here."""
    network = network_of(random_vented_document(random.Random(100 + seed)), COARSE)
    case_answer = solve_steady(network)
    assert case_answer.converged
    if any(isinstance(kind, Vents) for kind in network.kinds):
        kind = vents_of(network)
        state = kind.state(case_answer.rise[kind.air], network.reference_k)
        assert state.leaving.sum() == pytest.approx(state.entering.sum(), rel=1e-9, abs=1e-15)


# What does without a way by stirred air, which has eight stages more.
FEW_STEPS = 18


def test_boards_one_as_warm_as_the_other_is_cold():
    """Faces of a gap whose mean is that of the air: once a corner that no step could pass.

    With the power held at what it is in the cold, this box was come to by way of stirred air alone,
    in 112 steps.
    """
    solution = solve_steady(network_of(random_vented_document(random.Random(3202))))
    assert solution.converged
    assert int(solution.steps[0]) <= FEW_STEPS


def test_a_level_board_as_warm_as_its_air():
    """Its shelter, and with it what goes straight across its gaps, once jumped within 0.01 K."""
    network = network_of(random_vented_document(random.Random(284)), COARSE)
    solution = solve_steady(network)
    assert solution.converged
    assert int(solution.steps[0]) <= FEW_STEPS


def test_a_parameter_that_does_not_exist():
    with pytest.raises(KeyError, match="colour"):
        vents_of(VENTED[0]).with_parameter("colour", np.ones((1, 1)))
