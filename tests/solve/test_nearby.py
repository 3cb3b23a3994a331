"""From known states to others: what is found is what the cold solve finds."""

import numpy as np
import pytest
from support.cases import COARSE, board, box, network_of, part, patched

from enclosure_check.solve.nearby import solve_known
from enclosure_check.solve.steady import solve_steady

OFF = box(boards={"main": board()}, parts={"U1": part(power_w=0)})
# Both balance to a billionth of the heat that flows.
WITHIN_K = 1e-5


def test_nothing_that_heats_is_at_the_temperature_of_the_air_at_once():
    known = solve_known(network_of(OFF, COARSE), None)
    assert known.solution.converged
    assert not known.solution.rise.any()
    assert known.solution.steps.tolist() == [0]


@pytest.mark.parametrize(
    "patch",
    [
        {"surroundings": {"sky": "clear"}},
        {"surroundings": {"radiant_c": 60}},
        {"parts": {"U1": {"power_w": 1e-3}}},
    ],
)
def test_whatever_heats_or_cools_is_solved(patch):
    network = network_of(patched(OFF, patch), COARSE)
    solution = solve_known(network, None).solution
    cold = solve_steady(network)
    assert solution.converged
    assert cold.converged
    assert np.abs(cold.rise).max() > 1e-3
    assert solution.rise == pytest.approx(cold.rise, abs=WITHIN_K)


def test_a_state_without_heat_leads_on():
    known = solve_known(network_of(OFF, COARSE), None)
    network = network_of(patched(OFF, {"parts": {"U1": {"power_w": 2}}}), COARSE)
    after = solve_known(network, known).solution
    assert after.converged
    assert after.rise == pytest.approx(solve_steady(network).rise, abs=WITHIN_K)
