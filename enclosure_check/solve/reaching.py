"""Numbers at which a margin is met: state and number found together, by chords.

The heat balance is bordered with one equation, that the smallest margin is met, and one unknown,
the number (how much warmer the surroundings are, or a factor on the power). The known inverse
Jacobian serves the balance, block elimination the border, and Broyden's updates better both as in
`solve.nearby`. What does not get there is left to a search.
"""

from collections.abc import Callable, Sequence
from typing import NamedTuple

import numpy as np

from enclosure_check.network.links import FloatArray, IntArray
from enclosure_check.network.network import Network
from enclosure_check.records import dataclass
from enclosure_check.solve.nearby import Inverse, following_step

# Steps after which it is left to a search.
_MOST_CHORDS = 16
# No step is believed beyond this. [K]
_FARTHEST_K = 500.0
# What may be left of the way, over how closely margins are met.
_LEFT_SHARE = 0.25
# Difference of a derivative by the number, as a share of its scale.
_DIFFERENCE = 1e-4


class Limits(NamedTuple):
    """Nodes and the temperatures they are not to pass."""

    node: IntArray
    limit_k: FloatArray
    """Shape (limits,)."""
    names: tuple[str, ...]

    def margins(self, rise: FloatArray, reference_k: FloatArray) -> FloatArray:
        """Margins by limit and variant [K], shape (limits, v)."""
        return self.limit_k[:, None] - rise[self.node] - reference_k


@dataclass(frozen=True, eq=False)
class Number:
    """A number of a network that is to be found: it is ``turned`` from where it is, 0.

    Attributes
    ----------
    turned
        Gives the network's reference [K], shape (1,), and powers [W], shape (s, 1), at a value.
    scale
        How far it is turned to move temperatures by some kelvin.
    low, high
        Where it ends.
    """

    turned: Callable[[float], tuple[FloatArray, FloatArray]]
    scale: float
    low: float
    high: float


class Reached(NamedTuple):
    """Where a margin is met."""

    value: float
    limit: str


def turned(network: Network, numbers: Sequence[Number], values: FloatArray) -> Network:
    """Give the network with each number turned to its value, in a variant of its own."""
    each = [one.turned(float(value)) for one, value in zip(numbers, values, strict=True)]
    return network.varied(
        np.concatenate([reference for reference, _ in each]),
        np.concatenate([power for _, power in each], axis=1),
    )


def reached(
    network: Network,
    rise: FloatArray,
    inverse: Inverse,
    numbers: Sequence[Number],
    limits: Limits,
    wanted_k: float,
    close_k: float,
) -> list[Reached | None]:
    """Find for each number where the smallest margin is the one wanted.

    Parameters
    ----------
    network
        The network, one variant.
    rise
        Its steady state [K], shape (n, 1).
    inverse
        Inverse Jacobian near it.
    numbers
        What is turned, each alone.
    limits
        What margins there are.
    wanted_k
        The margin that is to be met.
    close_k
        How closely.

    Returns
    -------
    list
        Where each meets it; None where it was not found so.
    """
    border = _Border(network, rise, inverse, numbers, limits, wanted_k)
    scale = np.array([each.scale for each in numbers])
    low, high = (np.array([getattr(each, end) for each in numbers]) for end in ("low", "high"))
    # Unknowns: the rises, and last the number in units of its scale.
    z = np.zeros((len(network.unknown) + 1, len(numbers)))
    z[:-1] = rise[network.unknown]
    step, at = border.first_step(), border.rest()
    lost = ~np.isfinite(step).all(axis=0)
    done = ~lost & (np.abs(at.over_k) < close_k)
    step = np.where(done, 0.0, step)
    history: list[tuple[FloatArray, FloatArray]] = []
    with np.errstate(all="ignore"):
        for _ in range(_MOST_CHORDS):
            value = (z[-1] + step[-1]) * scale
            within = (value >= low) & (value <= high) & np.all(np.abs(step) <= _FARTHEST_K, axis=0)
            lost |= ~done & ~within
            if (done | lost).all():
                break
            move = np.where(done | lost, 0.0, step)
            z = z + move
            at = border.at(z)
            step, history = following_step(-border.apply(at), move, history)
            # What the next step would move is what is left.
            near = np.abs(step).max(axis=0) <= _LEFT_SHARE * close_k
            done |= ~lost & near & (np.abs(at.over_k) < close_k)
    found: list[Reached | None] = []
    for place, good in enumerate(done.tolist()):
        name = limits.names[int(at.limit[place])]
        found.append(Reached(float(z[-1, place] * scale[place]), name) if good else None)
    return found


class _At(NamedTuple):
    """The bordered balance at a point."""

    residual: FloatArray
    """Imbalance of the unknown nodes [W], shape (u, v)."""
    over_k: FloatArray
    """Smallest margin over the wanted one [K], shape (v,)."""
    limit: IntArray
    """Of which limit, shape (v,)."""


class _Border:
    """The balance of a network with the equation of the margin, for all numbers at once."""

    def __init__(
        self,
        network: Network,
        rise: FloatArray,
        inverse: Inverse,
        numbers: Sequence[Number],
        limits: Limits,
        wanted_k: float,
    ) -> None:
        self._base, self._inverse, self._numbers = network, inverse, numbers
        self._limits, self._wanted = limits, wanted_k
        self._scale = np.array([each.scale for each in numbers])
        # What turning the numbers by their scale does: to the state, and to margins at rest. The
        # state itself balances.
        moved = turned(network, numbers, _DIFFERENCE * self._scale)
        self._rises = np.repeat(rise, len(numbers), axis=1)
        change = moved.imbalance(self._rises)[network.unknown] / _DIFFERENCE
        self._answer = self._lifted(inverse.apply(change))
        self._warmer = (moved.reference_k - network.reference_k) / _DIFFERENCE

    def rest(self) -> _At:
        """Give the known state, with every number where it is."""
        none = np.zeros((len(self._base.unknown), len(self._numbers)))
        return self._margin(none, self._rises, self._base.reference_k)

    def first_step(self) -> FloatArray:
        """Step from there, shape (u + 1, v)."""
        return -self.apply(self.rest())

    def at(self, z: FloatArray) -> _At:
        """Evaluate at a point, shape (u + 1, v)."""
        network = turned(self._base, self._numbers, z[-1] * self._scale)
        rise = network.full_rise(z[:-1])
        return self._margin(network.imbalance(rise)[network.unknown], rise, network.reference_k)

    def _margin(self, residual: FloatArray, rise: FloatArray, reference_k: FloatArray) -> _At:
        margins = self._limits.margins(rise, reference_k) - self._wanted
        least = np.argmin(margins, axis=0)
        return _At(residual, margins[least, np.arange(len(least))], least)

    def apply(self, at: _At) -> FloatArray:
        """Multiply by the inverse of the bordered Jacobian at the known state: (u + 1, v)."""
        balance = self._inverse.apply(at.residual)
        variant = np.arange(balance.shape[1])
        node = self._limits.node[at.limit]
        shown = self._lifted(balance)[node, variant]
        falls = self._answer[node, variant] - self._warmer
        # A margin that does not fall leads nowhere.
        number = (at.over_k + shown) / np.where(falls < 0, falls, np.nan)
        rises = balance - self._answer[self._base.unknown] * number
        return np.concatenate((rises, number[None]))

    def _lifted(self, unknown: FloatArray) -> FloatArray:
        """Changes of all nodes from those of the unknown ones [K], shape (n, v)."""
        network = self._base
        change = np.zeros((network.size, unknown.shape[1]))
        change[network.unknown] = unknown
        readings = network.readings
        if readings.node.size:
            change[readings.nodes] = readings.rise(change)
        return change
