"""Flows through openings that share one body of air: published stack laws, and limits."""

import numpy as np
import pytest

from enclosure_check.physics.air import GAS_CONSTANT, GRAVITY, SEA_LEVEL_PRESSURE
from enclosure_check.physics.vent_flow import balanced_flows

NONE = (np.zeros((0, 1)), np.zeros((0, 1)))
OUTSIDE_K = 298.15
# For laws without viscosity: a linear loss too small to tell. [Pa s/kg]
LEAST = 1e-9


def density(temperature_k):
    return SEA_LEVEL_PRESSURE / (GAS_CONSTANT * temperature_k)


def stack(areas, discharge, height, inside_k, outside_k=OUTSIDE_K, *, level=True):
    """Two openings a height apart, each of a discharge coefficient, well-mixed inside."""
    inside, outside = density(inside_k), density(outside_k)
    factor = 1.0 / discharge**2 / (2.0 * np.array(areas)[:, None] ** 2)
    head = np.array([[0.0], [GRAVITY * height * (outside - inside)]])
    none = np.zeros((2, 0))
    return balanced_flows(
        head, factor / inside, factor / outside, np.full((2, 1), LEAST), none, *NONE
    )


def balanced(power_w, area_m2, height_m):
    """Rise of a well-mixed box that loses all its power by two equal openings, Cd 0.6 [K]."""
    low, high = 0.1, 300.0
    for _ in range(80):
        rise = 0.5 * (low + high)
        flow = stack((area_m2, area_m2), 0.6, height_m, OUTSIDE_K + rise).flow[1, 0]
        low, high = (low, rise) if flow * 1006.5 * rise > power_w else (rise, high)
    return rise


@pytest.mark.parametrize(
    ("power_w", "area_m2", "height_m", "rise_k"),
    [(20, 20e-4, 0.25, 30.19), (50, 50e-4, 0.40, 25.63), (100, 100e-4, 1.0, 18.68)],
)
def test_well_mixed_box_with_two_equal_vents(power_w, area_m2, height_m, rise_k):
    """Computed independently from Bernoulli and the densities of both streams, to four digits."""
    assert balanced(power_w, area_m2, height_m) == pytest.approx(rise_k, rel=1e-3)


@pytest.mark.parametrize(("upper_m2", "flow"), [(0.010, 3.078e-3), (0.020, 3.894e-3)])
def test_two_openings_in_series(upper_m2, flow):
    """BS 5925's opening law, Cd 0.61, effective area 1/A^2 = 1/A1^2 + 1/A2^2; 0.4 m and 20 K."""
    inside_k, outside_k = 318.15, 298.15
    found = stack((0.010, upper_m2), 0.61, 0.4, inside_k, outside_k).flow[1, 0]
    # The textbook law has one density for both; its flow is meant at their mean.
    mean = 0.5 * (density(inside_k) + density(outside_k))
    assert found / mean == pytest.approx(flow, rel=0.01)


def test_flow_grows_as_the_source_to_one_third():
    """Two openings and a well-mixed box: rise as power to 2/3, so flow as power to 1/3."""
    rises = [balanced(power, 20e-4, 0.25) for power in (1.0, 2.0)]
    # Densities take a little off the pure law.
    assert rises[1] / rises[0] == pytest.approx(2 ** (2 / 3), rel=0.01)


@pytest.mark.parametrize("pieces", [8, 16])
def test_one_tall_opening_exchanges_two_ways(pieces):
    """A doorway: each way ``Cd W / 3 sqrt(g' H^3)`` (Brown & Solvason 1962) for one density."""
    width, height, discharge, share = 0.1, 0.2, 0.6, 1e-4
    rho = density(OUTSIDE_K)
    middles = (np.arange(pieces) + 0.5) / pieces * height
    head = GRAVITY * rho * share * middles[:, None]
    area = width * height / pieces
    factor = np.full((pieces, 1), 1.0 / discharge**2 / (2.0 * area**2 * rho))
    found = balanced_flows(
        head, factor, factor, np.full((pieces, 1), LEAST), np.zeros((pieces, 0)), *NONE
    )
    exact = discharge * width / 3.0 * np.sqrt(GRAVITY * share * height**3)
    out = found.flow[found.flow > 0].sum() / rho
    assert abs(found.flow.sum()) < 1e-14
    # Middles of pieces over-estimate a root by a few percent of a piece.
    assert out == pytest.approx(exact, rel=0.03 * (8 / pieces) ** 1.5)
    assert out > exact


def test_nothing_drives_nothing_flows():
    head = np.full((3, 2), 0.7)
    ones = np.ones((3, 2))
    found = balanced_flows(head, ones, ones, ones, np.zeros((3, 0)), *[np.zeros((0, 2))] * 2)
    np.testing.assert_allclose(found.flow, 0.0, atol=1e-15)
    np.testing.assert_allclose(found.base_pressure, -0.7)


def test_one_piece_alone_lets_nothing_through():
    head = np.array([[0.4, -0.3]])
    ones = np.ones((1, 2))
    found = balanced_flows(head, ones, ones, ones, np.zeros((1, 0)), *[np.zeros((0, 2))] * 2)
    np.testing.assert_array_equal(found.flow, 0.0)
    np.testing.assert_allclose(found.base_pressure, [-0.4, 0.3])


def test_passage_between_adds_its_loss_to_that_of_the_openings():
    """Two openings and a passage in series: ``K`` over ``A^2`` add up."""
    each, between, drive = 3.0e5, 5.0e5, 0.05
    head = np.array([[0.0], [drive]])
    factor = np.full((2, 1), each)
    found = balanced_flows(
        head,
        factor,
        factor,
        np.full((2, 1), LEAST),
        np.array([[0.0], [1.0]]),
        np.array([[between]]),
        np.array([[0.0]]),
    )
    assert found.flow[1, 0] == pytest.approx(np.sqrt(drive / (2 * each + between)), rel=1e-6)
    assert found.passage[0, 0] == pytest.approx(found.flow[1, 0])


@pytest.mark.parametrize("seed", range(20))
def test_pressures_and_masses_balance_whatever_the_losses(seed):
    rng = np.random.default_rng(seed)
    pieces, cases, steps = int(rng.integers(2, 40)), 5, 7
    head = rng.normal(size=(pieces, cases)) * 10 ** rng.uniform(-6, 1)
    out = 10 ** rng.uniform(2, 9, (pieces, 1)) * np.ones((pieces, cases))
    into = out * rng.uniform(0.7, 1.0)
    linear = 10 ** rng.uniform(-4, 4, (pieces, 1)) * np.ones((pieces, cases))
    below = np.sort(rng.uniform(0, 1, (pieces, steps)), axis=1)
    square = 10 ** rng.uniform(0, 8, (steps, 1)) * np.ones((steps, cases))
    friction = 10 ** rng.uniform(-4, 3, (steps, 1)) * np.ones((steps, cases))
    found = balanced_flows(head, out, into, linear, below, square, friction)
    m = found.flow
    through = below.T @ m
    lost = np.where(m > 0, out, into) * m * np.abs(m) + linear * m
    lost = lost + below @ (square * through * np.abs(through) + friction * through)
    np.testing.assert_allclose(
        lost - head, np.broadcast_to(found.base_pressure, head.shape), atol=1e-10 * np.ptp(head)
    )
    assert (np.abs(m.sum(axis=0)) <= 1e-12 * np.abs(m).sum(axis=0)).all()


def test_turned_upside_down_it_flows_the_other_way():
    head = np.array([[0.0], [0.02], [0.06]])
    ones = np.full((3, 1), 2e5)
    linear = np.full((3, 1), 1.0)
    none = np.zeros((3, 0))
    up = balanced_flows(head, ones, ones, linear, none, *NONE).flow
    down = balanced_flows(-head, ones, ones, linear, none, *NONE).flow
    np.testing.assert_allclose(up, -down, rtol=1e-9)


def test_mass_is_kept_to_rounding_where_losses_differ_by_eleven_powers_of_ten():
    """Two leaks of eight pieces each beside one wide opening: else steps seem to lead uphill."""
    leaks = (np.linspace(0.107, 0.111, 8), np.linspace(0.085, 0.089, 8))
    head = np.concatenate((*leaks, [0.117]))[:, None]
    quadratic = np.repeat([1.4e10, 5e13, 400.0], [8, 8, 1])[:, None]
    linear = np.repeat([1.7e6, 6.7e7, 1.0], [8, 8, 1])[:, None]
    below = np.stack((np.repeat([1.0, 0.3, 1.0], [8, 8, 1]), np.repeat([0.4, 0, 1], [8, 8, 1])), 1)
    passages = (np.array([[50.0], [0.0]]), np.full((2, 1), 1e-5))
    found = balanced_flows(head, quadratic, 0.8 * quadratic, linear, below, *passages)
    assert abs(found.flow.sum()) <= 1e-14 * np.abs(found.flow).max()
    assert found.steps <= 4
