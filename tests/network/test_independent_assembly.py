"""The inside of a small box against heat rates written down independently, at random states.

Both reckon from the same case; the other (see `support.balances`) with plain loops over cells and
nothing but laws in common. What agrees in every node's heat at any state has the same answers.
"""

import itertools

import numpy as np
import pytest
from support.balances import WALLS, Balances
from support.cases import box, case_of, part

from enclosure_check.network.build import build_network
from enclosure_check.network.grid import GridOptions
from enclosure_check.network.inside_air import InsideAir
from enclosure_check.network.links import LinkLabel
from enclosure_check.network.network import Network
from enclosure_check.physics.air import pressure_at_altitude
from enclosure_check.physics.box import box_film, box_geometry

FOUR_CELLS = GridOptions(board_cells=4, wall_cells=4)
ROLES = ("film", "straight", "lift", "mixing")
# Rounding, of the largest heat of its kind.
AGREES = 1e-10


def small(tilt: dict[str, float]):
    """A box of four cells a face: a board, a part on it, and one on a wall."""
    return box(
        box={"width_mm": 130, "height_mm": 110, "depth_mm": 100, "tilt": tilt},
        walls={"left": {"material": "pc_abs"}, "top": {"finish_inside": "bare_aluminium_rolled"}},
        boards={
            "main": {
                "parallel_to": "back",
                "length_mm": 90,
                "width_mm": 80,
                "from_walls_mm": {"back": 12},
                "copper": {"one": {"thickness_um": 35, "coverage_pct": 50}},
            }
        },
        parts={
            "U1": part(at_mm=[30, 25], power_w=1, theta_jc_top_k_per_w=4, height_mm=6),
            "R1": part(place="right", side=None, at_mm=[30, 40], power_w=1, height_mm=9),
        },
        surroundings={"air_c": 25, "altitude_m": 900},
    )


def state(network: Network, seed: int) -> np.ndarray:
    """Random rises, the air warmer upwards by and large; means as their cells have them."""
    rng = np.random.default_rng(seed)
    rise = rng.uniform(-15, 45, network.size)
    rise[network.fixed] = network.fixed_rise[network.fixed, 0]
    places = network.places
    rise[places.air_nodes] = np.linspace(-5, 25, 8) + rng.uniform(-3, 3, 8)
    plates = [*places.wall_outside.values(), *places.wall_inside.values(), *places.boards.values()]
    for plate in plates:
        assert plate.cells.shape == (2, 2)
        rise[plate.mean] = rise[plate.cells].mean()
    return rise


TILTS = [{}, {"lean_back_deg": 25, "roll_right_deg": -15}, {"lean_back_deg": 160}]


@pytest.fixture(params=range(len(TILTS)), ids=["upright", "tilted", "upside down"])
def case(request):
    return case_of(small(TILTS[request.param]))


@pytest.mark.parametrize("seed", [1, 2, 3])
def test_heat_of_the_inside_air(case, seed):
    network = build_network(case, FOUR_CELLS)
    rise = state(network, seed)
    other = Balances(case, network, rise)
    other.inside_air()
    (kind,) = [kind for kind in network.kinds if isinstance(kind, InsideAir)]
    heat = kind.evaluate(rise[:, None], network.reference_k)[:, 0]
    films, straights = 2 * len(kind.cell), len(kind.cell_a)
    lifts = 2 * len(kind.surfaces.node) * 7
    bounds = np.cumsum([0, films, straights, lifts, 7])
    assert bounds[-1] == len(heat)
    for role, start, end in zip(ROLES, bounds[:-1], bounds[1:], strict=True):
        found, expected = np.zeros((2, network.size))
        np.add.at(found, kind.a[start:end], heat[start:end])
        np.subtract.at(found, kind.b[start:end], heat[start:end])
        for node, watts in other.leaves[role].items():
            expected[node] = watts
        assert np.abs(expected).max() > 1e-3, role
        np.testing.assert_allclose(
            found, expected, rtol=0, atol=AGREES * np.abs(expected).max(), err_msg=role
        )


def test_films_by_surface(case):
    network = build_network(case, FOUR_CELLS)
    rise = state(network, 4)
    other = Balances(case, network, rise)
    (kind,) = [kind for kind in network.kinds if isinstance(kind, InsideAir)]
    found = kind.audit(rise[:, None], network.reference_k).coefficient[:, 0]
    expected = [other.film(surface) for surface in other.surfaces]
    assert len(WALLS) + 3 + 2 == len(found)
    np.testing.assert_allclose(found, expected, rtol=1e-11)


def with_balanced_patches(network: Network, rise: np.ndarray) -> np.ndarray:
    """The state with the irradiations and emissions of all patches such that they balance."""
    own = [
        index
        for index, label in enumerate(network.node_labels)
        if label.startswith(("irradiation", "emission"))
    ]
    place = np.searchsorted(network.unknown, own)
    assert (network.unknown[place] == own).all()
    rise = rise.copy()
    for _ in range(12):
        left = network.imbalance(rise[:, None])[own, 0]
        rise[own] -= np.linalg.solve(network.jacobian(rise[:, None])[0][np.ix_(place, place)], left)
    assert np.abs(network.imbalance(rise[:, None])[own, 0]).max() < 1e-11
    return rise


@pytest.mark.parametrize("seed", [1, 2])
def test_radiation_inside(case, seed):
    network = build_network(case, FOUR_CELLS)
    rise = with_balanced_patches(network, state(network, seed))
    other = Balances(case, network, rise)
    expected = np.zeros(network.size)
    for node, watts in other.net_radiation().items():
        expected[node] += watts
    heat = network.heat(rise[:, None])[:, 0]
    a = np.concatenate([kind.a for kind in network.kinds])
    roles = np.array([network.labels[row].role for row in network.link_label])
    found = np.zeros(network.size)
    mine = roles == "radiation_inside"
    np.add.at(found, a[mine], heat[mine])
    assert np.abs(expected).max() > 0.1
    # Patches balance to 1e-11 W, and among them all heat stays.
    assert abs(expected.sum()) < 1e-9
    np.testing.assert_allclose(found, expected, rtol=0, atol=1e-9)


def test_convection_outside(case):
    network = build_network(case, FOUR_CELLS)
    rise = state(network, 5)
    places, reference = network.places, float(network.reference_k[0])
    names = list(WALLS)
    means = np.array([rise[places.wall_outside[name].cells].mean() for name in names])
    shape = box_geometry(np.array(case.outside_mm) / 1000, case.up, np.ones(6, dtype=bool))
    pressure = float(pressure_at_altitude(case.surroundings.altitude_m))
    film = box_film(means + reference, reference, pressure, shape).coefficient
    heat = network.heat(rise[:, None])[:, 0]
    for name, coefficient in zip(names, film, strict=True):
        axis = WALLS[name][0]
        area = np.prod(np.delete(np.array(case.outside_mm) / 1000, axis))
        cells = places.wall_outside[name].cells.ravel()
        row = network.labels.index(LinkLabel(f"wall:{name}", "convection_outside"))
        expected = coefficient * area / 4 * rise[cells]
        assert heat[network.link_label == row] == pytest.approx(expected, rel=1e-11)


def test_conduction_along_and_between_the_walls(case):
    network = build_network(case, FOUR_CELLS)
    rise = state(network, 6)
    places = network.places
    inside = np.array(case.inside_mm) / 1000
    expected = np.zeros(network.size)

    def join(one: int, other: int, conductance: float) -> None:
        expected[one] += conductance * (rise[one] - rise[other])
        expected[other] -= conductance * (rise[one] - rise[other])

    def node_at(face: str, name: str, where: dict[int, int]) -> int:
        """The cell at places 0 and 1 along the axes of a wall."""
        axes = [axis for axis in range(3) if axis != WALLS[name][0]]
        plate = (places.wall_outside if face == "outside" else places.wall_inside)[name]
        return int(plate.cells[where[axes[0]], where[axes[1]]])

    sheet = {
        name: wall.material.in_plane_conductivity_w_per_mk * wall.thickness_mm / 1000
        for name, wall in case.walls.items()
    }
    for face, name in itertools.product(("outside", "inside"), WALLS):
        # Either face has half of the thickness; of an even wall both are one.
        first, second = (axis for axis in range(3) if axis != WALLS[name][0])
        for along, beside in ((first, second), (second, first)):
            for at in (0, 1):
                ends = [node_at(face, name, {along: end, beside: at}) for end in (0, 1)]
                join(*ends, sheet[name] / 2 * inside[beside] / inside[along])
    for face, (one, other) in itertools.product(
        ("outside", "inside"), itertools.combinations(WALLS, 2)
    ):
        (a, a_sign), (b, b_sign) = WALLS[one], WALLS[other]
        if a == b:
            continue
        edge = 3 - a - b
        for at in (0, 1):
            node_one = node_at(face, one, {b: int(b_sign > 0), edge: at})
            node_other = node_at(face, other, {a: int(a_sign > 0), edge: at})
            # A quarter of either wall lies between the middle of its cell and the edge.
            away = inside[b] / 4 / (sheet[one] / 2) + inside[a] / 4 / (sheet[other] / 2)
            join(node_one, node_other, inside[edge] / 2 / away)
    heat = network.heat(rise[:, None])[:, 0]
    a, b = (np.concatenate([getattr(kind, end) for kind in network.kinds]) for end in "ab")
    labels = [network.labels[row] for row in network.link_label]
    mine = np.array(
        [
            label.role == "corner" or (label.role == "along" and label.owner.startswith("wall"))
            for label in labels
        ]
    )
    found = np.zeros(network.size)
    np.add.at(found, a[mine], heat[mine])
    np.subtract.at(found, b[mine], heat[mine])
    assert np.abs(expected).max() > 1
    np.testing.assert_allclose(found, expected, rtol=0, atol=1e-12 * np.abs(heat).max())
