"""Radiation inside, from the description to the heat: grey surfaces against closed forms.

Surfaces are held at given temperatures, so that only irradiations are found.
"""

import random

import numpy as np
import pytest
from support.cases import COARSE, Data, board, box, network_of, part, solved
from support.inside import held, site_of
from support.random_documents import random_document

from enclosure_check.network.network import Network
from enclosure_check.physics.radiation import STEFAN_BOLTZMANN
from enclosure_check.physics.view_factors import Boxes, Rectangles, exchange_areas
from enclosure_check.solve.steady import SolveOptions, solve_steady

WALLS = ("left", "right", "front", "back", "bottom", "top")
AMBIENT_K = 298.15
EXACT = 1e-6
# Balances of the irradiations, whose heat is small beside all that is held.
CLOSELY = SolveOptions(node_tolerance=1e-13, overall_tolerance=1e-12)


def shining(emissivities: dict[str, float], **changes) -> Data:
    """A box whose walls have these emissivities inside, boards 0.9."""
    names = {*emissivities, "board"}
    finishes = {f"f {name}": {"emissivity": emissivities.get(name, 0.9)} for name in names}
    return box(
        finishes=finishes,
        walls={name: {"finish_inside": f"f {name}"} for name in WALLS if name in emissivities},
        defaults={"board": {"finish": "f board"}},
        **changes,
    )


def irradiated(network: Network, rise: np.ndarray) -> tuple[np.ndarray, dict[str, float]]:
    """Rises with the irradiations found, and the heat every owner radiates inside [W]."""
    free = [
        node
        for node, label in enumerate(network.node_labels)
        if label.startswith(("irradiation of patch", "emission of patch"))
    ]
    alone = held(network, np.array(free), rise[:, None])
    start = np.zeros((len(free), 1))
    found = solve_steady(alone, start, CLOSELY)
    assert found.converged or np.abs(found.worst_imbalance_w).max() < 1e-10
    heat = np.zeros(len(network.labels))
    for kind in network.kinds:
        np.add.at(heat, kind.label, kind.evaluate(found.rise, network.reference_k)[:, 0])
    given: dict[str, float] = {}
    for label, watts in zip(network.labels, heat, strict=True):
        if label.role == "radiation_inside":
            given[label.owner] = given.get(label.owner, 0.0) + float(watts)
    return found.rise[:, 0], given


def with_walls(network: Network, rises: dict[str, float]) -> np.ndarray:
    """Rises of all nodes with every wall even at its own."""
    rise = np.zeros(network.size)
    for name, value in rises.items():
        plate = network.places.wall_inside[name]
        rise[plate.cells], rise[plate.mean] = value, value
    return rise


def set_board(network: Network, rise: np.ndarray, name: str, value: float) -> None:
    plate = network.places.boards[name]
    rise[plate.cells], rise[plate.mean] = value, value


def wall_patches(inside: tuple[float, float, float], blocks: int = 2) -> Rectangles:
    """The six walls, each in blocks x blocks pieces, in the order of their names."""
    rows = []
    for wall in range(6):
        axis = wall // 2
        a, b = (size for index, size in enumerate(inside) if index != axis)
        for i in range(blocks):
            for j in range(blocks):
                low = (a * i / blocks, b * j / blocks)
                high = (a * (i + 1) / blocks, b * (j + 1) / blocks)
                at = inside[axis] if wall % 2 else 0.0
                rows.append((axis, -1 if wall % 2 else 1, at, low, high))
    axis, sign, at, low, high = zip(*rows, strict=True)
    return Rectangles(*(np.array(x) for x in (axis, sign)), *map(np.array, (at, low, high)))


def grey(exchange: np.ndarray, emissivity: np.ndarray, emission: np.ndarray) -> np.ndarray:
    """Heat given off by grey surfaces, ``J = e E + (1 - e) X J / A`` solved as it stands."""
    area = exchange.sum(axis=1)
    share = exchange / area[:, None]
    radiosity = np.linalg.solve(
        np.eye(len(area)) - (1 - emissivity)[:, None] * share, emissivity * emission
    )
    return emissivity * area * (emission - share @ radiosity)


NO_OBSTACLES = Boxes(np.zeros((0, 3)), np.zeros((0, 3)))
RISES = {"left": 40.0, "right": 5.0, "front": -12.0, "back": 60.0, "bottom": 0.0, "top": 22.0}


@pytest.mark.parametrize("size_mm", [(200, 100, 150), (60, 60, 60), (1000, 30, 400)])
@pytest.mark.parametrize(
    "emissivities",
    [
        dict.fromkeys(WALLS, 0.9),
        dict.fromkeys(WALLS, 1.0),
        dict(zip(WALLS, (0.9, 0.05, 0.5, 0.8, 0.0, 1.0), strict=True)),
    ],
)
def test_six_grey_walls(size_mm, emissivities):
    width, depth, height = size_mm
    document = shining(
        emissivities, box={"width_mm": width, "depth_mm": depth, "height_mm": height}
    )
    network = network_of(document, COARSE)
    _, given = irradiated(network, with_walls(network, RISES))
    exchange = exchange_areas(wall_patches(tuple(x * 1e-3 for x in size_mm)), NO_OBSTACLES)
    emission = np.repeat([STEFAN_BOLTZMANN * (AMBIENT_K + RISES[name]) ** 4 for name in WALLS], 4)
    epsilon = np.repeat([emissivities[name] for name in WALLS], 4)
    expected = grey(exchange, epsilon, emission).reshape(6, 4).sum(axis=1)
    scale = np.abs(expected).max()
    for name, watts in zip(WALLS, expected, strict=True):
        assert given.get(f"wall:{name}", 0.0) == pytest.approx(watts, abs=EXACT * scale), name


def test_uneven_walls_radiate_with_the_mean_emission_of_each_patch():
    network = network_of(shining(dict.fromkeys(WALLS, 0.7)), COARSE)
    rise = np.zeros(network.size)
    rng = np.random.default_rng(4)
    emission = []
    for name in WALLS:
        cells = network.places.wall_inside[name].cells
        rise[cells] = rng.uniform(-30, 60, cells.shape)
        fourth = STEFAN_BOLTZMANN * (AMBIENT_K + rise[cells]) ** 4
        n, m = (count // 2 for count in cells.shape)
        emission += [
            fourth[i * n : i * n + n, j * m : j * m + m].mean() for i in (0, 1) for j in (0, 1)
        ]
    _, given = irradiated(network, rise)
    exchange = exchange_areas(wall_patches((0.2, 0.1, 0.15)), NO_OBSTACLES)
    expected = grey(exchange, np.full(24, 0.7), np.array(emission)).reshape(6, 4).sum(axis=1)
    found = [given[f"wall:{name}"] for name in WALLS]
    np.testing.assert_allclose(found, expected, atol=EXACT * np.abs(expected).max())


@pytest.mark.parametrize(
    ("emissivity", "flux"),
    [
        ((0.9, 0.9), 179.68),  # computed by hand: sigma (333.15^4 - 303.15^4) / (2/0.9 - 1)
        ((0.1, 0.9), 21.72),
    ],
)
def test_two_parallel_plates(emissivity, flux):
    """60 and 30 C between walls that reflect; what those keep back goes with the distance."""
    ends = {"front": emissivity[0], "back": emissivity[1]}
    found = []
    for depth_mm in (20, 10):
        document = shining(
            {**dict.fromkeys(WALLS, 0.0), **ends},
            box={"width_mm": 2000, "height_mm": 2000, "depth_mm": depth_mm},
        )
        network = network_of(document, COARSE)
        rise = with_walls(network, {"front": 60 - 25.0, "back": 30 - 25.0})
        _, given = irradiated(network, rise)
        assert given["wall:back"] == pytest.approx(-given["wall:front"], rel=EXACT)
        found.append(given["wall:front"] / 4.0)
    assert found[0] == pytest.approx(flux, rel=0.01)
    assert 2.0 * found[1] - found[0] == pytest.approx(flux, rel=2e-4)


def test_small_body_in_a_large_box():
    """A convex body sees black walls alone, whatever lies where."""
    document = shining(
        dict.fromkeys(WALLS, 1.0), box={"width_mm": 900, "depth_mm": 700, "height_mm": 800}
    )
    document["parts"] = {
        "B": {
            "place": "air",
            "from_walls_mm": {"left": 300, "front": 200, "bottom": 500},
            "length_mm": 30,
            "width_mm": 20,
            "height_mm": 10,
            "finish": "f part",
            "power_w": 1.0,
        }
    }
    document["finishes"]["f part"] = {"emissivity": 0.8}
    network = network_of(document, COARSE)
    rise = with_walls(network, dict.fromkeys(WALLS, 10.0))
    rise[network.places.parts["B"].case] = 70.0
    _, given = irradiated(network, rise)
    area = 2 * (30 * 20 + 20 * 10 + 10 * 30) * 1e-6
    fourth = (AMBIENT_K + 70) ** 4 - (AMBIENT_K + 10) ** 4
    assert given["part:B"] == pytest.approx(0.8 * area * STEFAN_BOLTZMANN * fourth, rel=EXACT)


# Anything ---------------------------------------------------------------------------------------


@pytest.mark.parametrize("seed", range(8))
def test_radiation_inside_makes_no_heat(seed):
    network = network_of(random_document(random.Random(seed)), COARSE)
    rise = np.random.default_rng(seed).uniform(-30, 60, network.size)
    _, given = irradiated(network, rise)
    assert len(given) >= 6
    size = sum(abs(watts) for watts in given.values())
    assert size > 1e-3
    assert abs(sum(given.values())) < 1e-9 * size


@pytest.mark.parametrize("seed", range(8))
def test_even_temperatures_radiate_nothing(seed):
    network = network_of(random_document(random.Random(seed)), COARSE)
    _, given = irradiated(network, np.full(network.size, 20.0))
    assert max(abs(watts) for watts in given.values()) < 1e-9


@pytest.mark.parametrize("seed", range(8))
def test_exchange_areas_of_patches_close(seed):
    patches = site_of(random_document(random.Random(seed))).patches
    exchange = patches.exchange()
    assert exchange.shape == (patches.count, patches.count)
    # Patches of several rectangles add them up in one order or the other.
    np.testing.assert_allclose(exchange, exchange.T, rtol=1e-14)
    assert (exchange >= 0).all()
    whole = np.zeros(patches.count)
    for (*_, low, high), patch in zip(patches.rectangles, patches.patch_of, strict=True):
        whole[patch] += np.prod(np.subtract(high, low))
    assert (exchange.sum(axis=1) <= whole * (1 + 1e-9)).all()


def test_patches_divide_a_face_evenly_and_know_what_lies_over_them():
    site = site_of(box(boards={"main": board()}))
    for name, side in (("front", "front"), ("main", "front"), ("main", "back")):
        of_cell, grid = site.patches.faces[name, side], site.patches.grids[name, side]
        counts = np.bincount((of_cell - of_cell.min()).ravel())
        assert counts.tolist() == [of_cell.size // 4] * 4
        for i, x in enumerate(grid.centres[0]):
            for j, z in enumerate(grid.centres[1]):
                low, size = [0.0, 0.0, 0.0], [0.001, 0.001, 0.001]
                low[grid.axes[0]], low[grid.axes[1]] = float(x) - 5e-4, float(z) - 5e-4
                patches, shares = site.patches.under(name, side, tuple(low), tuple(size))
                assert patches.tolist() == [of_cell[i, j]]
                assert shares == pytest.approx([1.0])


def test_what_stands_across_an_edge_between_patches_is_part_of_both():
    site = site_of(box(boards={"main": board()}))
    of_cell, grid = site.patches.faces["main", "front"], site.patches.grids["main", "front"]
    first, second = grid.axes
    low, size = [0.0, 0.0, 0.0], [0.0, 0.0, 0.0]
    size[first], size[second] = 0.02, 0.01
    # A quarter of it beyond the middle of the board along one axis, all before it along the other.
    low[first] = grid.low[first] + grid.size[first] / 2 - 0.015
    low[second] = grid.low[second] + 0.01
    patches, shares = site.patches.under("main", "front", tuple(low), tuple(size))
    assert patches.tolist() == sorted({int(of_cell[0, 0]), int(of_cell[-1, 0])})
    assert shares == pytest.approx([0.75, 0.25])


def test_a_part_that_passes_the_middle_of_its_board_changes_nothing_at_once():
    """Seen before: half a kelvin where its centre came from one patch to the next."""

    def case_at(x):
        document = box(
            boards={"main": board(other_power_w=1)},
            parts={"U1": part(at_mm=[x, 50], power_w=3, theta_jb_k_per_w=20)},
            surroundings={"air_c": 25, "sun_w_per_m2": {"left": 900}},
        )
        answer = solved(document)
        return answer.at(answer.network.places.parts["U1"].junction)

    assert abs(case_at(60.01) - case_at(59.99)) < 0.02


# Emissivity 0 and 1, and shields ----------------------------------------------------------------


def test_a_mirror_takes_no_heat_and_changes_what_others_exchange():
    grey_walls = {**dict.fromkeys(WALLS, 0.9), "top": 0.0}
    network = network_of(shining(grey_walls), COARSE)
    _, given = irradiated(network, with_walls(network, RISES))
    scale = max(abs(watts) for watts in given.values())
    assert abs(given.get("wall:top", 0.0)) < EXACT * scale
    hotter = {**RISES, "top": 200.0}
    _, again = irradiated(network, with_walls(network, hotter))
    for name in WALLS:
        assert again[f"wall:{name}"] == pytest.approx(given[f"wall:{name}"], abs=EXACT * scale)


def test_black_walls_exchange_over_their_view_factors_alone():
    network = network_of(shining(dict.fromkeys(WALLS, 1.0)), COARSE)
    _, given = irradiated(network, with_walls(network, RISES))
    exchange = exchange_areas(wall_patches((0.2, 0.1, 0.15), 1), NO_OBSTACLES)
    fourth = np.array([(AMBIENT_K + RISES[name]) ** 4 for name in WALLS])
    expected = STEFAN_BOLTZMANN * (exchange * (fourth[:, None] - fourth)).sum(axis=1)
    found = [given[f"wall:{name}"] for name in WALLS]
    np.testing.assert_allclose(found, expected, atol=EXACT * np.abs(expected).max())


def test_a_board_hides_a_hot_wall():
    """The far wall takes next to nothing from a hot one behind a board at its own temperature."""
    black = dict.fromkeys(WALLS, 1.0)
    hot = {**dict.fromkeys(WALLS, 0.0), "front": 80.0}
    plain = network_of(shining(black), COARSE)
    _, open_ = irradiated(plain, with_walls(plain, hot))
    document = shining(black, boards={"main": board(length_mm=198, width_mm=148, thickness_mm=2)})
    document["finishes"]["f board"] = {"emissivity": 1.0}
    network = network_of(document, COARSE)
    rise = with_walls(network, hot)
    _, hidden = irradiated(network, rise)
    assert -open_["wall:back"] > 0.5 * 0.2 * 0.15
    assert abs(hidden["wall:back"]) < 0.03 * abs(open_["wall:back"])
    assert hidden["board:main"] < 0.5 * open_["wall:back"]


def test_half_a_shield_between_two_plates():
    """A shield as grey as the plates, free of heat itself, halves what two plates exchange."""
    mirrors = dict.fromkeys(WALLS, 0.0)
    ends = {"front": 0.8, "back": 0.8}
    size = {"width_mm": 1000, "height_mm": 1000, "depth_mm": 12}
    plain = network_of(shining({**mirrors, **ends}, box=size), COARSE)
    hot = {"front": 60.0, "back": 0.0}
    _, open_ = irradiated(plain, with_walls(plain, hot))
    document = shining(
        {**mirrors, **ends},
        box=size,
        boards={"main": board(length_mm=999, width_mm=999, thickness_mm=2)},
    )
    document["finishes"]["f board"] = {"emissivity": 0.8}
    network = network_of(document, COARSE)
    rise = with_walls(network, hot)
    fourth = 0.5 * (AMBIENT_K**4 + (AMBIENT_K + 60.0) ** 4)
    set_board(network, rise, "main", fourth**0.25 - AMBIENT_K)
    _, shielded = irradiated(network, rise)
    assert shielded["wall:front"] == pytest.approx(0.5 * open_["wall:front"], rel=0.02)
    assert abs(shielded["board:main"]) < 0.02 * shielded["wall:front"]


def test_a_body_in_the_air_hides_what_lies_behind_it():
    black = dict.fromkeys(WALLS, 1.0)
    hot = {**dict.fromkeys(WALLS, 0.0), "front": 80.0}
    plain = network_of(shining(black), COARSE)
    _, open_ = irradiated(plain, with_walls(plain, hot))
    document = shining(black)
    document["finishes"]["f part"] = {"emissivity": 1.0}
    document["parts"] = {
        "B": {
            "place": "air",
            "length_mm": 196,
            "width_mm": 40,
            "height_mm": 146,
            "finish": "f part",
            "power_w": 1.0,
        }
    }
    network = network_of(document, COARSE)
    _, hidden = irradiated(network, with_walls(network, hot))
    assert abs(hidden["wall:back"]) < 0.05 * abs(open_["wall:back"])
