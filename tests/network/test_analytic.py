"""Small networks with answers in closed form, to a millionth."""

import math

import numpy as np
import pytest
from support.balances import cells_spreading, taken
from support.cases import board, box, network_of, part, patched, solved, temperatures
from support.networks import AMBIENT_K, LABEL, finished, started

from enclosure_check.findings.solved import Solved
from enclosure_check.network.network import Network
from enclosure_check.physics.air import air
from enclosure_check.physics.conduction import spreading_resistance
from enclosure_check.physics.radiation import STEFAN_BOLTZMANN
from enclosure_check.solve.steady import solve_steady

MILLIONTH = 1e-6


def rises(network: Network) -> np.ndarray:
    solution = solve_steady(network)
    assert solution.converged
    return solution.rise[:, 0]


def test_resistances_in_series():
    builder, ambient = started()
    first = builder.node("first")
    second = builder.behind(first, 0.8, "second", LABEL)
    builder.conduct(first, ambient, 1 / 2.5, LABEL)
    builder.heat(second, 12.0, LABEL)
    found = rises(finished(builder))
    assert found[first] == pytest.approx(12 * 2.5, rel=MILLIONTH)
    assert found[second] == pytest.approx(12 * (2.5 + 0.8), rel=MILLIONTH)


def test_no_resistance_needs_no_node():
    builder, ambient = started()
    assert builder.behind(ambient, 0.0, "nothing", LABEL) == ambient
    builder.conduct(ambient, ambient, 0.0, LABEL)
    node = builder.node("alone")
    builder.conduct(node, ambient, 1.0, LABEL)
    assert len(finished(builder).kinds[0].a) == 2


def test_guess_is_the_answer_of_a_linear_network():
    builder, ambient = started()
    warm = builder.node("warm", AMBIENT_K + 40)
    nodes = [builder.node(f"node {index}") for index in range(3)]
    for a, b, conductance in (
        (ambient, nodes[0], 0.5),
        (nodes[0], nodes[1], 2.0),
        (nodes[1], nodes[2], 0.1),
        (nodes[2], warm, 1.5),
        (nodes[0], nodes[2], 0.7),
    ):
        builder.conduct(a, b, conductance, LABEL)
    builder.heat(nodes[1], 3.0, LABEL)
    network = finished(builder)
    solution = solve_steady(network)
    assert solution.steps[0] <= 1
    np.testing.assert_allclose(network.first_guess(), solution.rise[network.unknown], rtol=1e-12)


def test_two_ways_out_share_the_heat_by_their_conductances():
    builder, ambient = started()
    cold = builder.node("cold", AMBIENT_K - 20)
    node = builder.node("node")
    builder.conduct(node, ambient, 0.5, LABEL)
    builder.conduct(node, cold, 0.25, LABEL)
    builder.heat(node, 6.0, LABEL)
    # 0.5 x + 0.25 (x + 20) = 6.
    assert rises(finished(builder))[node] == pytest.approx(1 / 0.75, rel=MILLIONTH)


@pytest.mark.parametrize("power", [0.01, 1.0, 50.0])
def test_a_single_radiating_node(power):
    area, emissivity = 0.02, 0.8
    builder, ambient = started()
    node = builder.node("node")
    builder.radiate(node, ambient, area, area, emissivity, LABEL)
    builder.heat(node, power, LABEL)
    fourth = AMBIENT_K**4 + power / (emissivity * area * STEFAN_BOLTZMANN)
    found = rises(finished(builder))[node]
    assert found == pytest.approx(fourth**0.25 - AMBIENT_K, rel=MILLIONTH)


def test_two_parallel_plates_that_radiate():
    # 1 / (1/e1 + 1/e2 - 1) between equal plates: a grey one and a surface behind a grey space.
    area, one, other = 0.05, 0.9, 0.3
    builder, ambient = started()
    node = builder.node("node")
    builder.radiate(node, ambient, area, other * area, one, LABEL)
    builder.heat(node, 3.0, LABEL)
    grey = area / (1 / one + 1 / other - 1)
    fourth = AMBIENT_K**4 + 3.0 / (grey * STEFAN_BOLTZMANN)
    found = rises(finished(builder))[node]
    assert found == pytest.approx(fourth**0.25 - AMBIENT_K, rel=MILLIONTH)


# Parts on plates ------------------------------------------------------------------------------

# On a wall of 200 x 150 mm, 2 mm of aluminium of 138 W/mK: the sheet conducts 0.276 W/K.
PAD = {"thickness_mm": 0.5, "conductivity_w_per_mk": 2.0, "contact_mm2k_per_w": 30}
ON_WALL = {
    "place": "back",
    "side": None,
    "at_mm": [60, 70],
    "length_mm": 20,
    "width_mm": 12,
    "height_mm": 4,
    "power_w": 5.0,
    "theta_jc_top_k_per_w": 9.0,
    "theta_jc_bottom_k_per_w": 1.5,
    "pad": PAD,
}
SHEET = 138 * 0.002


def under(answer: Solved, low: tuple[float, float], size: tuple[float, float]) -> float:
    """What the cells of the back wall tell of a rectangle of it, seen from inside [C, in m].

    Its x runs against the box's, as the back wall is seen from the front: from the left wall.
    """
    cells = answer.network.places.wall_inside["back"].cells
    steps = 0.2 / cells.shape[0], 0.15 / cells.shape[1]
    return sum(
        taken((i, j), cells.shape, steps, low, size) * answer.at(int(cells[i, j]))
        for i, j in np.ndindex(cells.shape)
    )


@pytest.mark.parametrize(
    ("size", "pad"),
    [((0.020, 0.012), {}), ((0.006, 0.006), {"length_mm": 6, "width_mm": 6})],
    ids=["as large as the part", "smaller than the part"],
)
def test_part_of_two_resistances_on_a_wall_with_a_pad(size, pad):
    answer = solved(box(parts={"Q1": part(**patched(ON_WALL, {"pad": pad}))}))
    nodes, at = answer.network.places.parts["Q1"], answer.temperature_c
    down = answer.flow("part:Q1", "to_wall")
    up = answer.flow("part:Q1", "junction_to_case")
    assert down + up == pytest.approx(5.0, rel=MILLIONTH)
    area = size[0] * size[1]
    joint = 0.5e-3 / (2.0 * area) + 30e-6 / area
    low = (0.060 - size[0] / 2, 0.070 - size[1] / 2)
    counts = answer.network.places.wall_inside["back"].cells.shape
    # Spreading in full, less what the cells tell of it.
    spread = float(spreading_resistance(*size, 0.06, 0.07, 0.2, 0.15, SHEET, 20.0))
    spread -= cells_spreading((0.2, 0.15), counts, SHEET, low, size)
    expected = under(answer, low, size) + down * (1.5 + joint + spread)
    assert at[nodes.junction] == pytest.approx(expected, abs=MILLIONTH)
    assert at[nodes.junction] - at[nodes.case] == pytest.approx(up * 9.0, rel=MILLIONTH)
    # The case loses what comes up to it.
    out = answer.flow("part:Q1", "convection_inside") + answer.flow("part:Q1", "radiation_inside")
    assert out == pytest.approx(up, rel=MILLIONTH)


@pytest.mark.parametrize(
    ("given", "resistance"),
    [
        ({"theta_jb_k_per_w": 12.0, "theta_jc_bottom_k_per_w": 3.0}, 12.0),
        ({"theta_jc_bottom_k_per_w": 3.0}, 3.0),
        ({"theta_jc_bottom_k_per_w": 3.0, "bottom_contact_k_per_w": 2.0}, 5.0),
        ({"bottom_contact_k_per_w": 2.0}, 2.0),
        ({"theta_jb_k_per_w": 0.0}, 0.0),
        ({}, None),
    ],
)
def test_paths_of_a_part_to_its_board(given, resistance):
    if resistance is None:
        # 0.1 mm of air at 25 C under 14 x 10 mm. (common practice, no source)
        conductivity = float(air(298.15, 101_325.0).conductivity)
        resistance = 1e-4 / (conductivity * 140e-6)
    document = box(boards={"main": board()}, parts={"U1": part(power_w=1, **given)})
    answer = solved(document)
    nodes, at = answer.network.places.parts["U1"], answer.temperature_c
    flow = answer.flow("part:U1", "to_board")
    assert flow > 0
    drop = at[nodes.junction] - at[nodes.board]
    assert drop == pytest.approx(flow * resistance, rel=MILLIONTH, abs=1e-11)


def test_wall_conducts_through_its_thickness():
    document = box(
        walls={"top": {"material": "pc_abs", "thickness_mm": 4}}, parts={"Q1": part(**ON_WALL)}
    )
    answer = solved(document)
    names = temperatures(answer)
    flow = answer.flow("wall:top", "through")
    # Mean of the areas inside and outside: their geometric mean.
    area = math.sqrt(0.200 * 0.100 * 0.204 * 0.104)
    drop = names["top wall inside, mean"] - names["top wall outside, mean"]
    assert drop == pytest.approx(flow * 0.004 / (0.2 * area), rel=MILLIONTH)


@pytest.mark.parametrize(
    ("mounting", "conductance"),
    [
        ({"kind": "bolted_to", "contact_w_per_m2k": 250.0, "surface_c": 10}, 250.0),
        ({"kind": "standing_on", "contact_w_per_m2k": 80.0, "surface_c": 10}, 80.0),
    ],
)
def test_wall_joined_to_a_surface(mounting, conductance):
    answer = solved(box(walls={"back": {"mounting": mounting}}, parts={"Q1": part(**ON_WALL)}))
    names = temperatures(answer)
    area = 0.204 * 0.154
    expected = conductance * area * (names["back wall outside, mean"] - 10)
    assert answer.flow("wall:back", "mounting") == pytest.approx(expected, rel=MILLIONTH)
    assert answer.flow("wall:back", "convection_outside") == 0
    assert answer.flow("wall:back", "radiation_outside") == 0


def outside_k(answer: Solved, wall: str) -> np.ndarray:
    """Temperatures of the cells of a wall's outside [K]."""
    return answer.temperature_c[answer.network.places.wall_outside[wall].cells].ravel() + 273.15


def test_wall_against_a_surface():
    # Closed edges and 2 mm: the air between conducts and no more.
    mounting = {
        "kind": "against_surface",
        "gap_mm": 2,
        "edges": "closed",
        "surface_c": 10,
        "surface_emissivity": 0.6,
    }
    answer = solved(box(walls={"back": {"mounting": mounting}}, parts={"Q1": part(**ON_WALL)}))
    wall_k = outside_k(answer, "back")
    area = 0.204 * 0.154
    conductivity = float(air((wall_k.mean() + 283.15) / 2, 101_325.0).conductivity)
    grey = 1 / (1 / 0.88 + 1 / 0.6 - 1)
    expected = conductivity * area / 0.002 * (wall_k - 283.15).mean()
    expected += grey * area * STEFAN_BOLTZMANN * (wall_k**4 - 283.15**4).mean()
    assert answer.flow("wall:back", "mounting") == pytest.approx(expected, rel=MILLIONTH)
    assert answer.flow("wall:back", "convection_outside") == 0


def test_insulated_wall_lets_no_heat_out():
    document = box(
        walls={"back": {"mounting": {"kind": "insulated"}}}, parts={"Q1": part(**ON_WALL)}
    )
    answer = solved(document)
    for role in ("convection_outside", "radiation_outside", "mounting"):
        assert answer.flow("wall:back", role) == 0


def test_radiation_to_sky_and_surroundings_by_view_factor():
    around = {"radiant_c": 20, "sky": "given", "sky_c": -15}
    document = box(
        surroundings=around, box={"tilt": {"lean_back_deg": 40}}, parts={"Q1": part(**ON_WALL)}
    )
    answer = solved(document)
    lean = math.radians(40)
    cosines = {
        "top": math.cos(lean),
        "bottom": -math.cos(lean),
        "front": math.sin(lean),
        "back": -math.sin(lean),
        "left": 0.0,
        "right": 0.0,
    }
    areas = {"top": 0.204 * 0.104, "front": 0.204 * 0.154, "left": 0.104 * 0.154}
    areas |= {"bottom": areas["top"], "back": areas["front"], "right": areas["left"]}
    for name, cosine in cosines.items():
        wall_k = outside_k(answer, name)
        to_sky = (1 + cosine) / 2
        around = to_sky * 258.15**4 + (1 - to_sky) * 293.15**4
        expected = 0.88 * STEFAN_BOLTZMANN * areas[name] * (wall_k**4 - around).mean()
        found = answer.flow(f"wall:{name}", "radiation_outside")
        assert found == pytest.approx(expected, rel=MILLIONTH)


def test_sun_is_absorbed_by_area_and_absorptivity():
    answer = solved(box(surroundings={"sun_w_per_m2": {"top": 900, "left": 250}}))
    # Grey paint absorbs 0.68 of sunlight; see the library of finishes.
    assert answer.put_in("wall:top", "sun") == pytest.approx(0.68 * 900 * 0.204 * 0.104, rel=1e-12)
    assert answer.put_in("wall:left", "sun") == pytest.approx(0.68 * 250 * 0.104 * 0.154, rel=1e-12)
    assert answer.total_put_in("sun") == pytest.approx(
        answer.put_in("wall:top", "sun") + answer.put_in("wall:left", "sun"), rel=1e-12
    )


@pytest.mark.parametrize(
    ("sky", "expected_c"),
    # Swinbank 1963: 0.0552 T^1.5 for air of 25 C.
    [("clear", 0.0552 * 298.15**1.5 - 273.15), ("overcast", 25.0)],
)
def test_temperature_of_the_sky(sky, expected_c):
    answer = solved(box(surroundings={"sky": sky}))
    assert temperatures(answer)["sky"] == pytest.approx(expected_c, rel=MILLIONTH)


def test_thicker_air_at_altitude_is_thinner():
    high = network_of(box(surroundings={"altitude_m": 5000}))
    pressures = {kind.pressure_pa for kind in high.kinds if hasattr(kind, "pressure_pa")}
    # ISO 2533:1975, table: 54 020 Pa at 5000 m of geopotential altitude (from memory).
    assert len(pressures) == 1
    assert pressures.pop() == pytest.approx(54_020, rel=1e-3)
