"""What air loses on its way through openings: holes, perforated plates, meshes.

All losses here are of the form

    dp = (K + C / Re) rho v^2 / 2,    Re = v d / nu,

with v the velocity in the free area and d the hydraulic diameter of a hole: smooth, monotone and
linear in v near zero. K is the loss at high Reynolds number, C that of creeping flow.

In free convection holes run at Reynolds numbers of 20 to some thousands, where a jet hardly
contracts. There K is taken with what is then left of the contraction, `CONTRACTION_LEFT`.
"""

from __future__ import annotations

import numpy as np
import numpy.typing as npt
from numpy.typing import ArrayLike

FloatArray = npt.NDArray[np.float64]

#: Share of the contraction's loss that is left in free convection, Re = 25 to 1e4 [-]. Mean of
#: K(Re) less 12 pi / Re over Re = 100 to 4000 for a sharp-edged hole between large rooms (I. E.
#: Idelchik, Handbook of Hydraulic Resistance, diagram 4-19, from memory).
CONTRACTION_LEFT = 0.25
#: C of creeping flow through a round hole in a thin wall [-]: dp = 3 mu Q / r^3.
CREEPING_HOLE = 12.0 * np.pi
#: Loss of a woven mesh at high Reynolds number over (1 - f^2)/f^2 [-].
MESH_LOSS = 0.52
#: What viscosity adds to it, times the Reynolds number of the wire [-].
MESH_VISCOUS = 17.0
#: f Re of fully developed laminar flow in a round tube [-].
ROUND_FRICTION = 64.0


def edge_loss(length_ratio: ArrayLike) -> FloatArray:
    """Loss by contraction in a hole whose flow attaches again when the hole is long.

    ``tau = (2.4 - l) 10^-phi``, ``phi = 0.25 + 0.535 l^8 / (0.05 + l^7)``, zero from l = 2.4 on.

    Parameters
    ----------
    length_ratio : array_like
        Length of the hole over its hydraulic diameter, l [-].

    Returns
    -------
    ndarray
        tau [-]: 1.35 for a sharp edge in a thin wall, 0.24 at l = 1.

    References
    ----------
    I. E. Idelchik, Handbook of Hydraulic Resistance, diagrams 4-12 and 8-3 (from memory); turbulent
    flow, Re above 1e5.
    """
    ratio = np.asarray(length_ratio, dtype=np.float64)
    short = np.minimum(ratio, 2.4)
    phi = 0.25 + 0.535 * short**8 / (0.05 + short**7)
    return np.asarray((2.4 - short) * 10.0**-phi)


def plate_loss(
    free_share: ArrayLike, length_ratio: ArrayLike = 0.0, contraction: float = 1.0
) -> FloatArray:
    """Loss of a perforated plate or of slots, on the velocity in the holes.

    ``K = 0.5 (1 - f)^0.75 + tau (1 - f)^1.375 + (1 - f)^2``: inlet, contraction and widening of
    every hole's flow to the stream in front of and behind the plate. In the limit of a thin plate,
    within 4 %, the square of ``0.707 (1 - f)^0.375 + 1 - f`` (diagram 8-1).

    Parameters
    ----------
    free_share : array_like
        Free area over the area the holes stand in, f, from 0 to 1 [-].
    length_ratio : array_like
        Length of a hole over its hydraulic diameter [-].
    contraction : float
        Share of tau that counts: 1 at Re above 1e5, `CONTRACTION_LEFT` in free convection [-].

    Returns
    -------
    ndarray
        K [-], broadcast shape. Divided by f^2 it is on the velocity in front of the plate.

    References
    ----------
    I. E. Idelchik, Handbook of Hydraulic Resistance, diagrams 8-1 and 8-3 (from memory).
    """
    closed = 1.0 - np.asarray(free_share, dtype=np.float64)
    tau = contraction * edge_loss(length_ratio)
    return np.asarray(0.5 * closed**0.75 + tau * closed**1.375 + closed**2)


def cut_out_loss(length_ratio: ArrayLike = 0.0, contraction: float = 1.0) -> FloatArray:
    """Loss of a plain hole between two large rooms, on its own velocity.

    ``K = 1.5 + tau``: `plate_loss` of a vanishing free share. 2.85 for a thin wall, which is a
    discharge coefficient ``1 / sqrt(K)`` of 0.59; 0.60 to 0.65 are in use for sharp openings. In
    free convection 1.84, with 12 pi / Re on top.

    Parameters
    ----------
    length_ratio : array_like
        Length of the hole over its hydraulic diameter [-].
    contraction : float
        As of `plate_loss` [-].
    """
    return plate_loss(0.0, length_ratio, contraction)


def loss_of_discharge(coefficient: ArrayLike) -> FloatArray:
    """Loss coefficient of a discharge coefficient, ``K = 1 / Cd^2`` [-]."""
    return np.asarray(1.0 / np.square(np.asarray(coefficient, dtype=np.float64)))


def duct_friction(aspect: ArrayLike) -> FloatArray:
    """Friction factor times Reynolds number of laminar flow in a rectangular duct.

    Parameters
    ----------
    aspect : array_like
        Narrow over wide side, 0 (parallel plates, 96) to 1 (square, 56.9) [-].

    References
    ----------
    R. K. Shah, A. L. London, 1978, Laminar Flow Forced Convection in Ducts, eq. 341; within 0.05 %
    of the series (the authors' figure, from memory).
    """
    a = np.asarray(aspect, dtype=np.float64)
    return np.asarray(
        96.0 * (1.0 - a * (1.3553 - a * (1.9467 - a * (1.7012 - a * (0.9564 - 0.2537 * a)))))
    )


def viscous_loss(length_ratio: ArrayLike, friction: ArrayLike = ROUND_FRICTION) -> FloatArray:
    """What viscosity adds in a hole, C of ``C / Re``.

    ``C = 12 pi + f Re l``: the exact loss of creeping flow through a hole in a thin wall (Sampson)
    and that of developed flow along it.

    Parameters
    ----------
    length_ratio : array_like
        Length of the hole over its hydraulic diameter, l [-].
    friction : array_like
        f Re of its section: 64 round, `duct_friction` rectangular [-].

    Returns
    -------
    ndarray
        C on the velocity in the hole and its hydraulic diameter [-].

    References
    ----------
    R. A. Sampson, 1891, On Stokes's current function, Philosophical Transactions of the Royal
    Society A 182, 449-518. Z. Dagan, S. Weinbaum, R. Pfeffer, 1982, An infinite-series solution for
    the creeping motion through an orifice of finite length, Journal of Fluid Mechanics 115, 505-523
    (from memory): the sum of both is within 1 % of the exact solution for round holes. A long slot
    has 64/pi = 20.4 on its width, 40.7 on its hydraulic diameter (H. Hasimoto, 1958, from memory),
    8 % more than 12 pi. Idelchik's figure for grids is 33 (diagram 8-5, from memory).
    """
    return np.asarray(CREEPING_HOLE + np.asarray(friction) * np.asarray(length_ratio))


def mesh_loss(free_share: ArrayLike) -> FloatArray:
    """Loss of a woven mesh of round wire at high Reynolds number, on the velocity in front of it.

    ``K = 0.52 (1 - f^2) / f^2``, to which viscosity adds `mesh_viscous_loss`.

    Parameters
    ----------
    free_share : array_like
        Open share of the mesh, f, 0.05 to 0.8 [-].

    References
    ----------
    R. D. Blevins, 1984, Applied Fluid Dynamics Handbook, as tabulated in the library `fluids`:
    0.52 from Re = 400 on, 1.3 at Re = 20. I. E. Idelchik, diagram 8-6 (from memory),
    1.3 (1 - f) + (1/f - 1)^2, is 6 % higher at f = 0.5 and 0.7, 21 % at 0.3.
    """
    f = np.asarray(free_share, dtype=np.float64)
    return np.asarray(MESH_LOSS * (1.0 - f * f) / (f * f))


def mesh_viscous_loss(free_share: ArrayLike) -> FloatArray:
    """What viscosity adds to a mesh, times the Reynolds number of the wire.

    ``C = 17 (1 - f^2) / f^2``, on the velocity in front of the mesh; the Reynolds number is that of
    the diameter of the wire and the velocity between the wires. With `mesh_loss` within 9 % of the
    tabulated values over Re 20 to 400.

    Parameters
    ----------
    free_share : array_like
        Open share of the mesh, f, 0.05 to 0.8 [-].

    References
    ----------
    As `mesh_loss`. Which length the tabulated Reynolds number is made of is not certain; with the
    wire, creeping flow through common insect mesh (f = 0.64) loses 25/Re where Idelchik's
    diagram 8-6 has 22/Re (from memory).
    """
    f = np.asarray(free_share, dtype=np.float64)
    return np.asarray(MESH_VISCOUS * (1.0 - f * f) / (f * f))


def pressure_loss(
    velocity: ArrayLike,
    density: ArrayLike,
    kinematic_viscosity: ArrayLike,
    hole: ArrayLike,
    loss: ArrayLike,
    viscous: ArrayLike,
    resistance: ArrayLike = 0.0,
) -> FloatArray:
    """Pressure lost by a velocity of either sign.

    Parameters
    ----------
    velocity : array_like
        Velocity in the free area, positive or negative [m/s].
    density, kinematic_viscosity : array_like
        Of the air that passes [kg/m3], [m2/s].
    hole : array_like
        Hydraulic diameter of a hole [m].
    loss, viscous : array_like
        K and C [-].
    resistance : array_like
        Loss of a filter per velocity in the free area [Pa s/m].

    Returns
    -------
    ndarray
        Loss of pressure, with the sign of the velocity [Pa].
    """
    v = np.asarray(velocity, dtype=np.float64)
    rho = np.asarray(density)
    creeping = np.asarray(viscous) * rho * np.asarray(kinematic_viscosity) / (2 * np.asarray(hole))
    square = 0.5 * np.asarray(loss) * rho
    return np.asarray(square * v * np.abs(v) + (creeping + np.asarray(resistance)) * v)


def velocity_of_loss(
    pressure: ArrayLike,
    density: ArrayLike,
    kinematic_viscosity: ArrayLike,
    hole: ArrayLike,
    loss: ArrayLike,
    viscous: ArrayLike,
    resistance: ArrayLike = 0.0,
) -> FloatArray:
    """Velocity at which a pressure of either sign is lost: `pressure_loss` the other way round.

    Parameters
    ----------
    pressure : array_like
        Difference of pressure [Pa].
    density, kinematic_viscosity, hole, loss, viscous, resistance : array_like
        As of `pressure_loss`; ``loss`` above zero.

    Returns
    -------
    ndarray
        Velocity in the free area, with the sign of the pressure [m/s].
    """
    p = np.asarray(pressure, dtype=np.float64)
    rho = np.asarray(density)
    creeping = np.asarray(viscous) * rho * np.asarray(kinematic_viscosity) / (2 * np.asarray(hole))
    linear = creeping + np.asarray(resistance)
    square = 0.5 * np.asarray(loss) * rho
    root = np.sqrt(linear * linear + 4.0 * square * np.abs(p))
    # Not (root - linear) / (2 square), which loses its digits near zero.
    return np.asarray(2.0 * p / (linear + root))
