"""Losses of openings as they are described."""

import numpy as np
import pytest
from support.cases import box, case_of

from enclosure_check.network.opening_losses import opening_loss
from enclosure_check.physics.openings import (
    CONTRACTION_LEFT,
    cut_out_loss,
    mesh_loss,
    plate_loss,
    pressure_loss,
    viscous_loss,
)

AREA = {"kind": "perforated", "width_mm": 80, "height_mm": 40, "hole_mm": 3, "free_area_pct": 40}


def lost(**row):
    (opening,) = case_of(box(walls={"back": {"openings": {"a": row}}})).walls["back"].openings
    return opening_loss(opening)


def test_a_cut_out():
    found = lost(kind="hole", diameter_mm=20)
    assert found.free_area_m2 == pytest.approx(np.pi * 1e-4)
    assert found.hole_m == pytest.approx(0.02)
    assert found.loss == pytest.approx(float(cut_out_loss(0.1, CONTRACTION_LEFT)))
    assert found.viscous == pytest.approx(12 * np.pi + 6.4)
    assert found.filter_pa_s_per_m == 0


def test_a_row_loses_what_one_does():
    one = lost(kind="hole", diameter_mm=20)
    row = lost(kind="hole", diameter_mm=20, count=4, pitch_mm=22)
    assert (row.loss, row.viscous) == (one.loss, one.viscous)
    assert row.free_area_m2 == pytest.approx(4 * one.free_area_m2)


def test_an_area_is_a_plate_in_its_cut_out():
    found = lost(**AREA)
    rim = float(cut_out_loss(2 / (4 * 3200 / 240), CONTRACTION_LEFT))
    assert found.loss == pytest.approx(float(plate_loss(0.4, 2 / 3, CONTRACTION_LEFT)) + 0.16 * rim)
    assert found.viscous == pytest.approx(float(viscous_loss(2 / 3)))


def test_an_area_wholly_open_is_its_cut_out():
    slots = {"kind": "slots", "width_mm": 80, "height_mm": 40, "slot_width_mm": 40}
    area = lost(**slots, free_area_pct=100, run="up")
    hole = lost(kind="hole", width_mm=80, height_mm=40)
    assert (area.loss, area.viscous) == pytest.approx((hole.loss, hole.viscous))
    assert area.free_area_m2 == pytest.approx(hole.free_area_m2)


def test_a_thick_plate_loses_less_at_speed_and_more_when_it_creeps():
    thin, thick = lost(**AREA, thickness_mm=0.5), lost(**AREA, thickness_mm=3)
    assert thick.loss < thin.loss
    assert thick.viscous > thin.viscous


def test_a_mesh_alone_and_over_a_cut_out_of_its_size():
    """The same thing said in two ways loses the same pressure at the same flow."""
    mesh = {"wire_mm": 0.3, "aperture_mm": 1.2}
    alone = lost(kind="mesh", width_mm=80, height_mm=40, screen=mesh)
    over = lost(kind="hole", width_mm=80, height_mm=40, screen=mesh)
    bare = lost(kind="hole", width_mm=80, height_mm=40)
    flow = np.logspace(-8, -2, 7)

    def pressure(found):
        v = flow / found.free_area_m2
        return pressure_loss(v, 1.15, 1.65e-5, found.hole_m, found.loss, found.viscous)

    share = (1.2 / 1.5) ** 2
    assert over.loss - bare.loss == pytest.approx(float(mesh_loss(share)))
    # The cut-out's own viscosity, which a mesh alone does not have, is all that differs.
    v = flow / bare.free_area_m2
    creeping = pressure_loss(v, 1.15, 1.65e-5, bare.hole_m, 0.0, bare.viscous)
    np.testing.assert_allclose(pressure(over) - creeping, pressure(alone), rtol=1e-9)


def test_a_mesh_over_holes_sees_the_velocity_of_the_area():
    mesh = {"wire_mm": 0.3, "aperture_mm": 1.2}
    with_mesh, without = lost(**AREA, screen=mesh), lost(**AREA)
    assert with_mesh.loss - without.loss == pytest.approx(0.16 * float(mesh_loss(0.64)))
    # C / Re of the wire at 0.4 v / 0.64 between the wires, on 0.4 v.
    expected = 17 * (1 - 0.64**2) / 0.64**2 * 0.16 / (0.4 / 0.64 * 0.3 / 3)
    assert with_mesh.viscous - without.viscous == pytest.approx(expected)


def test_a_stated_loss_stands_instead():
    stated = lost(**AREA, loss_coefficient=3.07)
    assert stated.loss == 3.07
    assert stated.viscous == lost(**AREA).viscous
    screened = lost(**AREA, loss_coefficient=3.07, screen={"type": "insect_mesh"})
    assert screened.loss > 3.07
    assert lost(kind="mesh", diameter_mm=40, loss_coefficient=2.2).loss == 2.2


def test_louvres_lose_what_the_library_says():
    row = {"width_mm": 80, "height_mm": 40, "slot_width_mm": 6, "free_area_pct": 45}
    assert lost(kind="louvre", **row).loss == 2.5


def test_a_filter_in_series():
    bare = lost(**AREA)
    filtered = lost(**AREA, filter={"loss_pa": 30, "at_m_per_s": 1.5})
    assert (filtered.loss, filtered.viscous) == (bare.loss, bare.viscous)
    # 1 m/s in the holes is 0.4 m/s in front of the filter.
    assert filtered.filter_pa_s_per_m == pytest.approx(8.0)


def test_blocked_openings_lose_the_same_on_what_is_left():
    half, whole = lost(**AREA, blocked_pct=50), lost(**AREA)
    assert (half.loss, half.viscous) == (whole.loss, whole.viscous)
    assert half.free_area_m2 == pytest.approx(whole.free_area_m2 / 2)
    assert lost(**AREA, blocked_pct=100).free_area_m2 == 0
