"""Air flows through openings that share one body of air, from the balance of mass.

Every opening, cut into pieces over its height, loses ``L(m) = a m|m| + b m`` of pressure to a mass
flow m (out of the box counts positive); between one height and the next the air passes boards,
which costs ``R(M) = c M|M| + d M``. With the column of inside air lighter by ``g int (rho_o -
rho) dz = h(z)`` than that outside, the excess of pressure inside at the lowest point is ``p`` and

    L_i(m_i) = p + h_i - sum_j A_ij R_j(M_j),   M_j = sum_i A_ij m_i,   sum_i m_i = 0

A_ij being the share of passage j that lies below piece i. Losses grow with their flow, so this is
the least of a convex function of the flows, which has one place only, and a damped Newton
iteration on the flows finds it.
"""

from typing import NamedTuple

import numpy as np

from enclosure_check.physics.smooth import FloatArray

# Balanced when no pressure is further off than this share of the largest difference.
TOLERANCE = 1e-12
# Within this share of it steps are taken whole: rounding of the energy would hold them back.
WHOLE = 1e-5
# Within this share the iteration ends as well when steps stop helping: the rest is rounding.
NEAR = 1e-9
MOST_STEPS = 80
MOST_HALVINGS = 40
# Steps that are taken whole as long as they bring the pressures closer; later ones go by energy.
QUICK_STEPS = 12


class VentFlows(NamedTuple):
    """Flows of c cases at once."""

    flow: FloatArray
    """Mass flow out through every piece [kg/s], shape (s, c)."""
    base_pressure: FloatArray
    """Excess of pressure inside at the lowest point [Pa], shape (c,)."""
    passage: FloatArray
    """Mass flow upwards through every passage [kg/s], shape (j, c)."""
    steps: int


def balanced_flows(
    head: FloatArray,
    quadratic_out: FloatArray,
    quadratic_in: FloatArray,
    linear: FloatArray,
    below: FloatArray,
    passage_quadratic: FloatArray,
    passage_linear: FloatArray,
) -> VentFlows:
    """Find the flows at which the mass in the box stays what it is.

    Parameters
    ----------
    head
        Pressure that the lighter column inside adds up to each piece [Pa], shape (s, c).
    quadratic_out, quadratic_in
        Factors a of pieces for flow out and in [Pa s2/kg2], shape (s, c), above zero.
    linear
        Factors b of pieces [Pa s/kg], shape (s, c), above zero.
    below
        Share of each passage below each piece, shape (s, j).
    passage_quadratic, passage_linear
        Factors c and d of passages [Pa s2/kg2], [Pa s/kg], shape (j, c), zero or above.

    Returns
    -------
    VentFlows
        Sums to zero over the pieces within rounding.

    Raises
    ------
    ArithmeticError
        When the iteration does not end, which losses that grow with their flow do not allow.
    """
    count, cases = head.shape
    if count == 1:
        return VentFlows(np.zeros_like(head), -head[0], np.zeros_like(passage_linear), 0)
    # Heads as good as equal drive what rounding leaves of them, and are not asked for more.
    high, low = head.max(axis=0), head.min(axis=0)
    scale = np.maximum(high - low, 1e-3 * np.maximum(high, -low) + 1e-30)
    flow = _start(head, 0.5 * (high + low), quadratic_out, quadratic_in, linear)
    across = np.ascontiguousarray(below.T)

    def energy(m: FloatArray) -> FloatArray:
        quadratic = np.where(m > 0, quadratic_out, quadratic_in)
        through, size = np.abs(across @ m), np.abs(m)
        own = (quadratic * size / 3.0 + linear / 2.0) * size * size - head * m
        lost = (passage_quadratic * through / 3.0 + passage_linear / 2.0) * through * through
        return np.asarray(own.sum(axis=0) + lost.sum(axis=0))

    matrix = np.zeros((cases, count + 1, count + 1))
    matrix[:, :count, count] = -1.0
    matrix[:, count, :count] = 1.0
    right = np.empty((cases, count + 1, 1))
    diagonal = np.arange(count)
    last, off = np.inf, np.full(cases, np.inf)
    before = flow, np.zeros_like(flow)
    for step in range(MOST_STEPS):
        # Loss of pieces and passages less the head: the base pressure for each piece.
        own = np.where(flow > 0, quadratic_out, quadratic_in) * np.abs(flow)
        through = across @ flow
        passed = passage_quadratic * np.abs(through)
        residual = (own + linear) * flow + below @ ((passed + passage_linear) * through) - head
        slope = 2.0 * own + linear
        passage_slope = 2.0 * passed + passage_linear
        matrix[:, :count, :count] = (below * passage_slope.T[:, None, :]) @ across
        matrix[:, diagonal, diagonal] += slope.T
        right[:, :count, 0] = -residual.T
        right[:, count, 0] = -flow.sum(axis=0)
        change = np.linalg.solve(matrix, right)[:, :, 0].T
        pressure, move = change[count], change[:count]
        # Where losses differ by many powers of ten, rounding leaves mass over: a step that does not
        # keep it seems to lead uphill.
        move = move - (flow + move).sum(axis=0) / (slope * (1.0 / slope).sum(axis=0))
        own_off = np.abs(residual - pressure).max(axis=0) / scale
        worst = float(own_off.max())
        if worst <= TOLERANCE or (worst <= NEAR and worst > 0.5 * last):
            return VentFlows(flow, pressure, through, step)
        last = worst
        if worst <= WHOLE:
            flow = flow + move
        elif step < QUICK_STEPS and not (astray := own_off > off).any():
            off, before = own_off, (flow, move)
            flow = flow + move
        elif step < QUICK_STEPS:
            # The last step, taken whole, led away: as much of it as lowers the energy.
            flow = np.where(astray, _stepped(*before, energy), flow)
            off = np.where(astray, np.inf, own_off)
            before = flow, np.zeros_like(flow)
        else:
            flow = _stepped(flow, move, energy)
    raise ArithmeticError("flows through the openings do not balance")


def _stepped(flow: FloatArray, move: FloatArray, energy: object) -> FloatArray:
    """Take as much of a step as lowers the energy, case by case."""
    assert callable(energy)
    before = energy(flow)
    part = np.ones(flow.shape[1])
    for _ in range(MOST_HALVINGS):
        worse = energy(flow + part * move) > before + 1e-12 * np.abs(before) + 1e-300
        if not worse.any():
            break
        part = np.where(worse, 0.5 * part, part)
    return np.asarray(flow + part * move)


def _start(
    head: FloatArray,
    middle: FloatArray,
    quadratic_out: FloatArray,
    quadratic_in: FloatArray,
    linear: FloatArray,
) -> FloatArray:
    """Flows at a pressure that about halves the head, made to sum to zero."""
    drive = head - middle
    quadratic = np.where(drive > 0, quadratic_out, quadratic_in)
    root = np.sqrt(linear * linear + 4.0 * quadratic * np.abs(drive))
    flow = 2.0 * drive / (linear + root)
    weight = 1.0 / root
    return np.asarray(flow - weight * flow.sum(axis=0) / weight.sum(axis=0))
