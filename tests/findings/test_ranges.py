"""The range audit: which law, its groups, and whether it is used inside its range."""

import pytest
from support.cases import board, box, checked, part, patched, solved

from enclosure_check.findings.assess import assess
from enclosure_check.findings.ranges import range_finding, range_warnings
from enclosure_check.findings.results import RangeFinding
from enclosure_check.physics.air import air
from enclosure_check.physics.correlation import CORRELATIONS

WARM = box(
    boards={"main": board(other_power_w=4)},
    parts={
        "U1": part(power_w=2),
        "B1": part(
            place="air", side=None, at_mm=None, from_walls_mm={"left": 10}, height_mm=20, power_w=2
        ),
        "R1": part(place="right", side=None, at_mm=[50, 70], power_w=1, bottom_contact_k_per_w=1),
    },
)


def rows_of(document) -> dict[str, RangeFinding]:
    found = checked(document).ranges
    rows = {row.surface: row for row in found}
    assert len(rows) == len(found)
    return rows


def test_every_film_is_listed():
    walls = [f"wall {name}" for name in ("left", "right", "front", "back", "bottom", "top")]
    assert set(rows_of(WARM)) == {
        *(f"{name} inside" for name in walls),
        *(f"{name} outside" for name in walls),
        "whole box outside",
        "part U1",
        "part B1",
        "part R1",
        "board main, front side",
        "board main, back side",
        "board main, rim",
    }


def row(rayleigh: float, rise: float = 10.0, key: str = "lloyd_moran_hot_up") -> RangeFinding:
    return range_finding("wall top outside", key, 0.1, rise, rayleigh, 0.7, 5.0, 4.0)


LAW = CORRELATIONS["lloyd_moran_hot_up"]


@pytest.mark.parametrize(
    ("rayleigh", "inside", "outside_by"),
    [
        (LAW.valid_from, True, 1),
        (1e6, True, 1),
        (LAW.valid_to, True, 1),
        (LAW.valid_from / 4, False, 0.25),
        (LAW.valid_to * 3, False, 3),
        (LAW.valid_from * (1 - 1e-9), False, 1 - 1e-9),
    ],
)
def test_inside_below_and_above_the_range(rayleigh, inside, outside_by):
    found = row(rayleigh)
    assert (found.valid_from, found.valid_to) == (LAW.valid_from, LAW.valid_to)
    assert found.inside_range is inside
    assert found.outside_by == pytest.approx(outside_by, rel=1e-12)


@pytest.mark.parametrize("rise", [-0.09, 0.0, 0.09])
def test_without_a_difference_the_range_does_not_matter(rise):
    assert row(1.0, rise).inside_range
    assert not row(1.0, 0.2).inside_range
    assert not row(1.0, -0.2).inside_range


def test_groups_fit_together():
    for found in rows_of(WARM).values():
        assert found.grashof * found.prandtl == pytest.approx(found.rayleigh, rel=1e-12)
        assert 0.68 < found.prandtl < 0.73
        assert found.film_w_per_m2k > 0
        conductivity = found.film_w_per_m2k * found.length_mm * 1e-3 / found.nusselt
        # Air between the coldest and the warmest film here.
        assert 0.025 < conductivity < 0.032
        assert found.correlation in CORRELATIONS


def test_a_vertical_wall_outside_in_numbers():
    answer = solved(WARM)
    found = next(row for row in assess(answer).ranges if row.surface == "wall front outside")
    wall = answer.temperature_c[answer.network.places.wall_outside["front"].mean]
    rise, film_k = wall - 25, (wall + 25) / 2 + 273.15
    assert found.rise_k == pytest.approx(rise, rel=1e-9)
    assert found.length_mm == pytest.approx(154, rel=1e-12)
    at = air(film_k, 101_325.0)
    grashof = 9.80665 / film_k * rise * 0.154**3 / float(at.kinematic_viscosity) ** 2
    # The law counts a rise of 8 K as 3.5 (0.01 / 8)^2 less: its rounding at nothing.
    assert found.grashof == pytest.approx(grashof, rel=1e-5)
    assert found.rayleigh == pytest.approx(grashof * float(at.prandtl), rel=1e-5)
    assert found.correlation == "churchill_chu_1975_vertical"
    heat = next(row.convection_w for row in assess(answer).walls if row.name == "front")
    assert found.film_w_per_m2k == pytest.approx(heat / (rise * 0.204 * 0.154), rel=1e-9)
    assert found.nusselt == pytest.approx(
        found.film_w_per_m2k * 0.154 / float(at.conductivity), rel=1e-6
    )


def test_laws_turn_with_the_box():
    upright = rows_of(WARM)
    assert upright["wall top outside"].correlation == "lloyd_moran_hot_up"
    assert upright["wall bottom outside"].correlation == "raithby_hollands_hot_down"
    # Inside, warm air meets a cooler ceiling from below: unstable as well; at the floor, stable.
    assert upright["wall top inside"].correlation == "lloyd_moran_hot_up"
    assert upright["wall top inside"].rise_k < 0
    assert upright["wall bottom inside"].correlation == "raithby_hollands_hot_down"
    assert upright["part B1"].correlation == "yovanovich_cuboid"
    turned = rows_of(patched(WARM, {"box": {"tilt": {"lean_back_deg": 180}}}))
    assert turned["wall bottom outside"].correlation == "lloyd_moran_hot_up"
    assert turned["wall top outside"].correlation == "raithby_hollands_hot_down"


def test_walls_that_are_not_open_have_no_film_outside():
    covered = {"walls": {"back": {"mounting": {"kind": "insulated"}}}}
    rows = rows_of(patched(WARM, covered))
    assert "wall back outside" not in rows
    assert "wall back inside" in rows
    assert "wall front outside" in rows


def test_the_whole_box_is_audited_with_its_mean_film():
    finding = checked(WARM)
    found = next(row for row in finding.ranges if row.surface == "whole box outside")
    assert found.correlation == "box_shelter"
    area = 2 * (0.204 * 0.104 + 0.104 * 0.154 + 0.204 * 0.154)
    assert found.length_mm == pytest.approx(1e3 * area**0.5, rel=1e-9)
    heat = finding.heat_balance.convection_w
    assert found.film_w_per_m2k == pytest.approx(heat / (area * found.rise_k), rel=1e-9)
    assert found.rise_k == pytest.approx(finding.hand_estimate.wall_rise_k, rel=1e-9)


def test_the_doubled_body_of_a_wall_mounted_box():
    found = rows_of(patched(WARM, {"walls": {"back": {"mounting": {"kind": "insulated"}}}}))
    length = found["whole box outside"].length_mm / 1e3
    doubled = 2 * (0.204 * 0.208 + 0.208 * 0.154 + 0.204 * 0.154)
    assert length == pytest.approx(doubled**0.5, rel=1e-9)


# Warnings -----------------------------------------------------------------------------------


def test_one_warning_per_law_naming_the_furthest():
    outside = [
        range_finding("near", LAW.key, 0.1, 5, LAW.valid_from / 2, 0.7, 5, 4),
        range_finding("far", LAW.key, 0.1, 5, LAW.valid_from / 50, 0.7, 5, 4),
        range_finding("over", LAW.key, 0.1, 5, LAW.valid_to * 10, 0.7, 5, 4),
        range_finding("fine", LAW.key, 0.1, 5, 1e6, 0.7, 5, 4),
        range_finding("other", "raithby_hollands_hot_down", 0.1, 5, 1.0, 0.7, 5, 4),
    ]
    first, second = range_warnings(tuple(outside))
    assert first.startswith(LAW.name)
    assert "(Ra 1e+04 to 1e+11) on 3 surfaces, furthest far (Ra 2e+02)" in first
    assert "fine" not in first
    assert second.endswith("on other (Ra 1)")


def test_a_far_larger_number_is_further_than_a_little_smaller_one():
    outside = [
        range_finding("below", LAW.key, 0.1, 5, LAW.valid_from / 2, 0.7, 5, 4),
        range_finding("above", LAW.key, 0.1, 5, LAW.valid_to * 10, 0.7, 5, 4),
    ]
    assert "furthest above" in range_warnings(tuple(outside))[0]


def test_many_surfaces_are_counted():
    outside = [range_finding(f"s{index}", LAW.key, 0.1, 5, 1.0, 0.7, 5, 4) for index in range(7)]
    (line,) = range_warnings(tuple(outside))
    assert "on 7 surfaces, furthest s" in line


def test_nothing_outside_nothing_said():
    assert range_warnings((row(1e6), row(1e7))) == []
    assert range_warnings(()) == []
