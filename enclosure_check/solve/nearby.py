"""Steady states close to a known one: chord iterations with that one's inverse Jacobian.

One inversion serves many solves (other surroundings, other power, many variants at once). Each
variant's inverse is bettered as it goes by Broyden's rank-one updates (C. G. Broyden, "A class of
methods for solving nonlinear simultaneous equations", Mathematics of Computation 19, 1965).
Variants that do not get there are left to Newton.
"""

import numpy as np

from enclosure_check.network.links import FloatArray
from enclosure_check.network.network import Network
from enclosure_check.solve.steady import Solution, SolveOptions, State, solution_of, solve_steady

# Steps after which, and growth of the imbalance at which, chords are given up for Newton.
_MOST_CHORDS = 16
_WORST_GROWTH = 4.0


def inverse_jacobian(network: Network, rise: FloatArray) -> FloatArray:
    """Give the inverse of the Jacobian at a state, of the first variant [K/W], shape (u, u)."""
    return np.asarray(np.linalg.inv(network.jacobian(rise)[0]))


def solve_nearby(
    network: Network,
    start: FloatArray,
    inverse: FloatArray,
    options: SolveOptions | None = None,
) -> Solution:
    """Find the steady states of v variants near a state whose inverse Jacobian is known.

    Parameters
    ----------
    network
        The network, for v variants.
    start
        Rises to start from [K], shape (u, v).
    inverse
        Inverse Jacobian of the known state [K/W], shape (u, u).
    options
        Tolerances and bounds.
    """
    options = options or SolveOptions()
    x = start.copy()
    variants = x.shape[1]
    state = State.of(network, x)
    done = state.balanced(options)
    taken = np.zeros(variants, dtype=np.intp)
    step = -(inverse @ state.residual)
    history: list[tuple[FloatArray, FloatArray]] = []
    for _ in range(_MOST_CHORDS):
        if done.all():
            return solution_of(network, state, done, taken)
        move = np.where(done, 0.0, step)
        trial = State.of(network, x + move)
        if not np.all(trial.merit <= _WORST_GROWTH * state.merit + 1e-300):
            break
        x, state, taken = x + move, trial, taken + ~done
        done = state.balanced(options)
        # Broyden's update in the form that keeps only steps: s_{k+1} from s_0..s_k.
        following = -(inverse @ state.residual)
        for last, after in history:
            size = np.maximum(np.sum(last * last, axis=0), 1e-300)
            following = following + after * (np.sum(last * following, axis=0) / size)
        size = np.maximum(np.sum(move * move, axis=0), 1e-300)
        following = following / np.maximum(1.0 - np.sum(move * following, axis=0) / size, 0.1)
        history.append((move, following))
        step = following
    return solve_steady(network, start, options)
