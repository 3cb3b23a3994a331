"""The steady state: a damped Newton iteration on the heat balance that falls back, not over.

Knows residuals and Jacobians only. Each step solves ``(J + mu D) d = -r`` with D the size of J's
diagonal: ``mu = 0`` is Newton's step; a step that does not lessen the imbalance is taken back and
``mu`` raised, which turns the iteration into steps of a pseudo-time.
"""

from dataclasses import dataclass
from enum import Enum

import numpy as np
import numpy.typing as npt

from enclosure_check.network.links import FloatArray, IntArray
from enclosure_check.network.network import Network

BoolArray = npt.NDArray[np.bool_]


class Outcome(Enum):
    """How a solve ended; the text says what to do about it."""

    CONVERGED = "converged"
    RUNAWAY = (
        "thermal runaway: power that grows with temperature outruns the heat that can leave; no "
        "steady temperature exists. Lower that power or its growth, or improve the part's cooling"
    )
    STALLED = (
        "no step lessens the imbalance any more. Check the part named for a power or resistance "
        "that is out of scale"
    )
    TOO_MANY_STEPS = (
        "not balanced within the steps allowed. Check the part named for a power or resistance "
        "that is out of scale"
    )


@dataclass(frozen=True)
class SolveOptions:
    """Settings of the iteration; nobody should need to touch them."""

    max_steps: int = 200
    node_tolerance: float = 1e-9
    """Worst node's imbalance over the heat that flows."""
    overall_tolerance: float = 1e-6
    """Sum of all imbalances over the heat that flows."""
    largest_step_k: float = 150.0
    """A step moves no node further than this."""
    hottest_rise_k: float = 5_000.0
    """No steady state is looked for beyond this rise."""


@dataclass(frozen=True, eq=False)
class Solution:
    """Temperatures of all nodes and how good they are; ``v`` variants on the trailing axis."""

    rise: FloatArray
    """Rise over the surrounding air [K], shape (n, v)."""
    outcome: tuple[Outcome, ...]
    steps: IntArray
    """Newton steps taken, those taken back included, shape (v,)."""
    fallbacks: IntArray
    """Steps that had to be taken back, shape (v,)."""
    worst_imbalance_w: FloatArray
    """Largest imbalance of a node [W], shape (v,)."""
    worst_node: IntArray
    """Where it is, shape (v,)."""
    heat_w: FloatArray
    """Heat that flows: power, sun and exchange with the surroundings [W], shape (v,)."""

    @property
    def converged(self) -> bool:
        """Whether every variant converged."""
        return all(outcome is Outcome.CONVERGED for outcome in self.outcome)


# What is left of the balance when all is rounding: heat below this is not told from none. [W]
LEAST_HEAT_W = 1e-4
# Regularisation of a step that did not help: the first try, its growth and the way back to none.
_FIRST_MU, _MU_GROWTH, _MU_DECAY, _LEAST_MU = 1e-3, 8.0, 0.1, 1e-6
_LARGEST_MU = 1e9


def solve_steady(
    network: Network, start: FloatArray | None = None, options: SolveOptions | None = None
) -> Solution:
    """Find the temperatures at which every node's heat balances.

    Parameters
    ----------
    network
        The network, for v variants.
    start
        Rises of the unknown nodes to start from [K], shape (u, v); a linear guess when left out.
    options
        Tolerances and bounds.

    Returns
    -------
    Solution
        Also when a variant did not converge: its ``outcome`` says so.
    """
    options = options or SolveOptions()
    unknown = network.unknown
    x = network.first_guess() if start is None else start.copy()
    variants = x.shape[1]
    mu = np.zeros(variants)
    steps = np.zeros(variants, dtype=np.intp)
    fallbacks = np.zeros(variants, dtype=np.intp)
    state = _State.of(network, x)
    ended = state.balanced(options)
    stalled = np.zeros(variants, dtype=bool)
    for _ in range(options.max_steps):
        active = ~(ended | stalled)
        if not active.any():
            break
        step = _step(network, state, mu, options)
        trial = _State.of(network, x + np.where(active, step, 0.0))
        better = active & (trial.merit < state.merit)
        steps += active
        fallbacks += active & ~better
        x = np.where(better, x + step, x)
        state = state.replaced(trial, better)
        lowered = mu * _MU_DECAY
        mu = np.where(better, np.where(lowered < _LEAST_MU, 0.0, lowered), mu)
        mu = np.where(active & ~better, np.maximum(mu * _MU_GROWTH, _FIRST_MU), mu)
        ended |= better & state.balanced(options)
        stalled |= active & (mu > _LARGEST_MU)
        stalled |= active & (np.max(np.abs(x), axis=0) > options.hottest_rise_k)
    rise = network.full_rise(x)
    residual = np.abs(state.residual)
    worst = np.argmax(residual, axis=0)
    return Solution(
        rise=rise,
        outcome=_outcomes(network, rise, ended, stalled),
        steps=steps,
        fallbacks=fallbacks,
        worst_imbalance_w=residual[worst, np.arange(variants)],
        worst_node=unknown[worst],
        heat_w=state.heat,
    )


@dataclass(frozen=True, eq=False)
class _State:
    """Where an iteration stands."""

    rise: FloatArray
    residual: FloatArray
    """Imbalance of the unknown nodes [W], shape (u, v)."""
    heat: FloatArray
    """Heat that flows, shape (v,)."""
    merit: FloatArray
    """What a step must lessen, shape (v,)."""

    @classmethod
    def of(cls, network: Network, x: FloatArray) -> "_State":
        rise = network.full_rise(x)
        links = network.heat(rise)
        own = network.imbalance(rise, links)[network.unknown]
        with np.errstate(over="ignore", invalid="ignore"):
            merit = np.sum(own * own, axis=0)
        merit = np.where(np.isfinite(merit), merit, np.inf)
        return cls(rise, own, heat_that_flows(network, rise, links), merit)

    def balanced(self, options: SolveOptions) -> BoolArray:
        """Whether each variant meets the balance criterion."""
        heat = np.maximum(self.heat, LEAST_HEAT_W)
        nodes = np.abs(self.residual).max(axis=0) <= options.node_tolerance * heat
        overall = np.abs(self.residual.sum(axis=0)) <= options.overall_tolerance * heat
        return np.asarray(nodes & overall)

    def replaced(self, other: "_State", where: BoolArray) -> "_State":
        """Give the state with some variants taken from another."""
        return _State(
            np.where(where, other.rise, self.rise),
            np.where(where, other.residual, self.residual),
            np.where(where, other.heat, self.heat),
            np.where(where, other.merit, self.merit),
        )


def heat_that_flows(network: Network, rise: FloatArray, links: FloatArray) -> FloatArray:
    """Sum the sizes of heat put in and exchanged with the surroundings [W], shape (v,)."""
    sources = network.sources
    put_in = np.abs(sources.heat(rise[sources.node], network.reference_k)).sum(axis=0)
    return np.asarray(put_in + np.abs(links[network.outgoing]).sum(axis=0))


def _step(network: Network, state: _State, mu: FloatArray, options: SolveOptions) -> FloatArray:
    unknown = network.unknown
    jacobian = network.jacobian(state.rise)[:, unknown[:, None], unknown[None, :]]
    diagonal = np.arange(len(unknown))
    jacobian[:, diagonal, diagonal] += mu[:, None] * np.abs(jacobian[:, diagonal, diagonal])
    right = -state.residual.T[:, :, None]
    try:
        step = np.linalg.solve(jacobian, right)[:, :, 0].T
    except np.linalg.LinAlgError:
        step = np.full((len(unknown), len(mu)), np.nan)
    longest = np.max(np.abs(step), axis=0)
    step = step * np.minimum(1.0, options.largest_step_k / np.maximum(longest, 1e-300))
    return np.where(np.isfinite(step), step, 0.0)


def _outcomes(
    network: Network, rise: FloatArray, ended: BoolArray, stalled: BoolArray
) -> tuple[Outcome, ...]:
    grows = network.sources.by_temperature
    stable = _stable(network, rise) if grows else np.ones(len(ended), dtype=bool)
    outcomes = []
    for done, stuck, steady in zip(ended, stalled, stable, strict=True):
        if done and steady:
            outcomes.append(Outcome.CONVERGED)
        elif grows and (done or not steady):
            outcomes.append(Outcome.RUNAWAY)
        elif stuck:
            outcomes.append(Outcome.STALLED)
        else:
            outcomes.append(Outcome.TOO_MANY_STEPS)
    return tuple(outcomes)


def _stable(network: Network, rise: FloatArray) -> BoolArray:
    """Whether a little heat put in anywhere would warm every node, not cool any.

    The Jacobian of a stable balance is an M-matrix, whose inverse has no negative entry; where
    power grows faster with temperature than heat leaves, it is not. Shape (v,).
    """
    unknown = network.unknown
    jacobian = network.jacobian(rise)[:, unknown[:, None], unknown[None, :]]
    everywhere = np.ones((jacobian.shape[0], len(unknown), 1))
    try:
        response = np.linalg.solve(jacobian, everywhere)[:, :, 0]
    except np.linalg.LinAlgError:
        return np.zeros(jacobian.shape[0], dtype=bool)
    return np.asarray((response > 0).all(axis=1))
