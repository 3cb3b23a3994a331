"""Wind in the findings: the audit of its law, regimes by face, and the hand estimate."""

import pytest
from support.cases import board, box, checked, patched

from enclosure_check.findings.ranges import range_warnings
from enclosure_check.physics.air import air

WARM = box(
    boards={"main": board(other_power_w=6)},
    walls={"back": {"mounting": {"kind": "insulated"}}},
)
OPEN = ("left", "right", "front", "bottom", "top")


def in_wind(speed: float, **more):
    return patched(WARM, {"surroundings": {"wind_m_per_s": speed, **more}})


def windy_rows(finding):
    return {row.surface: row for row in finding.ranges if row.reynolds is not None}


def test_still_air_has_no_wind_in_its_findings():
    finding = checked(WARM)
    assert windy_rows(finding) == {}
    assert (finding.wind_m_per_s, finding.wind_from) == (0, None)
    assert {wall.wind_regime for wall in finding.walls} == {None}
    assert {row.range_of for row in finding.ranges} == {"rayleigh"}


def test_groups_of_a_face_in_wind():
    finding = checked(in_wind(2.0, wind_from="left"))
    assert (finding.wind_m_per_s, finding.wind_from) == (2.0, "left")
    rows = windy_rows(finding)
    assert set(rows) == {f"wall {name} outside in wind" for name in OPEN}
    row = rows["wall front outside in wind"]
    wall = next(wall for wall in finding.walls if wall.name == "front")
    assert row.length_mm == pytest.approx(204)
    assert row.rise_k == pytest.approx(wall.outside_c - 25, rel=1e-9)
    film_k = (wall.outside_c + 25) / 2 + 273.15
    at = air(film_k, 101_325.0)
    reynolds = 2 * 0.204 / float(at.kinematic_viscosity)
    assert row.reynolds == pytest.approx(reynolds, rel=1e-9)
    assert row.gr_over_re2 == pytest.approx(9.80665 / film_k * row.rise_k * 0.204 / 4, rel=1e-9)
    assert row.grashof == pytest.approx(row.gr_over_re2 * reynolds**2, rel=1e-9)
    assert row.rayleigh == pytest.approx(row.grashof * row.prandtl, rel=1e-9)
    assert row.nusselt == pytest.approx(0.664 * reynolds**0.5 * row.prandtl ** (1 / 3), rel=1e-9)
    assert row.film_w_per_m2k == pytest.approx(row.nusselt * float(at.conductivity) / 0.204)
    assert (row.range_of, row.valid_from, row.valid_to) == ("reynolds", 1e3, 1e8)
    # Both films, the free one told as it would be alone, carry what leaves.
    free = next(row for row in finding.ranges if row.surface == "wall front outside")
    both = (free.film_w_per_m2k**3 + row.film_w_per_m2k**3) ** (1 / 3)
    # As closely as the balance of every mean is kept.
    assert wall.convection_w == pytest.approx(both * row.rise_k * 0.204 * 0.154, rel=1e-8)


@pytest.mark.parametrize(("speed", "regime"), [(0.01, "natural"), (0.15, "mixed"), (3.0, "forced")])
def test_the_regime_of_each_face_follows_gr_over_re2(speed, regime):
    finding = checked(in_wind(speed))
    named = {wall.name: wall.wind_regime for wall in finding.walls}
    assert named == {**dict.fromkeys(OPEN, regime), "back": None}
    for row in windy_rows(finding).values():
        expected = "natural" if row.gr_over_re2 > 10 else "mixed"
        assert row.regime == ("forced" if row.gr_over_re2 < 0.1 else expected)


def test_a_law_that_adds_next_to_nothing_is_not_audited():
    """In the natural regime the wind's (here at Re 100), in the forced one the free ones."""
    for row in windy_rows(checked(in_wind(0.01))).values():
        assert row.reynolds < row.valid_from
        assert row.inside_range
    small = patched(in_wind(20.0), {"box": {"width_mm": 60, "height_mm": 50, "depth_mm": 40}})
    small = patched(small, {"boards": {"main": {"length_mm": 40, "width_mm": 30}}})
    finding = checked(small)
    assert {row.regime for row in windy_rows(finding).values()} == {"forced"}
    outside = [row for row in finding.ranges if row.surface.endswith("outside")]
    below = [row for row in outside if row.rayleigh < row.valid_from]
    assert {row.surface for row in below} >= {"whole box outside", "wall top outside"}
    assert all(row.inside_range for row in outside)


def test_a_reynolds_number_outside_the_range_is_warned_of():
    small = patched(in_wind(0.25), {"box": {"width_mm": 60, "height_mm": 50, "depth_mm": 40}})
    small = patched(small, {"boards": {"main": {"length_mm": 40, "width_mm": 30}}})
    finding = checked(small)
    rows = windy_rows(finding).values()
    # The back is covered; of all others the left and right ones are the shortest.
    assert {row.inside_range for row in rows} == {False, True} or not any(
        row.inside_range for row in rows
    )
    worst = min(rows, key=lambda row: row.outside_by)
    assert worst.regime == "mixed"
    assert worst.outside_by == pytest.approx(worst.reynolds / 1e3, rel=1e-12)
    (line,) = [line for line in range_warnings(finding.ranges) if "Pohlhausen" in line]
    assert "outside its range (Re 1e+03 to 1e+08) on" in line
    assert line.endswith(f"(Re {worst.reynolds:.2g})")
    assert line in finding.warnings


def test_the_hand_estimate_has_the_wind_too():
    still, windy = checked(WARM).hand_estimate, checked(in_wind(4.0)).hand_estimate
    assert windy.wall_rise_k < 0.6 * still.wall_rise_k
    # In wind the faces hardly shelter each other: plates alone come close, in still air they do not.
    assert windy.plates_wall_rise_k == pytest.approx(windy.wall_rise_k, rel=0.05)
    # One wall less open is told by the heat and area alone.
    assert windy.heat_w == pytest.approx(still.heat_w, rel=1e-6)
