"""Steady states close to a known one: chord iterations with that one's inverse Jacobian.

One inversion serves many solves (other surroundings, other power, many variants at once). Each
variant's inverse is bettered as it goes by Broyden's rank-one updates (C. G. Broyden, "A class of
methods for solving nonlinear simultaneous equations", Mathematics of Computation 19, 1965).
Variants that do not get there are left to Newton.
"""

from contextlib import suppress
from functools import cached_property

import numpy as np

from enclosure_check.network.linear import DenseFactor, Factor
from enclosure_check.network.links import FloatArray
from enclosure_check.network.network import BoolArray, Network
from enclosure_check.records import dataclass, replace
from enclosure_check.solve.steady import (
    Solution,
    SolveOptions,
    State,
    approach,
    solution_of,
    solve_steady,
)

# Steps after which, and growth of the imbalance at which, chords are given up for Newton.
_MOST_CHORDS = 24
_FIRST_STEPS = 2
# A known state serves where the heat put in differs by less than this factor.
_LIKE_HEAT = 3.0
_WORST_GROWTH = 4.0


class Inverse:
    """Inverse Jacobian of a network's first variant near a state, made when first asked for.

    Small ones are inverted outright, which later costs a product each time; large ones are
    factorised.
    """

    def __init__(self, network: Network | None, rise: FloatArray) -> None:
        self._network, self._rise = network, rise

    @cached_property
    def _factor(self) -> Factor:
        assert self._network is not None  # see `of`
        return self._network.factor(self._network.derivatives(self._rise[:, :1])[:, 0])

    @cached_property
    def _matrix(self) -> FloatArray | None:
        factor = self._factor
        return factor.inverse() if isinstance(factor, DenseFactor) else None

    def apply(self, right: FloatArray) -> FloatArray:
        """Multiply by the inverse: shape (u, v)."""
        if self._matrix is None:
            return self._factor.solve(right)
        return np.asarray(self._matrix @ right)

    def shared(self) -> "Inverse":
        """Give it without its network, as other processes can be told of it."""
        told = Inverse(None, self._rise)
        with suppress(np.linalg.LinAlgError):  # nothing is found from it then
            if self._matrix is not None:
                told._matrix = self._matrix
        return told

    def of(self, network: Network) -> "Inverse":
        """Give it for a network of the same shape: its own where this is not inverted outright."""
        return self if "_matrix" in self.__dict__ else Inverse(network, self._rise)


@dataclass(frozen=True, eq=False)
class Known:
    """A steady state that others of networks of the same shape are found from."""

    node_labels: tuple[str, ...]
    fixed: BoolArray
    put_in_w: float
    solution: Solution
    inverse: Inverse

    def serves(self, network: Network) -> bool:
        """Whether a network has the same nodes and about the same heat put in."""
        same = self.node_labels == network.node_labels
        alike = same and np.array_equal(self.fixed, network.fixed)
        return alike and _like_heat(self.put_in_w, network)

    def shared(self) -> "Known":
        """Give it as other processes can be told of it."""
        return replace(self, inverse=self.inverse.shared())

    def of(self, network: Network) -> "Known":
        """Give what was shared for its own network, which is there again."""
        return replace(self, inverse=self.inverse.of(network))


def stands_alone(network: Network, leading: Network) -> bool:
    """Whether a network is solved by itself: its heat is unlike that of the one that leads."""
    return not _like_heat(_put_in(leading), network)


def _like_heat(put_in_w: float, network: Network) -> bool:
    return put_in_w / _LIKE_HEAT < _put_in(network) < put_in_w * _LIKE_HEAT


def _put_in(network: Network) -> float:
    return float(np.abs(network.sources.power).sum())


def _known(network: Network, solution: Solution, inverse: Inverse) -> Known:
    return Known(network.node_labels, network.fixed, _put_in(network), solution, inverse)


def solve_known(network: Network, known: Known | None) -> Known:
    """Find the steady state of one variant, from a known one where it serves.

    Without one, two steps of Newton come near enough for an inverse Jacobian that does for the
    rest, and for what is solved after.
    """
    if known is not None and known.serves(network):
        start = known.solution.rise[network.unknown]
        inverse = known.inverse.of(network)
        return _known(network, solve_nearby(network, start, inverse), inverse)
    calm = _without_heat(network)
    if calm is not None:
        return _known(network, calm, Inverse(network, calm.rise))
    near = approach(network, _FIRST_STEPS)
    inverse = Inverse(network, near.rise)
    if near.converged:
        return _known(network, near, inverse)
    x = near.rise[network.unknown]
    if not np.isfinite(x).all():
        x = np.zeros_like(x)
    return _known(network, solve_nearby(network, x, inverse, taken=int(near.steps[0])), inverse)


def _without_heat(network: Network) -> Solution | None:
    """Give the state of all at the temperature of the air, where nothing heats or cools."""
    if network.sources.power.any() or network.fixed_rise.any():
        return None
    state = State.of(network, np.zeros((len(network.unknown), network.variants)))
    done = state.balanced(SolveOptions())
    if not done.all():
        return None
    return solution_of(network, state, done, np.zeros(network.variants, dtype=np.intp))


def solve_nearby(
    network: Network,
    start: FloatArray,
    inverse: Inverse,
    options: SolveOptions | None = None,
    taken: int = 0,
) -> Solution:
    """Find the steady states of v variants near a state whose inverse Jacobian is known.

    Parameters
    ----------
    network
        The network, for v variants.
    start
        Rises to start from [K], shape (u, v).
    inverse
        Inverse Jacobian of the known state.
    options
        Tolerances and bounds.
    taken
        Steps taken before, to be counted.
    """
    options = options or SolveOptions()
    x = start.copy()
    variants = x.shape[1]
    state = State.of(network, x)
    done = state.balanced(options)
    steps = np.full(variants, taken, dtype=np.intp)
    step: FloatArray | None = None
    history: list[tuple[FloatArray, FloatArray]] = []
    for _ in range(_MOST_CHORDS + 1):
        if done.all():
            return solution_of(network, state, done, steps)
        if step is None:
            step = -inverse.apply(state.residual)
        move = np.where(done, 0.0, step)
        if not np.all(np.abs(move) <= options.largest_step_k):
            # As far off as Newton would not go in a step either, or not a number.
            break
        trial = State.of(network, x + move)
        if not np.all(trial.merit <= _WORST_GROWTH * state.merit + 1e-300):
            break
        x, state, steps = x + move, trial, steps + ~done
        done = state.balanced(options)
        step, history = following_step(-inverse.apply(state.residual), move, history)
    solution = solve_steady(network, start, options)
    return replace(solution, steps=solution.steps + steps)


def following_step(
    plain: FloatArray, move: FloatArray, history: list[tuple[FloatArray, FloatArray]]
) -> tuple[FloatArray, list[tuple[FloatArray, FloatArray]]]:
    """Better a step of the known inverse by what the steps before it did, shape (u, v).

    Broyden's update in the form that keeps only steps: s_{k+1} from s_0..s_k.

    Parameters
    ----------
    plain
        The step of the known inverse alone.
    move
        The last step, as it was taken.
    history
        Steps before it, each with the one that followed.

    Returns
    -------
    tuple
        The step, and the history with the last one.
    """
    following = plain
    for last, after in history:
        size = np.maximum(np.sum(last * last, axis=0), 1e-300)
        following = following + after * (np.sum(last * following, axis=0) / size)
    size = np.maximum(np.sum(move * move, axis=0), 1e-300)
    following = following / np.maximum(1.0 - np.sum(move * following, axis=0) / size, 0.1)
    return following, [*history, (move, following)]
