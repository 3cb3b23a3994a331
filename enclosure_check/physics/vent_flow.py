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
    # Heads as good as equal drive what rounding leaves of them, and are not asked for more.
    size = np.max(np.abs(head), axis=0)
    scale = np.maximum(np.max(head, axis=0) - np.min(head, axis=0), 1e-3 * size + 1e-30)
    flow = _start(head, quadratic_out, quadratic_in, linear)

    def passing(m: FloatArray) -> FloatArray:
        return below.T @ m

    def loss(m: FloatArray) -> FloatArray:
        quadratic = np.where(m > 0, quadratic_out, quadratic_in)
        return quadratic * m * np.abs(m) + linear * m

    def unmet(m: FloatArray) -> FloatArray:
        """Loss of pieces and passages less the head, the base pressure for each piece."""
        through = passing(m)
        lost = passage_quadratic * through * np.abs(through) + passage_linear * through
        return loss(m) + below @ lost - head

    def energy(m: FloatArray) -> FloatArray:
        quadratic = np.where(m > 0, quadratic_out, quadratic_in)
        through, size = np.abs(passing(m)), np.abs(m)
        own = (quadratic * size / 3.0 + linear / 2.0) * size * size - head * m
        lost = (passage_quadratic * through / 3.0 + passage_linear / 2.0) * through * through
        return np.asarray(own.sum(axis=0) + lost.sum(axis=0))

    if len(flow) == 1:
        return VentFlows(np.zeros_like(head), -head[0], np.zeros_like(passage_linear), 0)
    count, cases = flow.shape
    last = np.inf
    for step in range(MOST_STEPS):
        residual = unmet(flow)
        quadratic = np.where(flow > 0, quadratic_out, quadratic_in)
        slope = 2.0 * quadratic * np.abs(flow) + linear
        through = np.abs(passing(flow))
        passage_slope = 2.0 * passage_quadratic * through + passage_linear
        matrix = np.zeros((cases, count + 1, count + 1))
        matrix[:, :count, :count] = np.einsum("ij,jc,kj->cik", below, passage_slope, below)
        matrix[:, np.arange(count), np.arange(count)] += slope.T
        matrix[:, :count, count] = -1.0
        matrix[:, count, :count] = 1.0
        right = np.concatenate((-residual.T, -flow.sum(axis=0)[:, None]), axis=1)
        change = np.linalg.solve(matrix, right[:, :, None])[:, :, 0].T
        pressure, move = change[count], change[:count]
        # Where losses differ by many powers of ten, rounding leaves mass over: a step that does not
        # keep it seems to lead uphill.
        move = move - (flow + move).sum(axis=0) / (slope * (1.0 / slope).sum(axis=0))
        off = float(np.max(np.abs(residual - pressure) / scale))
        if off <= TOLERANCE or (off <= NEAR and off > 0.5 * last):
            return VentFlows(flow, pressure, passing(flow), step)
        last = off
        flow = flow + move if off <= WHOLE else _stepped(flow, move, energy)
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
    head: FloatArray, quadratic_out: FloatArray, quadratic_in: FloatArray, linear: FloatArray
) -> FloatArray:
    """Flows at a pressure that about halves the head, made to sum to zero."""
    drive = head - 0.5 * (np.max(head, axis=0) + np.min(head, axis=0))
    quadratic = np.where(drive > 0, quadratic_out, quadratic_in)
    root = np.sqrt(linear * linear + 4.0 * quadratic * np.abs(drive))
    flow = 2.0 * drive / (linear + root)
    weight = 1.0 / root
    return np.asarray(flow - weight * flow.sum(axis=0) / weight.sum(axis=0))
