"""What a number does that is shape, or several things at once: by building the network again."""

from collections.abc import Callable

import numpy as np

from enclosure_check.description.case import Case
from enclosure_check.findings.solved import Solved
from enclosure_check.network.build import build_network
from enclosure_check.network.links import FloatArray
from enclosure_check.records import replace
from enclosure_check.solve.adjoint import Adjoint
from enclosure_check.solve.nearby import solve_nearby
from enclosure_check.solve.steady import SolveOptions

Key = tuple[str, ...]
# Gives the case with another number at a path; None where that is no valid document.
Rebuild = Callable[[Key, float], Case | None]
# Step of the rebuilt difference: a share of the number, and for a length at least so many
# millimetres; a place is moved by half a cell, so that what depends on how a source lies on cells
# and patches is smoothed.
STEP, LEAST_STEP_MM, PLACE_STEP_MM, LEAST_STEP = 0.005, 0.5, 5.0, 1e-3
# Balance of the states solved for: places.
_CLOSE = SolveOptions(node_tolerance=1e-7, by_stirring=False, most_holds=1)


def derivative_by_rebuilding(
    solved: Solved, adjoint: Adjoint, rebuild: Rebuild, path: Key, value: float
) -> FloatArray | None:
    """Derivatives of temperatures by a number, from the balance of the network it then makes.

    ``dT/dp = -w . (r(x, p + dp) - r(x, p - dp)) / (2 dp)``: no new solve, a Newton correction in
    effect; from one side where there is no like network on the other. Places are solved for.

    Returns
    -------
    ndarray or None
        By the number's own unit, shape (t,); None where no like network can be built either way.
    """
    step = step_of(path, value)
    solves = is_place(path)
    ends = [_moved(solved, adjoint, rebuild(path, value + way), solves) for way in (step, -step)]
    high, low = ends
    if high is None and low is None:
        return None
    still = np.zeros(adjoint.weight.shape[1])
    span = step * ((high is not None) + (low is not None))
    return np.asarray(((still if high is None else high) - (still if low is None else low)) / span)


def _moved(solved: Solved, adjoint: Adjoint, case: Case | None, solves: bool) -> FloatArray | None:
    """Change of temperatures in another case, shape (t,); None where its network is unlike.

    A source that moves by half a cell is no small change for the cells under it: that is solved
    for, from the known state.
    """
    if case is None:
        return None
    same = replace(case, positions=solved.case.positions, tolerances=solved.case.tolerances)
    if same == solved.case:
        return np.zeros(adjoint.weight.shape[1])
    network, own = build_network(case), solved.network
    if network.node_labels != own.node_labels or not np.array_equal(network.fixed, own.fixed):
        return None
    rise = network.full_rise(solved.solution.rise[own.unknown])
    left = own.imbalance(solved.solution.rise)
    if solves:
        solution = solve_nearby(network, rise[own.unknown], solved.inverse, _CLOSE)
        if not solution.converged:
            return None
        rise, left = solution.rise, network.imbalance(solution.rise)
    moved = (rise - solved.solution.rise)[adjoint.nodes, 0]
    change = (network.imbalance(rise) - left)[:, 0]
    warmer = float(network.reference_k[0] - own.reference_k[0])
    return np.asarray(warmer + moved - change @ adjoint.weight)


def step_of(path: Key, value: float) -> float:
    """Give the step a number is moved by, in its unit."""
    if is_place(path):
        return PLACE_STEP_MM
    is_length = any(step.endswith("_mm") for step in path)
    return max(STEP * abs(value), LEAST_STEP_MM if is_length else LEAST_STEP)


def is_place(path: Key) -> bool:
    """Tell whether a number is a place, not a size."""
    return "at_mm" in path or "from_walls_mm" in path
