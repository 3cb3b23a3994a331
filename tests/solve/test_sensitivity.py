"""Adjoint sensitivities against solving again with every number moved up and down."""

from dataclasses import replace

import numpy as np
import pytest
from support.cases import COARSE, board, box, network_of, part, patched
from support.networks import together

from enclosure_check.network.network import Network
from enclosure_check.solve.sensitivity import sensitivities
from enclosure_check.solve.steady import SolveOptions, solve_steady

# A box with a little of everything: pads, a part on a wall and in the air, sun, sky and a mount,
# power that grows.
DOCUMENT = box(
    box={"tilt": {"lean_back_deg": 20, "roll_right_deg": 10}},
    surroundings={"sky": "given", "sky_c": 5, "radiant_c": 20, "sun_w_per_m2": {"top": 400}},
    walls={
        "bottom": {"mounting": {"kind": "bolted_to", "contact_w_per_m2k": 50, "surface_c": 30}},
        "left": {"material": "pc_abs"},
        "back": {"mounting": {"kind": "against_surface", "gap_mm": 12, "surface_c": 15}},
    },
    boards={"main": board(other_power_w=3)},
    parts={
        "U1": part(
            power_w=2,
            power_doubling_k=200,
            theta_jc_top_k_per_w=4,
            theta_jb_k_per_w=6,
            pad={"to": "front", "thickness_mm": 50, "conductivity_w_per_mk": 4},
        ),
        "U2": part(at_mm=[20, 20], power_w=1, power_slope_pct_per_k=0.4, side="back"),
        "R1": part(place="right", side=None, at_mm=[50, 70], power_w=2, bottom_contact_k_per_w=1),
        "B1": part(place="air", side=None, at_mm=None, height_mm=20, power_w=1),
    },
)
# Central differences over this share of each number: their error goes with its square.
SHARE = 1e-3
# The differences' own error, and what is left of it where a sensitivity is next to nothing beside
# the largest of its kind: the solver's share over a change of a thousandth.
# Films are differenced one-sidedly, which leaves a hundred-thousandth of the largest.
TOLERANCE, ROUNDING = 2e-4, 1e-5
TIGHT = SolveOptions(node_tolerance=1e-10)


@pytest.fixture(scope="module")
def network() -> Network:
    return network_of(DOCUMENT, COARSE)


@pytest.fixture(scope="module")
def solution(network):
    solution = solve_steady(network, options=TIGHT)
    assert solution.converged
    return solution


@pytest.fixture(scope="module", params=["junction of U1", "inside air", "wall outside"])
def node(request, network) -> int:
    places = network.places
    return {
        "junction of U1": places.parts["U1"].junction,
        "inside air": places.air,
        "wall outside": int(places.wall_outside["top"].cells[0, 1]),
    }[request.param]


def solved_again(network: Network, variants: list[Network], start: np.ndarray, node: int):
    """Temperatures of a node in all variants [K above the reference of each]."""
    pair = together(variants)
    again = solve_steady(pair, np.repeat(start, len(variants), axis=1), TIGHT)
    assert again.converged
    return again.rise[node]


def assert_close(found: np.ndarray, expected: np.ndarray) -> None:
    assert found.shape == expected.shape
    largest = np.abs(expected).max()
    assert largest > 0
    np.testing.assert_allclose(found, expected, rtol=TOLERANCE, atol=ROUNDING * largest)


def kinds() -> list[tuple[int, str]]:
    found = [
        (index, name)
        for index, kind in enumerate(network_of(DOCUMENT, COARSE).kinds)
        for name in kind.PARAMETERS
    ]
    # Conduction 1, radiation 4, patches 3, a gap outside 1, the box 2, the inside air 1.
    assert len(found) == 12
    return found


@pytest.mark.parametrize(("index", "name"), kinds())
def test_by_every_parameter_of_every_link(network, solution, node, index, name):
    kind = network.kinds[index]
    own = getattr(kind, name)
    # Every sixth of a kind's values and its last one stand for all.
    links = sorted({*range(0, len(own), max(len(own) // 6, 1)), len(own) - 1})
    # What is too small for a difference to show: the trace that holds mirrors at rest.
    links = [link for link in links if abs(own[link, 0]) > 1e-9]
    steps = SHARE * np.abs(own[links, 0])
    variants = []
    for link, step in zip(links, steps, strict=True):
        for sign in (1, -1):
            value = own.copy()
            value[link] += sign * step
            kinds = list(network.kinds)
            kinds[index] = kind.with_parameter(name, value)
            variants.append(replace(network, kinds=tuple(kinds)))
    at = solved_again(network, variants, solution.rise[network.unknown], node)
    expected = (at[0::2] - at[1::2]) / (2 * steps)
    found = sensitivities(network, solution, node).by_parameter[index][name]
    assert found.shape == (len(own),)
    assert_close(found[links], expected)


def test_by_every_source(network, solution, node):
    power = network.sources.power
    steps = SHARE * power[:, 0]
    variants = []
    for source, step in enumerate(steps):
        for sign in (1, -1):
            moved = power.copy()
            moved[source] += sign * step
            variants.append(replace(network, sources=replace(network.sources, power=moved)))
    at = solved_again(network, variants, solution.rise[network.unknown], node)
    expected = (at[0::2] - at[1::2]) / (2 * steps)
    found = sensitivities(network, solution, node).by_power
    assert (found > 0).all()
    assert_close(found, expected)


def test_by_every_given_temperature(network, solution, node):
    fixed = np.flatnonzero(network.fixed)
    assert len(fixed) == 6
    step = 0.05
    variants = []
    for place in fixed:
        for sign in (1, -1):
            moved = network.fixed_rise.copy()
            moved[place] += sign * step
            variants.append(replace(network, fixed_rise=moved))
    at = solved_again(network, variants, solution.rise[network.unknown], node)
    expected = (at[0::2] - at[1::2]) / (2 * step)
    found = sensitivities(network, solution, node).by_fixed
    assert (found[~network.fixed] == 0).all()
    assert_close(found[fixed], expected)


def test_all_surroundings_together_and_nothing_else_warm_a_still_box_as_much():
    """Without power and radiation differences, a kelvin outside is a kelvin inside."""
    network = network_of(box(boards={"main": board()}))
    solution = solve_steady(network)
    found = sensitivities(network, solution, network.places.air)
    # Without a difference the films are differenced over 1e-4 K, where the shelter of a box's faces
    # is already under way from one sign of the difference to the other: 0.05 / 100 of a film.
    assert found.by_fixed.sum() == pytest.approx(1.0, rel=1e-3)


def test_power_warms_its_own_part_most(network, solution):
    nodes = network.places.parts
    own = sensitivities(network, solution, nodes["U1"].junction)
    place = list(network.sources.node).index(nodes["U1"].junction)
    assert own.by_power[place] == own.by_power.max()


def test_a_given_temperature_has_no_sensitivities(network, solution):
    with pytest.raises(ValueError, match="'surrounding air' is given"):
        sensitivities(network, solution, network.places.ambient)


def test_several_variants_have_none(network):
    pair = together(
        [network, network_of(patched(DOCUMENT, {"surroundings": {"air_c": 30}}), COARSE)]
    )
    with pytest.raises(ValueError, match="one variant"):
        sensitivities(pair, solve_steady(pair), network.places.air)
