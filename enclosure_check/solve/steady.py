"""The steady state: a damped Newton iteration on the heat balance that falls back, not over.

Knows residuals and Jacobians only. Each step solves ``(J + mu D) d = -r`` with D the size of J's
diagonal: ``mu = 0`` is Newton's step; a step that does not lessen the imbalance is taken back and
``mu`` raised, which turns the iteration into steps of a pseudo-time.

Power that grows with temperature may allow several steady states; the lowest is the one a box
comes to from cold, so it is approached from below. Power held at what it is at lower temperatures
gives lower temperatures again: from there Newton is tried, and where that does not lead to a
stable state the power is held at the temperatures found, and so on until it does or none is left.
"""

from contextlib import suppress
from enum import Enum

import numpy as np
import numpy.typing as npt

from enclosure_check.network.links import FloatArray, IntArray
from enclosure_check.network.network import Network
from enclosure_check.records import dataclass, replace

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
    TOO_HOT = (
        "no steady temperatures within thousands of kelvin of the surroundings. Check the part or "
        "board named for a power or resistance that is out of scale"
    )
    TOO_MANY_STEPS = (
        "not balanced within the steps allowed. Check the part named for a power or resistance "
        "that is out of scale"
    )


# Parts of a step that are tried one after the other.
_PARTS = (1.0, 0.5, 0.25, 0.1)
# Where nothing else leads there: slower, and past sharper bends of the laws.
_FINE_PARTS = (*_PARTS, 0.03, 0.01)


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
    parts: tuple[float, ...] = _PARTS
    """Parts of a step that are tried one after the other."""
    by_stirring: bool = True
    """Whether to go by way of stirred air where Newton does not get there at once."""
    most_holds: int = 64
    """How often growing power is held and let go before no steady state is believed in."""
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
    """Where it is; the hottest node where the outcome is TOO_HOT, shape (v,)."""
    heat_w: FloatArray
    """Heat that flows: power, sun and exchange with the surroundings [W], shape (v,)."""

    @property
    def converged(self) -> bool:
        """Whether every variant converged."""
        return bool(self.each_converged.all())

    @property
    def each_converged(self) -> BoolArray:
        """Whether each variant converged, shape (v,)."""
        return np.array([outcome is Outcome.CONVERGED for outcome in self.outcome])

    def improved(self, later: "Solution") -> "Solution":
        """Give the variants that converged here, and the others as they are in a later solution.

        The steps of the others are those of both.
        """
        keep = self.each_converged
        both = zip(keep, self.outcome, later.outcome, strict=True)
        return Solution(
            rise=np.where(keep, self.rise, later.rise),
            outcome=tuple(one if kept else other for kept, one, other in both),
            steps=self.steps + np.where(keep, 0, later.steps),
            fallbacks=self.fallbacks + np.where(keep, 0, later.fallbacks),
            worst_imbalance_w=np.where(keep, self.worst_imbalance_w, later.worst_imbalance_w),
            worst_node=np.where(keep, self.worst_node, later.worst_node),
            heat_w=np.where(keep, self.heat_w, later.heat_w),
        )


# What is left of the balance when all is rounding: heat below this is not told from none. [W]
LEAST_HEAT_W = 1e-4
# Regularisation of a step that did not help: the first try, its growth and the way back to none.
_FIRST_MU, _MU_GROWTH, _MU_DECAY, _LEAST_MU = 1e-3, 8.0, 0.1, 1e-6
# Steps are given up when they come to so small a share of what a node alone would ask for: none was
# seen to lead on from there, and they are as dear as any.
_LARGEST_MU = 1e5
# The linear guess is not believed beyond this. [K]
_FARTHEST_GUESS_K = 1_000.0
# Stirring of the inside air on the way to an answer that Newton does not find at once, over what
# its films carry.
_STIRRINGS = (3.0, 0.3, 0.1, 0.03, 0.01, 0.003, 0.001)


def solve_steady(
    network: Network, start: FloatArray | None = None, options: SolveOptions | None = None
) -> Solution:
    """Find the temperatures at which every node's heat balances.

    Parameters
    ----------
    network
        The network, for v variants.
    start
        Rises of the unknown nodes to start from [K], shape (u, v); found out when left out.
    options
        Tolerances and bounds.

    Returns
    -------
    Solution
        Also when a variant did not converge: its ``outcome`` says so.
    """
    options = options or SolveOptions()
    # A power that grows in proportion has one stable state at most, wherever it is come from: heat
    # leaves at least in proportion to the rise. One that doubles may have several.
    if start is not None or not network.sources.doubles:
        solution = _reach(network, _guess(network) if start is None else start, options)
        if solution.converged or not network.sources.growing.any():
            return solution
    return _from_below(network, options)


def approach(network: Network, steps: int) -> Solution:
    """Come near the steady state by a few steps from the linear guess; it need not converge.

    Power that doubles may have several states: there the search from below says which to go to.
    """
    options = SolveOptions(max_steps=steps, by_stirring=False)
    if network.sources.doubles:
        return solve_steady(network, options=options)
    return _newton(network, _guess(network), options)


def _reach(network: Network, start: FloatArray, options: SolveOptions) -> Solution:
    """Iterate from a start, and by way of stirred air where that does not do."""
    solution = _newton(network, start, options)
    if solution.converged or not options.by_stirring:
        return solution
    # What has circled far beyond any sense for as long as it may will do so stirred as well.
    outcomes = zip(solution.outcome, solution.steps >= options.max_steps, strict=True)
    if all(
        outcome is Outcome.CONVERGED or (outcome is Outcome.TOO_HOT and spent)
        for outcome, spent in outcomes
    ):
        return solution
    solution = solution.improved(_stirred(network, options))
    if solution.converged:
        return solution
    return solution.improved(_stirred(network, replace(options, parts=_FINE_PARTS)))


def _stirred(network: Network, options: SolveOptions) -> Solution:
    """Come to the steady state from that of a box whose air is stirred, less and less."""
    x = _guess(network)
    steps = fallbacks = np.zeros(network.variants, dtype=np.intp)
    for share in _STIRRINGS:
        solution = _newton(network.stirred(share), x, options)
        # One that ran away is no better a start than the guess was.
        x = np.clip(solution.rise[network.unknown], -_FARTHEST_GUESS_K, _FARTHEST_GUESS_K)
        steps, fallbacks = steps + solution.steps, fallbacks + solution.fallbacks
    solution = _newton(network, x, options)
    return replace(solution, steps=steps + solution.steps, fallbacks=fallbacks + solution.fallbacks)


def _guess(network: Network) -> FloatArray:
    try:
        guess = network.first_guess()
    except np.linalg.LinAlgError:
        return np.zeros((len(network.unknown), network.variants))
    return np.clip(guess, -_FARTHEST_GUESS_K, _FARTHEST_GUESS_K)


def _from_below(network: Network, options: SolveOptions) -> Solution:
    """Find the lowest steady state of a network with power that grows with temperature."""
    sources, reference = network.sources, network.reference_k
    # Without power no node would be colder than the coldest of the surroundings.
    coldest = np.minimum(network.fixed_rise.min(axis=0), 0.0)
    rise = np.broadcast_to(coldest, (network.size, network.variants))
    start = _guess(network)
    best: Solution | None = None
    runs_away = still = np.ones(network.variants, dtype=bool)
    steps = np.zeros(network.variants, dtype=np.intp)
    fallbacks = steps.copy()
    for hold in range(options.most_holds + 1):
        held = replace(network, sources=sources.held(rise[sources.node], reference))
        below = _reach(held, start, options)
        rise, start = below.rise, below.rise[network.unknown]
        tries = [below]
        # Letting go costs more than holding on: it is tried after 0, 1, 2, 4, 8... further holds.
        if not hold & (hold - 1):
            # The air is near its state already: no way by stirring, which is long without a state.
            trial = _newton(network, start, options)
            tries.append(trial)
            if best is None:
                # Power that is out of scale before it grows is another matter.
                best, runs_away = trial, below.each_converged
            else:
                best = best.improved(trial)
        steps += sum(np.where(still, each.steps, 0) for each in tries)
        fallbacks += sum(np.where(still, each.fallbacks, 0) for each in tries)
        assert best is not None
        still = ~best.each_converged
        if not np.any(still & below.each_converged):
            break
    assert best is not None
    each = zip(best.outcome, still, runs_away, strict=True)
    outcome = [Outcome.RUNAWAY if no and growth else own for own, no, growth in each]
    # Named is the growing power that puts in most, not where the iteration happened to end.
    grown = np.where(sources.growing, sources.heat(rise[sources.node], reference), -np.inf)
    culprit = sources.node[np.argmax(grown, axis=0)]
    unmet = np.abs(network.imbalance(best.rise))[culprit, np.arange(network.variants)]
    named = still & runs_away
    return replace(
        best,
        outcome=tuple(outcome),
        steps=steps,
        fallbacks=fallbacks,
        worst_node=np.where(named, culprit, best.worst_node),
        worst_imbalance_w=np.where(named, unmet, best.worst_imbalance_w),
    )


def _newton(network: Network, start: FloatArray, options: SolveOptions) -> Solution:
    """Iterate from given rises of the unknown nodes [K], shape (u, v)."""
    unknown = network.unknown
    x = start.copy()
    variants = x.shape[1]
    mu = np.zeros(variants)
    steps = np.zeros(variants, dtype=np.intp)
    fallbacks = np.zeros(variants, dtype=np.intp)
    state = State.of(network, x)
    ended = state.balanced(options)
    stalled = np.zeros(variants, dtype=bool)
    too_hot = np.zeros(variants, dtype=bool)
    for _ in range(options.max_steps):
        active = ~(ended | stalled | too_hot)
        if not active.any():
            break
        step = _step(network, state, mu, options)
        steps += active
        better = np.zeros(variants, dtype=bool)
        for part in options.parts:
            trying = active & ~better
            if not trying.any():
                break
            trial = State.of(network, x + np.where(trying, part * step, 0.0))
            helps = trying & (trial.merit < state.merit)
            x = np.where(helps, x + part * step, x)
            state = state.replaced(trial, helps)
            better |= helps
        fallbacks += active & ~better
        lowered = mu * _MU_DECAY
        mu = np.where(better, np.where(lowered < _LEAST_MU, 0.0, lowered), mu)
        mu = np.where(active & ~better, np.maximum(mu * _MU_GROWTH, _FIRST_MU), mu)
        ended |= better & state.balanced(options)
        stalled |= active & (mu > _LARGEST_MU)
        too_hot |= active & (np.max(np.abs(x), axis=0) > options.hottest_rise_k)
    # Stuck far beyond any sense is too hot as well: laws there change their minds at every step.
    too_hot |= ~ended & (np.max(np.abs(x), axis=0) > _FARTHEST_GUESS_K)
    rise = network.full_rise(x)
    residual = np.abs(state.residual)
    # Where a temperature is past all bounds, it names the culprit better than the imbalance does.
    worst = np.argmax(np.where(too_hot, np.abs(x), residual), axis=0)
    return Solution(
        rise=rise,
        outcome=_outcomes(network, rise, ended, stalled, too_hot),
        steps=steps,
        fallbacks=fallbacks,
        worst_imbalance_w=residual[worst, np.arange(variants)],
        worst_node=unknown[worst],
        heat_w=state.heat,
    )


def solution_of(network: Network, state: "State", done: BoolArray, steps: IntArray) -> Solution:
    """Give the solution of an iteration that ended with every variant balanced."""
    residual = np.abs(state.residual)
    worst = np.argmax(residual, axis=0)
    calm = np.zeros(len(done), dtype=bool)
    return Solution(
        rise=state.rise,
        outcome=_outcomes(network, state.rise, done, calm, calm),
        steps=steps,
        fallbacks=np.zeros_like(steps),
        worst_imbalance_w=residual[worst, np.arange(len(done))],
        worst_node=network.unknown[worst],
        heat_w=state.heat,
    )


@dataclass(frozen=True, eq=False)
class State:
    """Where an iteration stands."""

    rise: FloatArray
    residual: FloatArray
    """Imbalance of the unknown nodes [W], shape (u, v)."""
    heat: FloatArray
    """Heat that flows, shape (v,)."""
    merit: FloatArray
    """What a step must lessen, shape (v,)."""

    @classmethod
    def of(cls, network: Network, x: FloatArray) -> "State":
        """Evaluate the balance at given rises of the unknown nodes [K], shape (u, v)."""
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

    def replaced(self, other: "State", where: BoolArray) -> "State":
        """Give the state with some variants taken from another."""
        return State(
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


def _step(network: Network, state: State, mu: FloatArray, options: SolveOptions) -> FloatArray:
    values = network.derivatives(state.rise)
    step = np.full_like(state.residual, np.nan)
    for v in range(step.shape[1]):
        with suppress(np.linalg.LinAlgError):
            factor = network.factor(values[:, v], float(mu[v]))
            step[:, v] = factor.solve(-state.residual[:, v : v + 1])[:, 0]
    longest = np.max(np.abs(step), axis=0)
    step = step * np.minimum(1.0, options.largest_step_k / np.maximum(longest, 1e-300))
    # Fourth powers are even: nothing may come to the other side of absolute zero.
    step = np.maximum(step, -0.5 * (state.rise[network.unknown] + network.reference_k))
    return np.where(np.isfinite(step), step, 0.0)


def _outcomes(
    network: Network,
    rise: FloatArray,
    ended: BoolArray,
    stalled: BoolArray,
    too_hot: BoolArray,
) -> tuple[Outcome, ...]:
    grows = bool(network.sources.growing.any())
    stable = _stable(network, rise) if grows and ended.any() else np.ones(len(ended), dtype=bool)
    outcomes = []
    for done, stuck, hot, steady in zip(ended, stalled, too_hot, stable, strict=True):
        if done and steady:
            outcomes.append(Outcome.CONVERGED)
        elif grows and (done or not steady):
            outcomes.append(Outcome.RUNAWAY)
        elif hot:
            outcomes.append(Outcome.TOO_HOT)
        elif stuck:
            outcomes.append(Outcome.STALLED)
        else:
            outcomes.append(Outcome.TOO_MANY_STEPS)
    return tuple(outcomes)


def _stable(network: Network, rise: FloatArray) -> BoolArray:
    """Whether a state is one that a box comes to and stays in, shape (v,).

    Power that grows in proportion, and never turns negative, has no unstable state to end in.
    Where power doubles, the loop of power and temperature must have a gain below one: the largest
    eigenvalue of dP/dT times the rises that watts put into the growing nodes give there, the
    powers held.
    """
    stable = np.ones(rise.shape[1], dtype=bool)
    sources = network.sources
    if not sources.doubles:
        return stable
    grows = np.flatnonzero(sources.growing[:, 0])
    place = np.searchsorted(network.unknown, sources.node[grows])
    slope = sources.heat_by_rise(rise[sources.node], network.reference_k)
    held = replace(network, sources=sources.held(rise[sources.node], network.reference_k))
    for v, values in enumerate(held.derivatives(rise).T):
        watts = np.zeros((len(network.unknown), len(grows)))
        watts[place, np.arange(len(grows))] = 1.0
        try:
            response = held.factor(values).solve(watts)[place]
        except np.linalg.LinAlgError:
            stable[v] = False
            continue
        gain = np.linalg.eigvals(slope[grows, v][:, None] * response)
        stable[v] &= bool(gain.real.max() < 1.0)
    return np.asarray(stable)
