"""The network against an assembly written independently and solved by a general root finder.

Both balance the same equations, so they may differ by no more than what the two solvers leave out
of balance: times the largest response of any temperature to it, this is checked to be below the
ten-thousandth of a kelvin that is asked for. (Over 53 random documents it was a millionth.)
"""

import random
from pathlib import Path

import numpy as np
import pytest
from scipy.optimize import root
from support.balances import Balances
from support.cases import box, case_of, part, patched
from support.random_documents import random_document

from enclosure_check.description.case import Case
from enclosure_check.description.load import load_document
from enclosure_check.network.build import build_network
from enclosure_check.network.network import Network
from enclosure_check.solve.steady import solve_steady

SAMPLES = Path(__file__).parents[2] / "sample_boards"
AGREE_K = 1e-4


def own_name(case: Case, network: Network, number: int) -> str:
    """The name of a node of the network in the other assembly."""
    label = network.node_labels[number]
    places = network.places
    for name, nodes in places.parts.items():
        if number == nodes.junction:
            return f"{name} junction"
        if number == nodes.case:
            return f"{name} case"
    for name, node in places.wall_outside.items():
        if number == node:
            return f"{name} outside"
    for name, node in places.wall_inside.items():
        if number == node:
            return f"{name} inside"
    for (board, side), node in places.board_sides.items():
        if number == node:
            return f"{board} {side}"
    for name, row in case.parts.items():
        if label.endswith(f"under part:{name}"):
            is_pad = row.pad is not None and row.place == "board" and label.startswith(row.pad.wall)
            return f"{name} pad foot" if is_pad else f"{name} foot"
    return {"inside air": "air", "inside radiant mean": "radiant mean"}[label]


def compare(case: Case) -> None:
    network = build_network(case)
    solution = solve_steady(network)
    assert solution.converged
    balances = Balances(case)
    start = np.full(len(balances.unknown), balances.given["ambient"] + 10.0)
    found = root(balances.residual, start, method="hybr", options={"xtol": 1e-13, "maxfev": 20_000})
    unknown = network.unknown
    jacobian = network.jacobian(solution.rise)[0][np.ix_(unknown, unknown)]
    response = np.abs(np.linalg.inv(jacobian)).sum(axis=1).max()
    left = np.abs(found.fun).max() + solution.worst_imbalance_w[0]
    assert response * left < AGREE_K
    other = dict(zip(balances.unknown, found.x.tolist(), strict=True))
    ours = {
        own_name(case, network, number): solution.rise[number, 0] + network.reference_k[0]
        for number in network.unknown.tolist()
    }
    assert ours.keys() == other.keys()
    # The answer is not the trivial one.
    assert max(abs(value - balances.given["ambient"]) for value in other.values()) > 0.5
    for name, kelvin in other.items():
        assert ours[name] == pytest.approx(kelvin, rel=0, abs=AGREE_K), name


def test_a_body_in_the_air_of_an_empty_box():
    body = {
        "place": "air",
        "length_mm": 60,
        "width_mm": 40,
        "height_mm": 20,
        "power_w": 3,
        "power_slope_pct_per_k": 0.39,
        "theta_jc_top_k_per_w": 4,
    }
    compare(case_of(box(parts={"B1": body})))


def test_a_wall_mounted_box_outdoors_with_two_parts():
    document = box(
        walls={
            "back": {"mounting": {"kind": "against_surface", "gap_mm": 3, "surface_c": 18}},
            "bottom": {"mounting": {"kind": "bolted_to", "contact_w_per_m2k": 120}},
            "left": {"material": "pc_abs", "thickness_mm": 3},
        },
        box={"tilt": {"lean_back_deg": 12, "roll_right_deg": -7}},
        surroundings={"sky": "clear", "sun_w_per_m2": {"top": 600}, "altitude_m": 1500},
        boards={
            "main": {
                "parallel_to": "left",
                "length_mm": 80,
                "width_mm": 110,
                "copper": {"one": {"thickness_um": 70, "coverage_pct": 80}},
                "from_walls_mm": {"left": 20},
                "other_power_w": 2,
            }
        },
        parts={
            "U1": {
                "place": "main",
                "side": "left",
                "at_mm": [30, 40],
                "length_mm": 14,
                "width_mm": 10,
                "height_mm": 2,
                "power_w": 0.8,
                "power_doubling_k": 60,
                "theta_jc_top_k_per_w": 6,
                "theta_jc_bottom_k_per_w": 3,
                "pad": {"to": "left", "thickness_mm": 20, "conductivity_w_per_mk": 5},
            },
            "R1": {
                "place": "top",
                "at_mm": [50, 50],
                "length_mm": 20,
                "width_mm": 20,
                "height_mm": 5,
                "power_w": 1,
                "bottom_contact_k_per_w": 2,
            },
        },
    )
    compare(case_of(document))


@pytest.mark.parametrize("seed", [1, 4, 6, 23])
def test_a_random_document(seed):
    document = random_document(random.Random(seed))
    lit = patched(document, {"parts": {"extra": part(**BODY)}})
    compare(case_of(lit))


BODY = {
    "place": "air",
    "side": None,
    "at_mm": None,
    "length_mm": 8,
    "width_mm": 8,
    "height_mm": 8,
    "power_w": 0.2,
}


@pytest.mark.parametrize("sample", sorted(SAMPLES.glob("*.yaml")), ids=lambda path: path.stem)
def test_the_hottest_case_of_a_sample(sample):
    cases = load_document(str(sample)).cases()
    compare(max(cases, key=lambda case: case.surroundings.air_c))
