"""Numbers at which a margin is met: state and number found together, by chords.

The heat balance is bordered with one equation, that the smallest margin is met, and one unknown,
the number (how much warmer the surroundings are, or a factor on the power). The known inverse
Jacobian serves the balance, block elimination the border, and Broyden's updates better both as in
`solve.nearby`. What does not get there is left to a search.
"""

from collections.abc import Callable, Sequence
from functools import cached_property
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


class _At(NamedTuple):
    """The bordered balance at a point."""

    residual: FloatArray
    """Imbalance of the unknown nodes [W], shape (u, v)."""
    over_k: FloatArray
    """Smallest margin over the wanted one [K], shape (v,)."""
    limit: IntArray
    """Of which limit, shape (v,)."""


@dataclass(frozen=True, eq=False)
class Border:
    """The balance of a network with the equation of the margin, for all numbers at once.

    Attributes
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
    """

    network: Network
    rise: FloatArray
    inverse: Inverse
    numbers: Sequence[Number]
    limits: Limits
    wanted_k: float

    @cached_property
    def scale(self) -> FloatArray:
        """Units of the numbers, shape (v,)."""
        return np.array([each.scale for each in self.numbers])

    @cached_property
    def _rises(self) -> FloatArray:
        return np.repeat(self.rise, len(self.numbers), axis=1)

    @cached_property
    def _moved(self) -> Network:
        """The network with every number turned a little."""
        return turned(self.network, self.numbers, _DIFFERENCE * self.scale)

    @cached_property
    def _answer(self) -> FloatArray:
        """What turning the numbers by their scale takes off the state [K], shape (n, v)."""
        # The state itself balances.
        change = self._moved.imbalance(self._rises)[self.network.unknown]
        return self._lifted(self.inverse.apply(change / _DIFFERENCE))

    @cached_property
    def _warmer(self) -> FloatArray:
        """What it adds to temperatures whose rises stay [K], shape (v,)."""
        return (self._moved.reference_k - self.network.reference_k) / _DIFFERENCE

    def rest(self) -> _At:
        """Give the known state, with every number where it is."""
        none = np.zeros((len(self.network.unknown), len(self.numbers)))
        return self._margin(none, self._rises, self.network.reference_k)

    def at(self, z: FloatArray) -> _At:
        """Evaluate at a point, shape (u + 1, v)."""
        network = turned(self.network, self.numbers, z[-1] * self.scale)
        rise = network.full_rise(z[:-1])
        return self._margin(network.imbalance(rise)[network.unknown], rise, network.reference_k)

    def _margin(self, residual: FloatArray, rise: FloatArray, reference_k: FloatArray) -> _At:
        margins = self.limits.margins(rise, reference_k) - self.wanted_k
        least = np.argmin(margins, axis=0)
        return _At(residual, margins[least, np.arange(len(least))], least)

    def apply(self, at: _At) -> FloatArray:
        """Multiply by the inverse of the bordered Jacobian at the known state: (u + 1, v)."""
        balance = self.inverse.apply(at.residual)
        variant = np.arange(balance.shape[1])
        node = self.limits.node[at.limit]
        shown = self._lifted(balance)[node, variant]
        falls = self._answer[node, variant] - self._warmer
        # A margin that does not fall leads nowhere.
        number = (at.over_k + shown) / np.where(falls < 0, falls, np.nan)
        rises = balance - self._answer[self.network.unknown] * number
        return np.concatenate((rises, number[None]))

    def _lifted(self, unknown: FloatArray) -> FloatArray:
        """Changes of all nodes from those of the unknown ones [K], shape (n, v)."""
        network = self.network
        change = np.zeros((network.size, unknown.shape[1]))
        change[network.unknown] = unknown
        readings = network.readings
        if readings.node.size:
            change[readings.nodes] = readings.rise(change)
        return change


def reached(border: Border, close_k: float) -> list[Reached | None]:
    """Find for each number where the smallest margin is the one wanted.

    Parameters
    ----------
    border
        The balance, the numbers, each turned alone, and the margins.
    close_k
        How closely the margin is to be met.

    Returns
    -------
    list
        Where each meets it; None where it was not found so.
    """
    numbers = border.numbers
    low, high = (np.array([getattr(each, end) for each in numbers]) for end in ("low", "high"))
    # Unknowns: the rises, and last the number in units of its scale.
    z = np.zeros((len(border.network.unknown) + 1, len(numbers)))
    z[:-1] = border.rise[border.network.unknown]
    at = border.rest()
    step = -border.apply(at)
    lost = ~np.isfinite(step).all(axis=0)
    done = ~lost & (np.abs(at.over_k) < close_k)
    step = np.where(done, 0.0, step)
    history: list[tuple[FloatArray, FloatArray]] = []
    with np.errstate(all="ignore"):
        for _ in range(_MOST_CHORDS):
            value = (z[-1] + step[-1]) * border.scale
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
    values = (z[-1] * border.scale).tolist()
    names = [border.limits.names[limit] for limit in at.limit.tolist()]
    every = zip(done.tolist(), values, names, strict=True)
    return [Reached(value, name) if good else None for good, value, name in every]
