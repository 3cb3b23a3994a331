"""The hand estimate against one made here from textbook laws, with its own root finding."""

import math

import numpy as np
import pytest
from scipy.optimize import brentq
from support.cases import board, box, checked, part, patched, solved

from enclosure_check.findings.assess import assess
from enclosure_check.physics.air import air

WARM = box(
    defaults={"wall": {"material": "aluminium_5052", "thickness_mm": 2, "finish_outside": "own"}},
    finishes={"own": {"emissivity": 0.85}},
    boards={"main": board(other_power_w=6)},
    parts={"U1": part(power_w=2, theta_jb_k_per_w=3)},
)
AIR_K, SIGMA, GRAVITY = 298.15, 5.670374419e-8, 9.80665


def rayleigh(rise: float, length: float) -> tuple[float, float, float]:
    """Rayleigh number, Prandtl number and conductivity at film temperature."""
    at = air(AIR_K + rise / 2, 101_325.0)
    ra = GRAVITY / (AIR_K + rise / 2) * rise * length**3 * float(at.prandtl)
    return ra / float(at.kinematic_viscosity) ** 2, float(at.prandtl), float(at.conductivity)


def side(rise: float, height: float) -> float:
    """Film of a vertical plate (Churchill & Chu 1975, laminar)."""
    ra, pr, k = rayleigh(rise, height)
    nusselt = 0.68 + 0.670 * ra**0.25 / (1 + (0.492 / pr) ** (9 / 16)) ** (4 / 9)
    return nusselt * k / height


def level(rise: float, a: float, b: float, constant: float) -> float:
    """Film of a horizontal plate (McAdams 1954), 0.54 above and 0.27 below."""
    length = a * b / (2 * (a + b))
    ra, _, k = rayleigh(rise, length)
    return constant * ra**0.25 * k / length


def heat_by_hand(rise: float, walls: dict[str, float]) -> float:
    """Heat of the isothermal box with the areas of its open walls."""
    w, d, h = 0.204, 0.104, 0.154
    films = {
        "left": side(rise, h),
        "right": side(rise, h),
        "front": side(rise, h),
        "back": side(rise, h),
        "top": level(rise, w, d, 0.54),
        "bottom": level(rise, w, d, 0.27),
    }
    radiation = 0.85 * SIGMA * ((AIR_K + rise) ** 4 - AIR_K**4)
    return sum(area * (films[name] * rise + radiation) for name, area in walls.items())


AREAS = {
    "left": 0.104 * 0.154,
    "right": 0.104 * 0.154,
    "front": 0.204 * 0.154,
    "back": 0.204 * 0.154,
    "top": 0.204 * 0.104,
    "bottom": 0.204 * 0.104,
}


def test_a_free_box():
    found = checked(WARM).hand_estimate
    assert found.heat_w == pytest.approx(8.0, rel=1e-6)
    assert found.area_m2 == pytest.approx(sum(AREAS.values()), rel=1e-12)
    assert found.flux_w_per_m2 == pytest.approx(8.0 / sum(AREAS.values()), rel=1e-6)
    expected = brentq(lambda rise: heat_by_hand(rise, AREAS) - 8.0, 0.1, 100)
    # The disc's conduction below the law of a warm top (0.005 % at Ra 1e4), and a table of rises
    # 20 % apart between which heat goes as a power of the rise.
    assert found.plates_wall_rise_k == pytest.approx(expected, rel=2e-3)


def test_a_box_with_walls_that_are_not_open():
    document = patched(
        WARM,
        {
            "walls": {
                "bottom": {"mounting": {"kind": "bolted_to", "contact_w_per_m2k": 20}},
                "back": {"mounting": {"kind": "insulated"}},
            }
        },
    )
    answer = solved(document)
    finding = assess(answer)
    found = finding.hand_estimate
    areas = {name: area for name, area in AREAS.items() if name not in ("bottom", "back")}
    mounting = next(row.mounting_w for row in finding.walls if row.name == "bottom")
    assert mounting > 0.5
    # What the open walls give off, which is not all of it.
    assert found.heat_w == pytest.approx(8.0 - mounting, rel=1e-6)
    assert found.area_m2 == pytest.approx(sum(areas.values()), rel=1e-12)
    # The table takes the perimeter as open as it is: the top and the sides have an edge less.
    expected = brentq(lambda rise: heat_by_hand(rise, areas) - found.heat_w, 0.1, 100)
    assert found.plates_wall_rise_k == pytest.approx(expected, rel=0.03)
    rises = [row.outside_c - 25 for row in finding.walls if row.name in areas]
    weights = [areas[row.name] for row in finding.walls if row.name in areas]
    mean = float(np.average(rises, weights=weights))
    assert found.wall_rise_k == pytest.approx(mean, rel=1e-12)
    assert found.film_w_per_m2k == pytest.approx(found.heat_w / (found.area_m2 * mean), rel=1e-12)


def test_a_box_on_its_back_stands_on_other_faces():
    """Tilt turns the faces' laws: the front is then the top, and the film differs."""
    lying = patched(WARM, {"box": {"tilt": {"lean_back_deg": 90}}})
    flat = brentq(
        lambda rise: (
            sum(
                (
                    AREAS["front"] * level(rise, 0.204, 0.154, 0.54),
                    AREAS["back"] * level(rise, 0.204, 0.154, 0.27),
                    2 * AREAS["left"] * side(rise, 0.104),
                    2 * AREAS["top"] * side(rise, 0.104),
                )
            )
            * rise
            + sum(AREAS.values()) * 0.85 * SIGMA * ((AIR_K + rise) ** 4 - AIR_K**4)
            - 8.0
        ),
        0.1,
        100,
    )
    found = checked(lying).hand_estimate.plates_wall_rise_k
    assert found == pytest.approx(flat, rel=2e-3)
    assert found != pytest.approx(checked(WARM).hand_estimate.plates_wall_rise_k, rel=5e-3)


@pytest.mark.parametrize("lean", [0.0, 15.0, 45.0, 90.0])
def test_the_tilted_hand_estimate_moves_without_jumps(lean):
    def rise(angle: float) -> float:
        tilted = patched(WARM, {"box": {"tilt": {"lean_back_deg": angle}}})
        return checked(tilted).hand_estimate.plates_wall_rise_k

    assert rise(lean + 0.01) == pytest.approx(rise(lean), rel=1e-3)


def test_nothing_flows_no_estimate():
    found = checked(box()).hand_estimate
    assert (found.heat_w, found.wall_rise_k) == (0, 0)
    assert found.film_w_per_m2k is None
    assert found.plates_wall_rise_k is None


def test_a_box_colder_than_its_air_has_no_estimate_of_its_rise():
    cold = box(
        walls={
            "bottom": {"mounting": {"kind": "bolted_to", "contact_w_per_m2k": 200, "surface_c": 5}}
        }
    )
    found = checked(cold).hand_estimate
    assert found.heat_w < 0
    assert found.plates_wall_rise_k is None
    assert found.wall_rise_k < -1
    assert found.film_w_per_m2k > 0
    assert math.isclose(found.flux_w_per_m2, found.heat_w / found.area_m2)
