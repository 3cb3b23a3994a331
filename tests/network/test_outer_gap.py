"""Outer walls across a gap from a surface or a neighbour: limits, continuity and derivatives."""

import numpy as np
import pytest

from enclosure_check.description.document import Document
from enclosure_check.description.resolve import resolve
from enclosure_check.network.build import build_network
from enclosure_check.network.outer_gap import OuterGap
from enclosure_check.physics.air import SEA_LEVEL_PRESSURE, air
from enclosure_check.physics.plates import inclined_plate
from enclosure_check.solve.steady import solve_steady

AIR_K = 298.15


def document(mounting, tilt=0.0):
    return {
        "title": "box on a wall",
        "defaults": {
            "wall": {
                "material": "mild_steel",
                "thickness_mm": 2.0,
                "finish_outside": "grey_paint",
            }
        },
        "box": {
            "width_mm": 300.0,
            "depth_mm": 100.0,
            "height_mm": 400.0,
            "tilt": {"lean_back_deg": tilt},
        },
        "walls": {"back": {"mounting": mounting}},
        "parts": {
            "P1": {
                "place": "air",
                "length_mm": 50.0,
                "width_mm": 30.0,
                "height_mm": 50.0,
                "power_w": 30.0,
            }
        },
        "surroundings": {"air_c": 25.0},
    }


def solved(mounting, tilt=0.0):
    case = resolve(Document.model_validate(document(mounting, tilt)), "base")
    network = build_network(case)
    solution = solve_steady(network)
    assert solution.converged
    heat = network.heat(solution.rise)[:, 0]
    flows = dict(
        zip(network.labels, np.bincount(network.link_label, heat, len(network.labels)), strict=True)
    )
    back = float(solution.rise[network.places.wall_outside["back"].mean, 0])
    air_w = flows.get(("wall:back", "convection_outside"), 0.0)
    surface_w = flows.get(("wall:back", "mounting"), 0.0)
    return back, air_w, surface_w


def gap(network):
    (kind,) = (kind for kind in network.kinds if isinstance(kind, OuterGap))
    return kind


def built(mounting):
    return build_network(resolve(Document.model_validate(document(mounting)), "base"))


def test_a_narrow_gap_conducts_straight_and_gives_nothing_to_the_air():
    for width_mm in (0.2, 1.0):
        kind = gap(built({"kind": "against_surface", "gap_mm": width_mm}))
        reference = np.array([AIR_K])
        to_air, straight = kind.coefficients(np.array([[20.0], [0.0], [0.0]]), reference)[:, 0]
        conductivity = float(air(AIR_K + 10.0, SEA_LEVEL_PRESSURE).conductivity)
        # The aim is 0.1 %; at 1 mm the air takes that much.
        assert straight == pytest.approx(conductivity / (width_mm * 1e-3), rel=1e-3)
        assert to_air < 1e-3 * straight


def test_a_wide_gap_leaves_the_free_film_and_nothing_straight():
    kind = gap(built({"kind": "against_surface", "gap_mm": 1000.0}))
    reference = np.array([AIR_K])
    to_air, straight = kind.coefficients(np.array([[20.0], [0.0], [0.0]]), reference)[:, 0]
    free = inclined_plate(20.0, AIR_K + 10.0, SEA_LEVEL_PRESSURE, 0.4, 0.1, 0.0).coefficient
    assert to_air == pytest.approx(float(free), rel=0.01)
    assert abs(straight) < 0.02 * to_air


def test_closed_edges_give_the_air_nothing():
    back, air_w, surface_w = solved(
        {"kind": "against_surface", "gap_mm": 20.0, "edges": "closed", "surface_c": 25.0}
    )
    assert air_w == 0.0
    assert surface_w > 1.0
    open_back, open_air_w, _ = solved(
        {"kind": "against_surface", "gap_mm": 20.0, "edges": "open", "surface_c": 25.0}
    )
    assert open_air_w > 1.0
    assert open_back < back


def test_the_wall_warms_with_the_gap_until_air_flows_through_it():
    backs, airs, surfaces = zip(
        *(
            solved({"kind": "against_surface", "gap_mm": width, "surface_c": 25.0})
            for width in (0.5, 1.0, 2.0, 4.0, 6.0, 9.0, 13.0, 20.0, 40.0, 100.0)
        ),
        strict=True,
    )
    assert all(np.diff(airs) > 0)
    assert all(np.diff(surfaces) < 0)
    # Continuous: no step of the wall's rise larger than that of the first doublings.
    assert max(np.abs(np.diff(backs))) <= max(np.abs(np.diff(backs[:4])))


def test_a_neighbour_as_warm_as_the_wall_takes_nothing_but_hinders_the_air():
    back, air_w, surface_w = solved({"kind": "neighbour", "gap_mm": 5.0})
    assert surface_w == pytest.approx(0.0, abs=1e-9)
    wide_back, wide_air_w, _ = solved({"kind": "neighbour", "gap_mm": 60.0})
    assert wide_air_w > 4 * air_w
    assert wide_back < back
    alone, *_ = solved({"kind": "insulated"})
    assert back < alone


def test_a_neighbour_of_its_own_temperature_is_a_surface():
    given = {"gap_mm": 6.0, "surface_c": 35.0}
    assert solved({"kind": "neighbour", **given}) == solved({"kind": "against_surface", **given})


@pytest.mark.parametrize("mounting", [{"kind": "against_surface"}, {"kind": "neighbour"}])
@pytest.mark.parametrize("width_mm", [2.0, 9.0, 60.0])
def test_slopes_are_those_of_the_heat(mounting, width_mm):
    network = built({**mounting, "gap_mm": width_mm})
    kind = gap(network)
    random = np.random.default_rng(7)
    rise = random.normal(15.0, 8.0, (network.size, 1))
    link, node = kind.pattern
    given = np.zeros((len(kind.a), network.size))
    np.add.at(given, (link, node), kind.slopes(rise, network.reference_k)[:, 0])
    step = 1e-3
    for index in np.unique(node):
        up, down = rise.copy(), rise.copy()
        up[index] += step
        down[index] -= step
        change = kind.evaluate(up, network.reference_k) - kind.evaluate(down, network.reference_k)
        # The forward difference inside runs, with equally warm faces, into the rounding of the
        # size of their difference: good to 1e-4 of the largest slope.
        np.testing.assert_allclose(
            given[:, index], change[:, 0] / (2 * step), rtol=0, atol=1e-4 * np.abs(given).max()
        )


def test_a_gap_works_lying_down():
    _, flat_air_w, flat_surface_w = solved(
        {"kind": "against_surface", "gap_mm": 12.0, "surface_c": 25.0}, tilt=90.0
    )
    _, upright_air_w, _ = solved({"kind": "against_surface", "gap_mm": 12.0, "surface_c": 25.0})
    # The back looks down: its air hardly flows.
    assert 0.0 < flat_air_w < 0.5 * upright_air_w
    assert flat_surface_w > 0.0
