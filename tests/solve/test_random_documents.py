"""Random documents: every one has an answer, found in few steps.

The program `tests/benchmarks/random_documents.py` does the same for as many as wanted.
"""

import random

import pytest
from support.cases import assert_balanced, case_of, network_of, solved_as
from support.random_documents import random_document

from enclosure_check.description.document import Document
from enclosure_check.description.names import WALL_NAMES
from enclosure_check.network.build import build_network
from enclosure_check.solve.steady import solve_steady

COUNT = 60
# How many are looked through for what they contain.
SEEN = 150
# A few Newton steps do, but for those that are come to by way of stirred air: eight stages more.
MOST_STEPS, MOST_BY_STIRRING, BY_STIRRING_OF_TEN = 18, 90, 2


@pytest.mark.parametrize("seed", [238, 886, 935])
def test_faces_as_much_warmer_as_colder_than_their_air(seed):
    """Level faces and bodies whose mean difference comes close to none: once without a slope."""
    network = network_of(random_document(random.Random(seed)))
    solution = solve_steady(network)
    assert solution.converged
    assert int(solution.steps[0]) <= MOST_STEPS


@pytest.mark.parametrize("first", range(0, COUNT, 10))
def test_every_one_converges_and_balances(first):
    long = 0
    for seed in range(first, first + 10):
        case = case_of(random_document(random.Random(seed)))
        network = build_network(case)
        solution = solve_steady(network)
        assert solution.converged, (seed, solution.outcome)
        assert solution.steps[0] <= MOST_BY_STIRRING, seed
        long += int(solution.steps[0] > MOST_STEPS)
        assert_balanced(solved_as(case, network, solution))
    assert long <= BY_STIRRING_OF_TEN


def documents() -> list[Document]:
    return [Document.model_validate(random_document(random.Random(seed))) for seed in range(SEEN)]


def test_the_same_seed_gives_the_same_document():
    assert random_document(random.Random(4)) == random_document(random.Random(4))
    assert random_document(random.Random(4)) != random_document(random.Random(5))


def test_they_reach_everything_they_are_meant_to():
    """What the documents contain is what makes their convergence worth anything."""
    found = documents()
    inside = [
        size
        for each in found
        for size in (each.box.width_mm, each.box.depth_mm, each.box.height_mm)
    ]
    assert min(inside) < 40
    assert max(inside) > 1500
    air = [each.surroundings.air_c for each in found]
    assert min(air) < -30
    assert max(air) > 60
    assert {len(each.boards) for each in found} == {0, 1, 2, 3, 4}
    assert max(len(each.parts) for each in found) >= 18
    assert {each.surroundings.sky for each in found} == {"none", "clear", "overcast", "given"}
    assert {wall.mounting.kind for each in found for wall in each.walls.values()} == {
        "open_air",
        "against_surface",
        "neighbour",
        "standing_on",
        "bolted_to",
        "insulated",
    }
    boards = [board for each in found for board in each.boards.values()]
    assert {board.parallel_to for board in boards} == set(WALL_NAMES)
    parts = [part for each in found for part in each.parts.values()]
    places = {part.place for part in parts}
    assert {*WALL_NAMES, "air"} <= places
    assert any(part.pad is not None and part.pad.to is not None for part in parts)
    assert any(part.pad is not None and part.pad.to is None for part in parts)
    assert any(part.power_slope_pct_per_k for part in parts)
    assert any(part.power_doubling_k for part in parts)
    assert {part.rotation_deg for part in parts} == {0, 90, 180, 270}
    tilts = {(each.box.tilt.lean_back_deg, each.box.tilt.roll_right_deg) for each in found}
    assert len(tilts) > 40
    assert any(each.surroundings.sun_w_per_m2 for each in found)
    winds = [each.surroundings.wind_m_per_s for each in found]
    assert winds.count(0) > 40
    assert min(wind for wind in winds if wind > 0) < 0.1
    assert max(winds) > 4.5
    assert {each.surroundings.wind_from for each in found} == {"any", *WALL_NAMES}
    assert {each.mode for each in found} == {None, "full", "low", "off"}
