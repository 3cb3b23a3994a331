"""A network that takes pieces over from another is the one built from nothing, bit for bit."""

import random
from pathlib import Path
from typing import Any

import numpy as np
import pytest
import yaml
from support.cases import board, box, case_of, part
from support.features import full
from support.random_documents import random_document

from enclosure_check.description.case import Finish
from enclosure_check.description.load import load_document
from enclosure_check.description.names import WALL_NAMES
from enclosure_check.description.numbers import numbers
from enclosure_check.findings.rebuilt import step_of
from enclosure_check.network import boards, parts, walls
from enclosure_check.network.build import build_network
from enclosure_check.network.films import BoxFilm
from enclosure_check.network.network import Network
from enclosure_check.network.pieces import Builds
from enclosure_check.network.spots import Spots
from enclosure_check.physics.view_closure import NotEnclosedError
from enclosure_check.records import replace

SAMPLES = Path(__file__).parent.parent.parent / "sample_boards"
COMPARED = (
    "node_labels",
    "reference_k",
    "fixed",
    "fixed_rise",
    "nowhere",
    "labels",
    "kinds",
    "sources",
    "readings",
)


def same(one: Any, other: Any) -> bool:
    """Whether two things hold the same values, arrays by their bytes."""
    if isinstance(one, np.ndarray):
        return one.shape == other.shape and one.tobytes() == other.tobytes()
    if isinstance(one, tuple | list):
        return len(one) == len(other) and all(map(same, one, other))
    if hasattr(one, "__dataclass_fields__"):
        names = one.__dataclass_fields__
        return all(same(getattr(one, name), getattr(other, name)) for name in names)
    return bool(one == other)


def assert_same(one: Network, other: Network) -> None:
    for name in COMPARED:
        assert same(getattr(one, name), getattr(other, name)), name


def compare_all(path: Path, every: int = 1) -> int:
    """Build the network with every number moved both ways, in both ways; gives how often."""
    document = load_document(str(path))
    case = document.cases()[0]
    variation, builds = document.variation(case), Builds(case)
    count = 0
    for number, value in list(numbers(variation.node).items())[::every]:
        for sign in (1, -1):
            moved = variation.case_with(number, value + sign * step_of(number, value))
            if moved is None:
                continue
            try:
                fresh = build_network(moved)
            except NotEnclosedError:
                continue
            assert_same(builds.network(moved), fresh)
            count += 1
    return count


# One with openings, cables and growing power, one with clamps, zones and pads.
@pytest.mark.parametrize("name", ["door_controller", "wayside_card_cage"])
def test_numbers_of_a_sample(name):
    assert compare_all(SAMPLES / f"{name}.yaml", 3) > 100


@pytest.mark.parametrize("seed", range(8))
def test_numbers_of_random_documents(tmp_path, seed):
    path = tmp_path / "box.yaml"
    path.write_text(yaml.safe_dump(random_document(random.Random(seed)), sort_keys=False), "utf-8")
    assert compare_all(path, 5) > 5


def test_numbers_of_a_document_with_everything_on_a_board(tmp_path):
    path = tmp_path / "box.yaml"
    path.write_text(yaml.safe_dump(full(), sort_keys=False), "utf-8")
    assert compare_all(path) > 90


BOX = box(
    boards={
        "main": board(from_walls_mm={"front": 30}),
        "other": board(from_walls_mm={"front": 70}),
    },
    parts={
        "U1": part(at_mm=[48, 42], power_w=2, theta_jb_k_per_w=8),
        "U2": part(at_mm=[20, 20], power_w=1, theta_jb_k_per_w=10),
    },
)


def with_wall(case, name="top", **changes):
    return replace(case, walls={**case.walls, name: replace(case.walls[name], **changes)})


def with_part(case, **changes):
    return replace(case, parts={**case.parts, "U1": replace(case.parts["U1"], **changes)})


def test_only_what_is_made_of_something_else_is_built(monkeypatch):
    case = case_of(BOX)
    builds = Builds(case)
    known = builds.network(case)
    built = []

    def recorded(module, name):
        function = getattr(module, name)

        def run(*arguments):
            built.append(name)
            return function(*arguments)

        monkeypatch.setattr(module, name, run)

    recorded(walls, "_build_wall")
    recorded(boards, "_build_board")
    recorded(parts, "_build_part")
    recorded(Spots, "_join_plate")
    network = builds.network(with_part(case, power_w=3.0))
    # The board that carries it, as for all that is known its outline is another.
    assert built == ["_build_board", "_build_part", "_join_plate"]
    film, before = (
        next(kind for kind in each.kinds if isinstance(kind, BoxFilm)) for each in (network, known)
    )
    assert film is before
    built.clear()
    network = builds.network(with_wall(case, thickness_mm=4.0))
    assert built.count("_build_wall") == 1
    assert "_build_board" not in built


# Numbers of a document hardly ever change what a wall is made of and not its size.
@pytest.mark.parametrize("name", WALL_NAMES)
def test_a_wall_of_other_material_is_another_for_all_that_touches_it(name):
    # The sample has parts and pads on walls, the other stand-offs, clamps and fillers.
    sample = load_document(str(SAMPLES / "river_gauge_station.yaml")).cases()[0]
    for case in (sample, case_of(full())):
        material = replace(case.walls[name].material, in_plane_conductivity_w_per_mk=3.0)
        other = with_wall(case, name, material=material)
        assert_same(Builds(case).network(other), build_network(other))


def test_a_case_unlike_in_everything_is_built_from_nothing():
    case = case_of(BOX)
    builds = Builds(case)
    other = case_of({**BOX, "surroundings": {"air_c": 50}})
    assert_same(builds.network(other), build_network(other))
    fewer = replace(case, parts={"U2": case.parts["U2"]})
    assert_same(builds.network(fewer), build_network(fewer))
    without = replace(case, boards={**case.boards})
    assert_same(builds.network(without), build_network(without))


def test_a_part_with_other_nodes_shifts_all_that_follow():
    case = case_of(BOX)
    moved = with_part(case, theta_jc_top_k_per_w=5.0)
    builds = Builds(case)
    network = builds.network(moved)
    assert len(network.node_labels) == len(build_network(case).node_labels) + 1
    assert_same(network, build_network(moved))
    assert_same(builds.network(case), build_network(case))


def test_what_one_network_takes_over_does_not_change_the_other():
    case = case_of(BOX)
    builds = Builds(case)
    before = build_network(case)
    for power in (3.0, 4.0):
        builds.network(with_part(case, power_w=power, finish=Finish("bright", 0.1, 0.1)))
    assert_same(builds.network(case), before)
