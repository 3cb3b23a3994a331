"""The linear systems: dense and bordered sparse factorisations give the same answers."""

import numpy as np
import pytest

from enclosure_check.description.load import load_document
from enclosure_check.network.build import build_network
from enclosure_check.network.grid import GridOptions
from enclosure_check.network.linear import (
    DENSE_UP_TO,
    BorderedFactor,
    DenseFactor,
    Entries,
    factorise,
)
from enclosure_check.solve.steady import solve_steady

SAMPLE = "sample_boards/wall_sensor_hub.yaml"


@pytest.fixture(scope="module")
def network():
    case = load_document(SAMPLE).cases()[0]
    return build_network(case, GridOptions(board_cells=1000))


@pytest.fixture(scope="module")
def system(network):
    rise = network.full_rise(np.linspace(5.0, 30.0, len(network.unknown))[:, None])
    return network.entries, network.derivatives(rise)[:, 0]


@pytest.mark.parametrize("shift", [0.0, 0.3])
def test_bordered_is_dense(system, shift):
    entries, values = system
    right = np.random.default_rng(3).normal(size=(entries.size, 3))
    plain = DenseFactor(entries.dense(values), shift)
    bordered = BorderedFactor(*system, shift)
    assert 10 < len(bordered._border) < 200
    for solve in ("solve", "solve_transposed"):
        expected = getattr(plain, solve)(right)
        found = getattr(bordered, solve)(right)
        np.testing.assert_allclose(found, expected, rtol=1e-7, atol=1e-9 * np.abs(expected).max())


def test_large_systems_are_bordered(system):
    assert system[0].size > DENSE_UP_TO
    assert isinstance(factorise(*system), BorderedFactor)
    small = Entries(np.array([0, 1, 0, -1]), np.array([0, 1, 1, 0]), 2)
    factor = factorise(small, np.array([2.0, 4.0, 1.0, 9.0]))
    assert isinstance(factor, DenseFactor)
    # What lies outside is left out.
    np.testing.assert_array_equal(factor.matrix, [[2.0, 1.0], [0.0, 4.0]])


def test_singular_matrices_are_refused():
    row = np.arange(3)
    singular = BorderedFactor(Entries(row, row, 3), np.array([1.0, 0.0, 1.0]), 0.0)
    with pytest.raises(np.linalg.LinAlgError):
        singular.solve(np.ones((3, 1)))


def test_a_large_network_has_the_answer_of_a_small_one(network):
    """Both paths find the same steady state of the same network."""
    assert len(network.unknown) > DENSE_UP_TO
    solution = solve_steady(network)
    assert solution.converged
    rise = solution.rise
    matrix = network.entries.dense(network.derivatives(rise)[:, 0])
    left = network.imbalance(rise)[network.unknown]
    # A dense Newton step from there moves nothing any more.
    step = np.linalg.solve(matrix, -left)
    assert np.abs(step).max() < 1e-5
