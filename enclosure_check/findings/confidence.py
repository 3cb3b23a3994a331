"""Bands on temperatures: first-order propagation of everything uncertain (JCGM 100:2008, 5.1).

Every cause moves some knobs of the network together; its effect on a temperature is its half-width
times the derivative, from one adjoint solve for all temperatures. Causes are independent, so their
effects add as squares.
"""

import math
from collections.abc import Sequence
from functools import cached_property

import numpy as np

from enclosure_check.description.case import ToleranceCase
from enclosure_check.findings.causes import CAUSES, LARGEST_GAP_SHARE
from enclosure_check.findings.certainty import Contribution
from enclosure_check.findings.quantities import Quantity, quantities
from enclosure_check.findings.rebuilt import Rebuild, Rebuilding
from enclosure_check.findings.solved import Solved
from enclosure_check.findings.turning import Key
from enclosure_check.network.knobs import Knobs
from enclosure_check.network.links import FloatArray, IntArray
from enclosure_check.records import dataclass
from enclosure_check.solve.adjoint import Adjoint, adjoint

# Contributions named for each temperature.
MOST_CONTRIBUTIONS = 5
# Chord steps to the ends of a band.
_STEPS_TO_ENDS = 2


@dataclass(frozen=True)
class Cause:
    """Something uncertain that is independent of the others."""

    words: str
    half_width: str
    """At about 95 %, with its unit, for a reader."""
    basis: str
    turns: tuple[tuple[int, float], ...]
    """Knob, and how far the half-width turns it."""


@dataclass(frozen=True, eq=False)
class Bands:
    """Half-widths at about 95 % (k = 2) of some temperatures, and what they are made of."""

    solved: Solved
    knobs: Knobs
    quantities: tuple[Quantity, ...]
    causes: tuple[Cause, ...]
    adjoint: Adjoint
    others: tuple[tuple[Cause, FloatArray], ...] = ()
    """Causes that turn no knob, and what they do to every temperature [K]."""

    @cached_property
    def gradient(self) -> FloatArray:
        """Derivatives of the temperatures by every knob, shape (knobs, t)."""
        solved, at = self.solved, self.adjoint
        return self.knobs.gradient(solved.solution.rise, at.weight, at.derivatives, solved.heat_w)

    @cached_property
    def readings(self) -> FloatArray:
        """What readings of the air move apart from its nodes, shape (knobs, t)."""
        return self.knobs.readings(self.adjoint.nodes, self.gradient)

    @cached_property
    def turns(self) -> FloatArray:
        """How far every cause turns every knob, shape (causes, knobs)."""
        turns = np.zeros((len(self.causes), self.knobs.starts[-1]))
        for row, cause in zip(turns, self.causes, strict=True):
            for knob, turned in cause.turns:
                row[knob] += turned
        return turns

    @cached_property
    def effects(self) -> FloatArray:
        """What the half-width of every cause does to every temperature [K], shape (causes, t).

        Those that turn knobs first, then the others.
        """
        by_knobs = self.turns @ (self.gradient + self.readings)
        return np.concatenate((by_knobs, *(effect[None] for _, effect in self.others)))

    @cached_property
    def _places(self) -> dict[int, int]:
        return {int(node): place for place, node in enumerate(self.adjoint.nodes)}

    @cached_property
    def _bands_k(self) -> list[float]:
        bands: list[float] = np.sqrt(np.sum(self.effects**2, axis=0)).tolist()
        return bands

    @cached_property
    def _order(self) -> IntArray:
        """The causes that move each temperature most, the largest first, shape (most, t)."""
        order = np.argsort(-np.abs(self.effects), axis=0, kind="stable")
        return np.asarray(order[:MOST_CONTRIBUTIONS])

    def band_k(self, node: int) -> float:
        """Half-width at about 95 % of a node's temperature [K]."""
        return self._bands_k[self._places[node]]

    def contributions(self, node: int) -> tuple[Contribution, ...]:
        """Give the causes that move a node's temperature most, the largest first."""
        effect = self.effects[:, self._places[node]]
        largest = self._order[:, self._places[node]]
        every = (*self.causes, *(cause for cause, _ in self.others))
        return tuple(
            Contribution(every[index].words, every[index].half_width, float(effect[index]))
            for index in largest.tolist()
            if effect[index] != 0
        )

    def ends(self, node: int) -> tuple[float, float] | None:
        """Change of a node's temperature where all causes go together to the ends of its band [K].

        To first order that is minus and plus the band. Both ends are found by steps of the known
        inverse and a correction by the adjoint, which is right to second order and better. None
        where these steps lead away from any state there could be.
        """
        solved, place = self.solved, self._places[node]
        effect = self.effects[: len(self.causes), place]
        size = float(np.sqrt(np.sum(effect**2)))
        if size == 0:
            return 0.0, 0.0
        amount = self.turns.T @ (effect / size)
        moved = self.knobs.moved(amount[:, None] * np.array([-1.0, 1.0]))
        rise = np.where(moved.fixed[:, None], moved.fixed_rise, solved.solution.rise)
        unknown = moved.unknown
        with np.errstate(all="ignore"):
            for _ in range(_STEPS_TO_ENDS):
                rise[unknown] -= solved.inverse.apply(moved.imbalance(rise)[unknown])
            corrected = rise[node] - self.adjoint.weight[:, place] @ moved.imbalance(rise)
        if not np.isfinite(corrected).all():
            return None
        warmer = moved.reference_k - solved.network.reference_k
        low, high = (corrected + warmer - solved.solution.rise[node, 0]).tolist()
        return low, high


def bands(solved: Solved, nodes: Sequence[int], rebuild: Rebuild | None = None) -> Bands | None:
    """Give the bands on the temperatures of nodes; None where the balance is singular.

    ``rebuild`` is what tolerances of numbers need that turn no knob; without it they are left out.
    """
    knobs, found = quantities(solved)
    wanted: IntArray = np.array(sorted(set(nodes)), dtype=np.intp)
    try:
        weights = adjoint(solved.network, solved.solution.rise, wanted)
    except np.linalg.LinAlgError:
        return None
    others = _others(solved, weights, rebuild)
    return Bands(solved, knobs, found, causes(found, solved.case.tolerances), weights, others)


def _others(
    solved: Solved, weights: Adjoint, rebuild: Rebuild | None
) -> tuple[tuple[Cause, FloatArray], ...]:
    """Give what tolerances do of numbers that are shape, or several things at once."""
    if rebuild is None:
        return ()
    rows, rebuilding = [], Rebuilding(solved, weights, rebuild)
    for tolerance in solved.case.tolerances:
        if not tolerance.about:
            by = rebuilding.derivative(tolerance.path, tolerance.value)
            if by is not None and by.any():
                cause = Cause(".".join(tolerance.path), _half_width(tolerance), "stated", ())
                rows.append((cause, by * tolerance.half_width))
    return tuple(rows)


# Causes -----------------------------------------------------------------------------------


def causes(
    found: Sequence[Quantity], tolerances: Sequence[ToleranceCase] = ()
) -> tuple[Cause, ...]:
    """Give what is uncertain, what moves together in one cause.

    A stated tolerance goes before the default of what it is about.
    """
    by_key = {quantity.key: quantity for quantity in found}
    stated: list[Cause] = []
    covered: set[Key] = set()
    for tolerance in tolerances:
        about = [by_key[key] for key in tolerance.about if key in by_key]
        covered |= set(tolerance.covers)
        turns = [turn for quantity in about for turn in stated_turns(quantity, tolerance)]
        if turns:
            words = ".".join(tolerance.path)
            stated.append(Cause(words, _half_width(tolerance), "stated", tuple(turns)))
    groups: dict[Key, list[Quantity]] = {}
    for quantity in found:
        if quantity.key not in covered:
            groups.setdefault(_group(quantity), []).append(quantity)
    return (*stated, *(_default(group) for group in groups.values()))


def _group(quantity: Quantity) -> Key:
    """Give what moves together by default: see `causes.Row.shared`."""
    if quantity.family == "sun_w_per_m2":
        return ("sun",)
    if quantity.family == "pad":
        return ("pad", f"{quantity.value:g}")
    return quantity.key


def _default(group: Sequence[Quantity]) -> Cause:
    first = group[0]
    row = CAUSES[first.family]
    names = ", ".join(dict.fromkeys(each.name for each in group if each.name))
    step = row.half_width / 100 if row.unit == "%" else row.half_width
    turns = [(knob, share * step) for each in group for knob, share in each.effects]
    if row.unit == "mm":
        turns = [(knob, math.copysign(min(abs(t), LARGEST_GAP_SHARE), t)) for knob, t in turns]
    unit = "" if row.unit == "-" else f" {row.unit}"
    return Cause(row.words.format(name=names), f"{row.half_width:g}{unit}", row.basis, tuple(turns))


def stated_turns(quantity: Quantity, tolerance: ToleranceCase) -> list[tuple[int, float]]:
    """Give what a stated half-width of a number turns."""
    step = tolerance.half_width
    if CAUSES[quantity.family].unit == "%":
        step = step / tolerance.value if tolerance.value else 0.0
    return [(knob, share * step) for knob, share in quantity.effects]


# Units by the ends of keys, the longest first; a tolerance of a temperature is in kelvin.
_UNITS = (
    ("_mm2k_per_w", "mm2K/W"),
    ("_w_per_m2k", "W/m2K"),
    ("_w_per_mk", "W/mK"),
    ("_w_per_m2", "W/m2"),
    ("_k_per_w", "K/W"),
    ("_pct_per_k", "%/K"),
    ("_pct", "percentage points"),
    ("_mm2", "mm2"),
    ("_mm", "mm"),
    ("_um", "um"),
    ("_deg", "deg"),
    ("_w", "W"),
    ("_c", "K"),
    ("_k", "K"),
    ("_m", "m"),
    ("_a", "A"),
)


def unit_of(path: Key) -> str:
    """Give the unit of a number's changes, by the last key of its path that ends in one."""
    for step in reversed(path):
        for end, unit in _UNITS:
            if step.endswith(end):
                return unit
    return ""


def _half_width(tolerance: ToleranceCase) -> str:
    if tolerance.pct is not None:
        return f"{tolerance.pct:g} %"
    return f"{tolerance.half_width:g} {unit_of(tolerance.path)}".rstrip()
