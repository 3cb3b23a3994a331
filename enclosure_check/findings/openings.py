"""What comes and goes through the openings."""

import numpy as np

from enclosure_check.description.case import OpeningCase
from enclosure_check.findings.results import OpeningFinding, OpeningsFinding
from enclosure_check.findings.solved import Solved
from enclosure_check.network.links import FloatArray
from enclosure_check.network.opening_losses import opening_loss
from enclosure_check.network.units import millimetres
from enclosure_check.network.vents import Vents, VentState
from enclosure_check.physics.air import air

# Air that goes out with less than this is none to speak of. [kg/s]
_LEAST_FLOW = 1e-9


def openings_finding(solved: Solved) -> OpeningsFinding:
    """Give the flows of every opening that is not closed, and the neutral level."""
    vents = next((kind for kind in solved.network.kinds if isinstance(kind, Vents)), None)
    if vents is None:
        return OpeningsFinding(0.0, None, ())
    layer = solved.solution.rise[vents.air]
    state = vents.state(layer, solved.network.reference_k)
    level = vents.neutral_height(state)
    return OpeningsFinding(
        flow_g_per_s=float(state.leaving.sum()) * 1e3,
        neutral_height_mm=None if level is None else millimetres(level),
        each=tuple(
            _opening(solved, vents, state, layer, index) for index in range(len(vents.names))
        ),
    )


def _opening(
    solved: Solved, vents: Vents, state: VentState, layer: FloatArray, index: int
) -> OpeningFinding:
    wall, name = vents.names[index]
    case = _case(solved, wall, name)
    own = vents.opening == index
    leaving, entering = state.leaving[own, 0], state.entering[own, 0]
    out, into = float(leaving.sum()), float(entering.sum())
    warmth = float((leaving * (vents.hat[own] @ layer)[:, 0]).sum())
    outside_k = float(solved.network.reference_k[0])
    out_rise = warmth / out if out > _LEAST_FLOW else None
    flowing = air(outside_k + (out_rise or 0.0 if out > into else 0.0), vents.pressure_pa)
    lost = opening_loss(case)
    velocity = max(out, into) / (float(flowing.density) * lost.free_area_m2)
    reynolds = velocity * lost.hole_m / float(flowing.kinematic_viscosity)
    loss = lost.loss
    if velocity > 0:
        loss += lost.viscous / reynolds
        loss += 2.0 * lost.filter_pa_s_per_m / (float(flowing.density) * velocity)
    heights = vents.hat[own] @ np.arange(len(vents.air)) * vents.spacing
    return OpeningFinding(
        name=name,
        wall=wall,
        kind=case.kind,
        height_mm=millimetres(float(heights.mean())),
        free_area_mm2=case.free_area_mm2,
        inflow_g_per_s=into * 1e3,
        outflow_g_per_s=out * 1e3,
        air_out_c=None if out_rise is None else solved.case.surroundings.air_c + out_rise,
        velocity_m_per_s=velocity,
        reynolds=reynolds,
        loss_coefficient=loss,
        heat_w=solved.flow(f"opening:{wall}/{name}", "openings"),
    )


def _case(solved: Solved, wall: str, name: str) -> OpeningCase:
    return next(
        opening
        for each in solved.case.walls.values()
        if each.name == wall
        for opening in each.openings
        if opening.name == name
    )
