"""Assembly of the network: balances, Jacobian, sources and the guess."""

import random
from dataclasses import replace

import numpy as np
import pytest
from support.cases import COARSE, network_of, solved
from support.random_documents import random_document

from enclosure_check.network.inside_air import InsideAir
from enclosure_check.network.links import LinkKind
from enclosure_check.network.network import Network, Sources
from enclosure_check.network.spots import FELT
from enclosure_check.solve.steady import solve_steady

SEEDS = (0, 5, 8, 29)


@pytest.fixture(params=SEEDS, ids=lambda seed: f"seed {seed}")
def network(request) -> Network:
    return network_of(random_document(random.Random(request.param)), COARSE)


def growing(network: Network) -> Network:
    """The same network with every power growing, some in a line and some exponentially."""
    count = len(network.sources.node)
    line = (np.arange(count) % 2 == 0)[:, None]
    sources = replace(
        network.sources,
        power=np.linspace(0.5, 2, count)[:, None],
        slope=np.where(line, 0.004, 0.0),
        doublings=np.where(line, 0.0, 1 / 25),
    )
    return replace(network, sources=sources)


def state(network: Network, variants: int = 1) -> np.ndarray:
    rng = np.random.default_rng(7)
    rise = rng.uniform(-20, 60, (network.size, variants))
    return np.where(network.fixed[:, None], network.fixed_rise, rise)


def variant(network: Network, index: int) -> Network:
    """One variant of `copies`."""
    return replace(
        network,
        reference_k=network.reference_k[index : index + 1],
        fixed_rise=network.fixed_rise[:, index : index + 1],
    )


def copies(network: Network, variants: int) -> Network:
    return replace(
        network,
        reference_k=np.repeat(network.reference_k, variants),
        fixed_rise=np.repeat(network.fixed_rise, variants, axis=1),
    )


def test_imbalance_is_the_sum_over_links_and_sources(network):
    rise = state(network)
    expected = np.zeros(network.size)
    for kind in network.kinds:
        heat = kind.evaluate(rise, network.reference_k)[:, 0]
        for link, watts in enumerate(heat):
            expected[kind.a[link]] += watts
            expected[kind.b[link]] -= watts
    sources = network.sources
    for row, watts in enumerate(sources.heat(rise[sources.node], network.reference_k)[:, 0]):
        expected[sources.node[row]] -= watts
    found = network.imbalance(rise)[:, 0]
    # Terms of opposite sign and up to the largest conductance times a kelvin cancel.
    np.testing.assert_allclose(
        found, expected, rtol=0, atol=1e-12 * np.abs(network.heat(rise)).max()
    )


def test_heat_is_neither_made_nor_lost_between_nodes(network):
    rise = state(network)
    sources = network.sources
    put_in = sources.heat(rise[sources.node], network.reference_k).sum()
    largest = np.abs(network.heat(rise)).max()
    assert abs(network.imbalance(rise).sum() + put_in) < 1e-11 * largest


@pytest.mark.parametrize("variants", [1, 2])
def test_jacobian_against_differences_of_the_imbalance(network, variants):
    network = copies(growing(network), variants)
    rise = state(network, variants)
    found = network.jacobian(rise)
    unknown = network.unknown
    assert found.shape == (variants, len(unknown), len(unknown))
    step = 1e-3
    for index in range(variants):
        one = variant(network, index)
        base = rise[:, index : index + 1]
        for part in np.array_split(np.arange(len(unknown)), 4):
            columns = np.arange(len(part))
            moved = []
            for shift in (2, 1, -1, -2):
                many = np.repeat(base, len(part), axis=1)
                many[unknown[part], columns] += shift * step
                moved.append(copies(one, len(part)).imbalance(many)[unknown])
            two, near, less, least = moved
            expected = (8 * (near - less) - (two - least)) / (12 * step)
            scale = np.abs(expected).max(axis=0) + 1e-9
            # Laws are differenced one-sidedly over 1e-4 K, the sharpest of them 100 times as wide: see
            # the tests of the links, which reckon with their curvature.
            assert (np.abs(found[index][:, part] - expected) / scale).max() < 2e-3


def test_several_variants_are_assembled_as_one_by_one(network):
    together = copies(network, 3)
    rise = state(together, 3)
    heat, balance = together.heat(rise), together.imbalance(rise)
    for index in range(3):
        one = rise[:, index : index + 1]
        alone = network.heat(one)[:, 0]
        largest = np.abs(alone).max()
        np.testing.assert_allclose(heat[:, index], alone, rtol=1e-12, atol=1e-15 * largest)
        np.testing.assert_allclose(
            balance[:, index],
            network.imbalance(one)[:, 0],
            rtol=0,
            atol=1e-12 * np.abs(heat).max(),
        )


def test_guess_follows_the_power_in_a_line(network):
    sources = replace(network.sources, power=np.ones_like(network.sources.power))
    still = replace(network, sources=sources, fixed_rise=0 * network.fixed_rise)
    doubled = replace(still, sources=replace(sources, power=2 * sources.power))
    once = still.first_guess()
    assert np.abs(once).max() > 0
    np.testing.assert_allclose(doubled.first_guess(), 2 * once, rtol=1e-9, atol=1e-9)


def test_guess_without_any_heat_is_no_rise(network):
    sources = replace(network.sources, power=0 * network.sources.power)
    still = replace(network, sources=sources, fixed_rise=0 * network.fixed_rise)
    assert np.abs(still.first_guess()).max() == 0


def test_outgoing_links_end_at_given_temperatures(network):
    a = np.concatenate([kind.a for kind in network.kinds])
    b = np.concatenate([kind.b for kind in network.kinds])
    expected = {
        index
        for index in range(len(a))
        if (network.fixed[a[index]] or network.fixed[b[index]]) and b[index] != network.nowhere
    }
    assert set(network.outgoing.tolist()) == expected
    assert len(network.link_label) == len(a)
    # What ends nowhere keeps a mean; it is there, and nothing else ends at it.
    roles = {network.labels[row].role for row in network.link_label[b == network.nowhere]}
    # Or what contacts feel of each other, beside the mean under them.
    assert {role for role in roles if not role.endswith(FELT)} == {"mean"}


# Sources ------------------------------------------------------------------------------------


def source(slope=0.0, doubling=None, stated_at_k=298.15, power=2.0) -> Sources:
    return Sources(
        node=np.array([0]),
        label=np.zeros(1, dtype=np.intp),
        power=np.array([[power]]),
        stated_at_k=np.array([[stated_at_k]]),
        slope=np.array([[slope]]),
        doublings=np.array([[0.0 if doubling is None else 1 / doubling]]),
    )


REFERENCE = np.array([293.15])


@pytest.mark.parametrize(
    ("row", "rise", "expected"),
    [
        # Stated at 25 C, the reference being 20 C: 105 C is 85 K above it.
        (source(), 85, 2),
        (source(slope=0.0039), 85, 2 * (1 + 0.0039 * 80)),
        (source(slope=-0.005), 85, 2 * (1 - 0.005 * 80)),
        (source(doubling=20), 85, 2 * 2**4),
        (source(doubling=20), 5, 2),
        (source(doubling=20), -35, 2 * 2**-2),
        # A line does not go below nothing.
        (source(slope=-0.02), 85, 0),
        (source(slope=0.02), -60, 0),
    ],
)
def test_power_by_temperature(row, rise, expected):
    found = row.heat(np.array([[float(rise)]]), REFERENCE)
    assert found == pytest.approx(np.array([[expected]]), rel=1e-14)


@pytest.mark.parametrize("rise", [-30.0, 5.0, 80.0, 260.0])
@pytest.mark.parametrize(
    "row",
    [
        source(),
        source(slope=0.004),
        source(slope=-0.005),
        source(doubling=12),
        source(slope=0.01, doubling=40),
    ],
    ids=["constant", "rising line", "falling line", "exponential", "both"],
)
def test_slope_of_power(row, rise):
    step = 0.01
    low, high = (row.heat(np.array([[rise + shift]]), REFERENCE) for shift in (-step, step))
    found = row.heat_by_rise(np.array([[rise]]), REFERENCE)
    # Second-order differences of a power that doubles over 12 K at most.
    assert found == pytest.approx((high - low) / (2 * step), rel=1e-6, abs=1e-12)


def test_growing_power_is_held_and_the_rest_is_not():
    rows = Sources(
        node=np.arange(4),
        label=np.zeros(4, dtype=np.intp),
        power=np.ones((4, 1)),
        stated_at_k=np.full((4, 1), 293.15),
        slope=np.array([[0.0], [0.01], [-0.01], [0.0]]),
        doublings=np.array([[0.0], [0.0], [0.0], [0.1]]),
    )
    assert rows.growing[:, 0].tolist() == [False, True, False, True]
    held = rows.held(np.full((4, 1), 10.0), REFERENCE)
    later = np.full((4, 1), 20.0)
    assert held.heat(later, REFERENCE)[:, 0] == pytest.approx([1, 1.1, 0.8, 2])
    assert rows.heat(later, REFERENCE)[:, 0] == pytest.approx([1, 1.2, 0.8, 4])


# Means --------------------------------------------------------------------------------------


def test_means_are_the_means_of_their_cells():
    answer = solved(random_document(random.Random(8)), COARSE)
    places, rise = answer.network.places, answer.solution.rise[:, 0]
    plates = [
        plate
        for group in (places.wall_outside, places.wall_inside, places.boards)
        for plate in group.values()
    ]
    assert np.ptp(rise[places.boards["board 0"].cells]) > 0.01
    for plate in plates:
        assert rise[plate.mean] == pytest.approx(rise[plate.cells].mean(), abs=1e-6)
    heights = places.air_heights
    mean = np.trapezoid(rise[places.air_nodes], heights) / (heights[-1] - heights[0])
    assert rise[places.air] == pytest.approx(mean, abs=1e-6)
    for nodes in places.parts.values():
        span = rise[places.air_nodes]
        assert span.min() - 1e-6 <= rise[nodes.air] <= span.max() + 1e-6


# Places -------------------------------------------------------------------------------------


def relabelled(kind: LinkKind, place: np.ndarray) -> LinkKind:
    """A kind with all its nodes renumbered."""
    moved = {
        name: place[getattr(kind, name)]
        for name in ("a", "b", "x", "y", "c", "d", "cell", "cell_a", "cell_b", "air", "nodes")
        if hasattr(kind, name) and not (isinstance(kind, InsideAir) and name in "ab")
    }
    if isinstance(kind, InsideAir):
        moved["surfaces"] = replace(kind.surfaces, node=place[kind.surfaces.node])
    return replace(kind, **moved)


def test_renumbering_the_nodes_leaves_the_answer():
    """Nodes in another order: the same temperatures by label."""
    network = network_of(random_document(random.Random(8)), COARSE)
    order = np.random.default_rng(3).permutation(network.size)
    place = np.argsort(order)
    sources = replace(network.sources, node=place[network.sources.node])
    shuffled = replace(
        network,
        node_labels=tuple(network.node_labels[index] for index in order),
        fixed=network.fixed[order],
        fixed_rise=network.fixed_rise[order],
        nowhere=int(place[network.nowhere]),
        kinds=tuple(relabelled(kind, place) for kind in network.kinds),
        sources=sources,
        readings=replace(
            network.readings,
            node=place[network.readings.node],
            of=place[network.readings.of],
        ),
    )
    one, other = solve_steady(network), solve_steady(shuffled)
    assert one.converged
    assert other.converged
    # Both to 1e-9 of the heat; far below a thousandth of a kelvin.
    np.testing.assert_allclose(other.rise[place], one.rise, atol=1e-6, rtol=0)


def test_every_surface_is_in_its_place():
    answer = solved(random_document(random.Random(8)), COARSE)
    network, places = answer.network, answer.network.places
    labels = network.node_labels
    assert labels[places.ambient] == "surrounding air"
    assert labels[places.air] == "inside air, mean"
    assert [labels[node] for node in places.air_nodes] == [
        f"inside air, cell {index + 1}" for index in range(len(places.air_nodes))
    ]
    up, inside = np.array(answer.case.up), np.array(answer.case.inside_mm) / 1000
    assert places.air_heights[0] == 0
    assert places.air_heights[-1] == pytest.approx(np.abs(up) @ inside, rel=1e-12)
    for name in answer.case.walls:
        outer, inner = places.wall_outside[name], places.wall_inside[name]
        assert labels[outer.mean] == f"{name} wall outside, mean"
        # One layer does for a wall that conducts well.
        face = "outside" if inner is outer else "inside"
        assert labels[inner.mean] == f"{name} wall {face}, mean"
    for name, plate in places.boards.items():
        assert labels[plate.mean] == f"board {name}, mean"
        assert labels[plate.cells[0, 0]] == f"board {name}, cell 1"
    assert set(places.parts) == set(answer.case.parts)
    assert set(places.boards) == set(answer.case.boards)
    assert len(set(labels)) == len(labels)
