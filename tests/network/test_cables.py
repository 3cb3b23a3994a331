"""Cables through walls: fins on both sides, and their loss."""

import json
import re

import numpy as np
import pytest
from support.cases import patched
from support.features import CABLE, answer, boxed, conductance
from support.reports import SMALL, report_of

from enclosure_check.findings.heat import heat_balance, wall_findings
from enclosure_check.network.cables import cable_conductance, cable_film
from enclosure_check.report.json_report import write_json
from enclosure_check.report.options import WriterOptions
from enclosure_check.report.text import write_text

ZERO_C = 273.15


@pytest.fixture(scope="module")
def plain():
    """The box with nothing more."""
    return answer(boxed())


def cabled(**changes):
    return boxed(walls={"left": {"cables": {"a": {**CABLE, **changes}}}})


def test_cable_carries_from_air_to_air(plain):
    solved = answer(cabled())
    film = cable_film(3e-3, 25 + ZERO_C, 101325.0)
    each = cable_conductance(1.5e-6, 3e-3, 0.15, film)
    assert conductance(solved, "wall:left", "cable") == pytest.approx(10 * float(each), rel=1e-5)
    inside = solved.at(solved.network.places.air)
    flow = solved.flow("wall:left", "cable")
    assert flow == pytest.approx(10 * float(each) * (inside - 25), rel=1e-4)
    walls = {wall.name: wall.cables_w for wall in wall_findings(solved)}
    assert walls.pop("left") == flow
    assert set(walls.values()) == {0.0}
    assert inside < plain.at(plain.network.places.air)


def test_film_of_a_cable():
    """Churchill & Chu (1975) at 10 K, worked by hand for 3 mm in air of 303.15 K; 5.4 of radiation.

    Ra = g beta dT D3 / (nu a) = 9.81 x 10 x 2.7e-8 / 303.15 / (1.606e-5 x 2.276e-5) = 23.9, so
    Nu = (0.60 + 0.387 x 1.697 / 1.206)^2 = 1.31 and h = 1.31 x 0.02662 / 0.003 = 11.6. Air of
    303 K from textbook tables (from memory).
    """
    assert float(cable_film(3e-3, 298.15, 101325.0)) == pytest.approx(11.6 + 5.4, rel=0.005)


def test_conductance_of_a_cable_against_differences():
    """A fin through a wall in 20,000 pieces, 150 mm inside and 3 m outside."""
    section, outer, film, inside, outside = 1.5e-6, 3e-3, 15.0, 0.15, 3.0
    core, surface = 386.0 * section, film * np.pi * outer
    step = 1.5e-4
    n, m = round(inside / step), round(outside / step)
    diagonal = np.full(n + m, surface * step + 2 * core / step)
    diagonal[[0, -1]] -= core / step
    right = np.zeros(n + m)
    right[:n] = surface * step  # 1 K inside, 0 K outside
    upper = np.full(n + m - 1, -core / step)
    from scipy.linalg import solve_banded

    banded = np.zeros((3, n + m))
    banded[0, 1:], banded[1], banded[2, :-1] = upper, diagonal, upper
    temperature = solve_banded((1, 1), banded, right)
    heat = surface * step * np.sum(1.0 - temperature[:n])
    found = float(cable_conductance(section, outer, inside, film))
    assert found == pytest.approx(float(heat), rel=1e-4)


def test_limits_of_a_cable():
    long = float(cable_conductance(1.5e-6, 3e-3, 10.0, 15.0))
    endless = np.sqrt(15 * np.pi * 3e-3 * 386 * 1.5e-6)
    assert long == pytest.approx(endless / 2, rel=1e-6)
    # Short: the surface inside alone.
    short = float(cable_conductance(1.5e-6, 3e-3, 1e-4, 15.0))
    assert short == pytest.approx(15 * np.pi * 3e-3 * 1e-4, rel=0.01)
    shape = cable_conductance([1e-6, 2e-6], 3e-3, np.full((3, 1), 0.1), 15.0).shape
    assert shape == (3, 2)


def test_loss_of_a_cable_warms_the_inside_air():
    """5 A through 10 conductors of 1.5 mm2, 150 mm: 10 x 25 x 1.72e-8 x 0.15 / 1.5e-6 at 20 C."""
    solved = answer(cabled(current_a=5))
    at_20 = 10 * 25 * 1.72e-8 * 0.15 / 1.5e-6
    air_c = solved.at(solved.network.places.air)
    found = solved.put_in("cable:left/a", "power")
    assert found == pytest.approx(at_20 * (1 + 0.00393 * (air_c - 20)), rel=1e-3)
    walls = wall_findings(solved)
    assert heat_balance(solved, walls).generated_w == pytest.approx(6 + found)


def test_cable_without_current_puts_nothing_in():
    assert not any(label.owner.startswith("cable:") for label in answer(cabled()).network.labels)


def test_report_tells_of_cables_where_there_are_any(tmp_path):
    walls = {"left": {"cables": {"a": {**CABLE, "current_a": 4}}}}
    texts = []
    for document in (SMALL, patched(SMALL, {"walls": walls})):
        report = report_of(tmp_path, document)
        texts.append(write_text(report, WriterOptions()))
        data = json.loads(write_json(report, WriterOptions()))["conditions"][0]
        by_wall = {wall["name"]: wall["cables_w"] for wall in data["walls"]}
        assert data["heat_balance"]["cables_w"] == sum(by_wall.values())
        assert abs(data["heat_balance"]["imbalance_w"]) < 1e-6
        assert (by_wall["left"] > 0) is (document is not SMALL)
        assert {by_wall[name] for name in by_wall if name != "left"} == {0.0}
    without, told = (text.partition("\n\n")[2].partition("Assumed")[0] for text in texts)
    assert "Cable" not in without
    assert "cable" not in without
    assert "Cable W" in told
    assert "parts, boards and cables" in told
    assert re.search(r"\+ cables\s+[\d.]+ \(\d+ %\)", told)
