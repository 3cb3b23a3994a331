"""Knobs: every link has one or is exact, and gradients against solving with each one turned."""

import random
from itertools import pairwise

import numpy as np
import pytest
from support.cases import COARSE, board, box, part, patched, solved
from support.features import full
from support.random_documents import random_document
from support.reports import SAMPLES

from enclosure_check.check import solve_case
from enclosure_check.description.load import load_document
from enclosure_check.findings.quantities import quantities
from enclosure_check.findings.turning import EXACT_ROLES
from enclosure_check.solve.adjoint import adjoint
from enclosure_check.solve.nearby import solve_nearby
from enclosure_check.solve.steady import SolveOptions

# Everything there is: features, pads, a part on a wall and in the air, sun, sky, mounts, gaps.
DOCUMENT = patched(
    full(),
    {
        "box": {"tilt": {"lean_back_deg": 10}},
        "finishes": {"matt": {"emissivity": 0.8, "solar_absorptivity": 0.5}},
        "defaults": {"wall": {"finish_inside": "matt"}},
        "surroundings": {"sky": "clear", "radiant_c": 20, "sun_w_per_m2": {"top": 400}},
        "walls": {
            "bottom": {"mounting": {"kind": "bolted_to", "contact_w_per_m2k": 50, "surface_c": 30}},
            "left": {"material": "pc_abs"},
            "back": {"mounting": {"kind": "against_surface", "gap_mm": 12, "surface_c": 15}},
        },
        "parts": {
            "R1": part(
                place="right",
                side=None,
                at_mm=[50, 70],
                power_w=2,
                power_slope_pct_per_k=0.3,
                theta_jc_bottom_k_per_w=2,
                pad={"thickness_mm": 0.5, "conductivity_w_per_mk": 2, "contact_mm2k_per_w": 50},
            ),
            "B1": part(place="air", side=None, at_mm=None, height_mm=20, power_w=1, finish="matt"),
        },
    },
)
STEP = 1e-3
# Knobs on the air move it by hundredths of a kelvin with that. Where it is hardly warmer than the
# floor, laws are rounded over such differences: halves of the step quarter what is off.
AIR_STEP = 1e-5
# Films inside are differenced one-sidedly over 1e-4 K, and some of their laws are rounded over 0.1 K:
# up to half a thousandth of a derivative (a tenth of the step leaves a tenth of it); where one is
# next to nothing beside the largest of its sort, a hundred-thousandth of that.
TOLERANCE, ROUNDING = 5e-4, 1e-5
TIGHT = SolveOptions(node_tolerance=1e-11)


# Air through the box, wind past it.
SLOT = {"kind": "hole", "width_mm": 60, "height_mm": 8}
VENTED = box(
    surroundings={"wind_m_per_s": 1.5},
    boards={"main": board(other_power_w=6)},
    parts={"U1": part(power_w=2), "U2": part(power_w=1, at_mm=[20, 20])},
    walls={
        "front": {"openings": {"in": {**SLOT, "at_mm": [100, 10]}}},
        "back": {"openings": {"out": {**SLOT, "at_mm": [100, 140]}}},
    },
)


@pytest.fixture(scope="module", params=[DOCUMENT, VENTED], ids=["everything", "vented"])
def answer(request):
    return solved(request.param, COARSE)


@pytest.fixture(scope="module")
def knobs(answer):
    return quantities(answer)[0]


def turned(answer, knobs, amounts):
    network = knobs.moved(amounts)
    start = np.repeat(answer.solution.rise[network.unknown], amounts.shape[1], axis=1)
    solution = solve_nearby(network, start, answer.inverse, TIGHT)
    assert solution.converged
    return solution.rise + network.reference_k


def test_gradients_are_those_of_solving_again(answer, knobs):
    count = knobs.starts[-1]
    step = np.full(count, STEP)
    step[knobs.starts[1] + np.flatnonzero(knobs.offsets.any(axis=1))] = AIR_STEP
    both = np.concatenate((np.diag(step), -np.diag(step)), axis=1)
    rise = turned(answer, knobs, both)
    places = answer.network.places
    parts = [node for each in places.parts.values() for node in (each.junction, each.case)]
    walls = [plate.mean for plate in places.wall_outside.values()]
    nodes = np.array([*parts, *walls, places.air, *places.air_nodes])
    found = adjoint(answer.network, answer.solution.rise, nodes)
    gradient = knobs.gradient(answer.solution.rise, found.weight, found.derivatives)
    by_solving = ((rise[nodes, :count] - rise[nodes, count:]) / (2 * step)).T
    bounds = (0, *knobs.starts)
    for start, end in pairwise(bounds):
        if end > start:
            largest = np.abs(by_solving[start:end]).max()
            assert largest > 0.05
            np.testing.assert_allclose(
                gradient[start:end], by_solving[start:end], rtol=TOLERANCE, atol=ROUNDING * largest
            )


def test_no_turn_leaves_every_heat_as_it_is(answer, knobs):
    still = knobs.moved(np.zeros((knobs.starts[-1], 1)))
    rise = answer.solution.rise
    np.testing.assert_array_equal(still.heat(rise), answer.network.heat(rise))
    np.testing.assert_array_equal(still.imbalance(rise), answer.network.imbalance(rise))


def test_jacobian_of_turned_links_is_that_of_their_heat(answer, knobs):
    amounts = 0.1 * np.random.default_rng(3).standard_normal((knobs.starts[-1], 1))
    network, rise = knobs.moved(amounts), answer.solution.rise.copy()
    step = 1e-4
    direction = np.random.default_rng(4).standard_normal(rise.shape)
    direction[network.fixed] = 0.0
    change = network.imbalance(rise + step * direction) - network.imbalance(rise - step * direction)
    product = network.jacobian(rise)[0] @ direction[network.unknown]
    expected = change[network.unknown] / (2 * step)
    np.testing.assert_allclose(product, expected, rtol=0, atol=1e-4 * np.abs(expected).max())


def without_knob(answer):
    """Labels of links that are uncertain and yet no knob turns."""
    knobs, _ = quantities(answer)
    radiating = knobs.emitters.finish
    missing = set()
    for number, (knob, kind) in enumerate(zip(knobs.link, answer.network.kinds, strict=True)):
        turned_by = knob >= 0
        if len(radiating) == len(kind.a) and type(kind).__name__ == "Radiation":
            turned_by |= radiating >= 0
        if any(index == number for index, _ in knobs.parameter):
            continue
        if type(kind).__name__ == "InsideAir":
            # Films are turned by factors on surfaces.
            turned_by[: 2 * len(kind.cell)] = True
            assert (knobs.films == 1.0).any(axis=0).all()
        missing |= {answer.network.labels[index] for index in kind.label[~turned_by].tolist()}
    return {label for label in missing if label.role not in EXACT_ROLES}


@pytest.mark.parametrize("path", SAMPLES, ids=lambda path: path.stem)
def test_every_link_of_the_samples_is_turned_or_exact(path):
    answer = solve_case(load_document(str(path)).cases()[0])
    assert without_knob(answer) == set()


@pytest.mark.parametrize("seed", range(6))
def test_every_link_of_any_document_is_turned_or_exact(seed):
    assert without_knob(solved(random_document(random.Random(seed)), COARSE)) == set()


def test_every_link_of_a_box_with_everything_is_turned_or_exact(answer):
    assert without_knob(answer) == set()


def test_an_empty_box_in_the_sun():
    document = box(surroundings={"sun_w_per_m2": {"top": 800}})
    assert without_knob(solved(document, COARSE)) == set()
