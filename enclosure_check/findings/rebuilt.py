"""What a number does that is shape, or several things at once: by building the network again."""

from collections.abc import Callable, Hashable
from functools import cached_property
from typing import TYPE_CHECKING

import numpy as np

from enclosure_check.description.case import Case
from enclosure_check.findings.solved import Solved
from enclosure_check.network.links import FloatArray
from enclosure_check.network.network import Network
from enclosure_check.records import replace
from enclosure_check.solve.adjoint import Adjoint
from enclosure_check.solve.nearby import solve_nearby
from enclosure_check.solve.steady import SolveOptions

if TYPE_CHECKING:
    from enclosure_check.network.pieces import Builds

Key = tuple[str, ...]
# Gives the case with another number at a path; None where that is no valid document.
Rebuild = Callable[[Key, float], Case | None]
# Step of the rebuilt difference: a share of the number, and for a length at least so many
# millimetres; a place is moved by half a cell, so that what depends on how a source lies on cells
# and patches is smoothed.
STEP, LEAST_STEP_MM, PLACE_STEP_MM, LEAST_STEP = 0.005, 0.5, 5.0, 1e-3
_CELL_SIZES = ("length_mm", "width_mm", "depth_mm", "height_mm")
# Balance of the states solved for: places.
_CLOSE = SolveOptions(node_tolerance=1e-7, by_stirring=False, most_holds=1)


class Rebuilding:
    """Networks built again with one number of the document changed, near a solved case.

    Parameters
    ----------
    solved
        The case.
    adjoint
        Weights of the temperatures asked for there.
    rebuild
        Gives the case with another number.
    """

    def __init__(self, solved: Solved, adjoint: Adjoint, rebuild: Rebuild) -> None:
        self.solved, self.adjoint, self.case_with = solved, adjoint, rebuild

    def derivative(self, path: Key, value: float) -> FloatArray | None:
        """Derivatives of temperatures by a number, from the balance of the network it then makes.

        ``dT/dp = -w . (r(x, p + dp) - r(x, p - dp)) / (2 dp)``: no new solve, a Newton correction
        in effect; from one side where there is no like network on the other. Places are solved
        for: a source that moves by half a cell is no small change for the cells under it; and so
        are sizes of boards and boxes, which move the cells under all parts.

        Returns
        -------
        ndarray or None
            By the number's own unit, shape (t,); None where no like network can be built either
            way.
        """
        return self.difference(path, value, solves=is_place(path) or moves_cells(path))

    def difference(self, path: Key, value: float, *, solves: bool) -> FloatArray | None:
        """Give the same, solved for or not, whatever the number is."""
        step = step_of(path, value)
        cases = [self.case_with(path, value + way) for way in (step, -step)]
        high, low = (None if case is None else self.moved(case, solves=solves) for case in cases)
        if high is None and low is None:
            return None
        still = np.zeros(self.adjoint.weight.shape[1])
        span = step * ((high is not None) + (low is not None))
        return np.asarray(
            ((still if high is None else high) - (still if low is None else low)) / span
        )

    def is_same(self, case: Case) -> bool:
        """Whether a case is that which was solved, but for where it stands in the document."""
        own = self.solved.case
        return replace(case, positions=own.positions, tolerances=own.tolerances) == own

    def moved(self, case: Case, *, solves: bool) -> FloatArray | None:
        """Change of temperatures in another case, shape (t,); None where its network is unlike."""
        solved, adjoint = self.solved, self.adjoint
        still = np.zeros(adjoint.weight.shape[1])
        if self.is_same(case):
            return still
        if self._at_rest and _driving(case) == self._driving:
            return still
        network, own = self._builds.network(case), solved.network
        if network.node_labels != own.node_labels or not np.array_equal(network.fixed, own.fixed):
            return None
        rise, left = network.full_rise(solved.solution.rise[own.unknown]), self._left
        if solves:
            solution = solve_nearby(network, rise[own.unknown], solved.inverse, _CLOSE)
            if not solution.converged:
                return None
            rise, left = solution.rise, network.imbalance(solution.rise)
        moved = (rise - solved.solution.rise)[adjoint.nodes, 0]
        change = (network.imbalance(rise, self._heat(network, rise)) - left)[:, 0]
        warmer = float(network.reference_k[0] - own.reference_k[0])
        return np.asarray(warmer + moved - change @ adjoint.weight)

    @cached_property
    def _builds(self) -> "Builds":
        # Not needed for a check.
        from enclosure_check.network.pieces import Builds

        return Builds(self.solved.case)

    def _heat(self, network: Network, rise: FloatArray) -> FloatArray:
        """Heat through every link [W], shape (links, 1).

        Where nothing is warmer or colder than in the solved case, links in common carry the same.
        """
        known = self._own_heat if np.array_equal(rise, self.solved.solution.rise) else {}
        return np.concatenate(
            [
                heat
                if (heat := known.get(id(kind))) is not None
                else kind.evaluate(rise, network.reference_k)
                for kind in network.kinds
            ]
        )

    @cached_property
    def _own_heat(self) -> dict[int, FloatArray]:
        """Heat through the links of the solved case [W], by the identity of their kind."""
        own, rise = self._builds.own, self.solved.solution.rise
        return {id(kind): kind.evaluate(rise, own.reference_k) for kind in own.kinds}

    @cached_property
    def _left(self) -> FloatArray:
        """What the solved case leaves out of balance [W], shape (n, 1)."""
        return self.solved.network.imbalance(self.solved.solution.rise)

    @cached_property
    def _at_rest(self) -> bool:
        """Whether all is as warm as the air and nothing heats: then no link carries heat.

        Whatever its law and size, a link passes none between equal temperatures.
        """
        return not (self.solved.solution.rise.any() or self.solved.network.sources.power.any())

    @cached_property
    def _driving(self) -> Hashable:
        return _driving(self.solved.case)


def _driving(case: Case) -> Hashable:
    """Give all that heat, and temperatures that are given, come from."""
    return (
        case.surroundings,
        tuple(
            (
                wall.sun_w_per_m2 * wall.finish_outside.solar_absorptivity,
                wall.mounting,
                wall.cables,
            )
            for wall in case.walls.values()
        ),
        tuple(board.other_power_w for board in case.boards.values()),
        tuple(part.power_w for part in case.parts.values()),
    )


def step_of(path: Key, value: float) -> float:
    """Give the step a number is moved by, in its unit."""
    if is_place(path):
        # A board takes its cells along; it may be close to what it faces.
        return LEAST_STEP_MM if path[0] == "boards" else PLACE_STEP_MM
    is_length = any(step.endswith("_mm") for step in path)
    return max(STEP * abs(value), LEAST_STEP_MM if is_length else LEAST_STEP)


def is_place(path: Key) -> bool:
    """Tell whether a number is a place, not a size."""
    return "at_mm" in path or "from_walls_mm" in path


def moves_cells(path: Key) -> bool:
    """Tell whether a number is a size that cells of boards or walls are divided by."""
    return path[0] in ("boards", "box") and path[-1] in _CELL_SIZES
