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
    dense,
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
    return (*network._entries, network.derivatives(rise)[:, 0], len(network.unknown))


@pytest.mark.parametrize("shift", [0.0, 0.3])
def test_bordered_is_dense(system, shift):
    right = np.random.default_rng(3).normal(size=(system[-1], 3))
    plain = DenseFactor(dense(*system), shift)
    bordered = BorderedFactor(*system, shift)
    assert 10 < len(bordered._border) < 200
    for solve in ("solve", "solve_transposed"):
        expected = getattr(plain, solve)(right)
        found = getattr(bordered, solve)(right)
        np.testing.assert_allclose(found, expected, rtol=1e-7, atol=1e-9 * np.abs(expected).max())


def test_large_systems_are_bordered(system):
    assert system[-1] <= DENSE_UP_TO or isinstance(factorise(*system), BorderedFactor)
    small = np.array([0, 1, 0, -1]), np.array([0, 1, 1, 0]), np.array([2.0, 4.0, 1.0, 9.0])
    factor = factorise(*small, 2)
    assert isinstance(factor, DenseFactor)
    # What lies outside is left out.
    np.testing.assert_array_equal(factor.matrix, [[2.0, 1.0], [0.0, 4.0]])


def test_singular_matrices_are_refused():
    row = np.arange(3)
    singular = BorderedFactor(row, row, np.array([1.0, 0.0, 1.0]), 3, 0.0)
    with pytest.raises(np.linalg.LinAlgError):
        singular.solve(np.ones((3, 1)))


def test_a_large_network_has_the_answer_of_a_small_one(network):
    """Both paths find the same steady state of the same network."""
    assert len(network.unknown) > DENSE_UP_TO
    solution = solve_steady(network)
    assert solution.converged
    rise = solution.rise
    matrix = dense(*network._entries, network.derivatives(rise)[:, 0], len(network.unknown))
    left = network.imbalance(rise)[network.unknown]
    # A dense Newton step from there moves nothing any more.
    step = np.linalg.solve(matrix, -left)
    assert np.abs(step).max() < 1e-5
