"""What is told about numbers for less than the derivative, against the derivative."""

from pathlib import Path

import numpy as np
import pytest
import yaml
from support.cases import board, box, part

from enclosure_check.check import solve_case
from enclosure_check.description.load import load_document
from enclosure_check.description.numbers import numbers
from enclosure_check.findings.estimates import LARGEST_MISS, Estimates
from enclosure_check.findings.parts import point
from enclosure_check.findings.rebuilt import Rebuilding
from enclosure_check.solve.adjoint import adjoint

RIVER = Path(__file__).parent.parent.parent / "sample_boards" / "river_gauge_station.yaml"
LAYER = {"thickness_um": 35, "coverage_pct": 50}
DOCUMENT = box(
    boards={
        "main": board(
            other_power_w=3,
            from_walls_mm={"front": 30},
            copper={"one": LAYER},
            zones={
                "pour": {
                    "at_mm": [30, 30],
                    "length_mm": 30,
                    "width_mm": 30,
                    "copper": {"two": LAYER},
                }
            },
        )
    },
    parts={
        "U1": part(at_mm=[25, 25], power_w=2, theta_jb_k_per_w=8),
        "U2": part(at_mm=[95, 75], power_w=1, theta_jb_k_per_w=10),
        "U3": part(at_mm=[42, 25], power_w=1, theta_jb_k_per_w=10),
        "U4": part(at_mm=[95, 25], power_w=1, theta_jb_k_per_w=10),
        "U5": part(
            at_mm=[20, 72],
            power_w=1,
            pad={"to": "front", "thickness_mm": 28, "conductivity_w_per_mk": 3},
        ),
    },
)


def estimates_of(path, name):
    """Estimates for the junction or case of a part, what they rest on, and all numbers."""
    document = load_document(str(path))
    case = document.cases()[0]
    solved, variation = solve_case(case), document.variation(case)
    node = point(solved, name, "case")
    weights = adjoint(solved.network, solved.solution.rise, np.array([node]))
    rebuilding = Rebuilding(solved, weights, variation.case_with)
    found = Estimates(rebuilding, variation.document, name)
    return found, rebuilding, numbers(variation.node)


@pytest.fixture(scope="module")
def of_document(tmp_path_factory):
    path = tmp_path_factory.mktemp("estimates") / "box.yaml"
    path.write_text(yaml.safe_dump(DOCUMENT, sort_keys=False), "utf-8")
    return estimates_of(path, "U1")


@pytest.fixture(scope="module")
def of_river():
    return estimates_of(RIVER, "BAT")


COPPER = [
    ("boards", "main", "copper", "one", "thickness_um"),
    ("boards", "main", "copper", "one", "coverage_pct"),
    ("boards", "main", "zones", "pour", "copper", "two", "coverage_pct"),
]


@pytest.mark.parametrize("path", COPPER)
def test_copper_by_the_conductivity_it_makes(of_document, path, monkeypatch):
    found, rebuilding, values = of_document
    by = found.about(path, values[path])
    exact = rebuilding.derivative(path, values[path])[0]
    assert by == pytest.approx(exact, rel=0.01)
    # Once the board is known, other layers ask for no network.
    monkeypatch.setattr(rebuilding, "moved", None)
    assert found.about(path, values[path]) == by


def test_estimates_are_not_much_less_than_derivatives(of_river):
    found, rebuilding, values = of_river
    largest = 0.0
    doubtful = []
    for path, value in list(values.items())[::3]:
        exact = rebuilding.derivative(path, value)
        by = found.about(path, value)
        assert (exact is None) == (by is None)
        if exact is not None:
            per_pct = abs(exact[0] * value / 100)
            largest = max(largest, per_pct)
            if abs(exact[0]) > LARGEST_MISS * abs(by) * 1.001:
                doubtful.append(per_pct)
    # What is missed by more are places that hardly do anything, in which two ways cancel.
    assert all(per_pct < 0.005 * largest for per_pct in doubtful)


def test_parts_do_no_more_than_the_most(of_river):
    found, _, values = of_river
    told = 0
    for path, value in values.items():
        most = found.most(path)
        if most is not None:
            by = found.about(path, value)
            assert by is None or abs(by) <= most, path
            told += 1
    assert told > 30


def test_no_most_is_known_of_what_may_do_more(of_document):
    found, _, _ = of_document
    assert found.most(("parts", "U2", "at_mm", "0")) > 0
    assert found.most(("parts", "U2", "height_mm")) > 0
    # The part itself, one beside it, one that shares its patch, one with a pad; other numbers.
    for name in ("U1", "U3", "U5"):
        assert found.most(("parts", name, "at_mm", "0")) is None
        assert found.most(("parts", name, "length_mm")) is None
    assert found.most(("parts", "U2", "power_w")) is None
    assert found.most(("box", "width_mm")) is None
    assert found.most(("boards", "main", "from_walls_mm", "front")) is None
