"""How far the surroundings' temperature and the power can rise until a limit is met.

Both are found side by side as two variants of the network, together with its state
(`solve.reaching`). What is not found so is searched for by the secant method on the smallest
margin; where power that grows with temperature leaves no steady state, the search goes back towards
the last one there was.
"""

from collections.abc import Sequence
from typing import NamedTuple

import numpy as np

from enclosure_check.findings.results import Headroom, PartFinding, WallFinding
from enclosure_check.findings.solved import Solved
from enclosure_check.network.links import FloatArray
from enclosure_check.network.network import BoolArray, Network
from enclosure_check.solve.nearby import Inverse, solve_nearby
from enclosure_check.solve.reaching import Border, Limits, Number, reached, turned
from enclosure_check.solve.steady import SolveOptions

# The searches end when the smallest margin is met this closely. [K]
CLOSE_K = 0.02
# Or at the last steady state, found this closely. [K], [-]
CLOSE_TO_RUNAWAY_K, CLOSE_TO_RUNAWAY_SHARE = 0.5, 0.01
MOST_STEPS = 20
RUNAWAY = "thermal runaway"
# Colder air than this is no answer: it is the coldest a document may state. [C]
COLDEST_AIR_C = -90.0
# Power is not searched for beyond this multiple.
LARGEST_FACTOR = 100.0
# Balance of the states on the way: far closer than the searches end.
# Where no state is found at once there mostly is none, and the search goes back: to look longer
# there takes seconds, and a state so hard to find is close to the last.
_CLOSE = SolveOptions(
    max_steps=16, node_tolerance=1e-6, overall_tolerance=1e-5, by_stirring=False, most_holds=1
)
# Film laws and radiation make rises grow about so with power; only a first guess.
_RISE_EXPONENT = 0.87


def headroom(
    solved: Solved, parts: tuple[PartFinding, ...], walls: tuple[WallFinding, ...]
) -> Headroom:
    """Give the highest surroundings and the power at which the wanted margin is just kept."""
    wanted = solved.case.margin_k or 0.0
    limits = _upper_limits(solved, parts, walls)
    if limits is None:
        return Headroom(wanted, None, None, None, None)
    powered = solved.total_put_in("power") > 0
    shift, factor = _found(solved, limits, wanted, powered)
    air = None if shift.answer is None else shift.answer + solved.case.surroundings.air_c
    return Headroom(
        wanted_margin_k=wanted,
        highest_air_c=air,
        air_limited_by=shift.limited_by,
        power_pct=None if factor.answer is None or not powered else factor.answer * 100,
        power_limited_by=factor.limited_by if powered else None,
    )


def _found(solved: Solved, limits: Limits, wanted: float, powered: bool) -> tuple["_End", "_End"]:
    """Find how far the surroundings may shift [K], and the factor the power may take."""
    network, rise = solved.network, solved.solution.rise
    coldest = COLDEST_AIR_C - solved.case.surroundings.air_c
    ends: list[_End | None] = [None, None if powered else _End(None, None)]
    # Where power doubles there may be several states, or none: those are searched for.
    numbers = _numbers(network, limits, rise, coldest)
    if not network.sources.doubles:
        own = numbers[: 1 + powered]
        met = reached(Border(network, rise, solved.inverse, own, limits, wanted), CLOSE_K)
        for place, one in enumerate(met):
            if one is not None:
                ends[place] = _End(one.value + place, one.limit)
    shift, factor = ends
    if shift is None or factor is None:
        now = limits.margins(rise, network.reference_k)[:, 0] - wanted
        first = _guess_factor(limits, rise, network.reference_k, wanted) if powered else 1.0
        search = _Search(network, numbers, limits, wanted, rise[network.unknown], solved.inverse)
        shift, factor = search.run((shift, factor), float(now.min()), coldest, first)
    return shift, factor


def _numbers(
    network: Network, limits: Limits, rise: FloatArray, coldest: float
) -> tuple[Number, Number]:
    """The shift of the surroundings [K], and what is added to the factor on the power."""
    reference, power = network.reference_k, network.sources.power
    roles = np.array([label.role == "power" for label in network.labels], dtype=bool)
    is_power = roles[network.sources.label][:, None]
    scale = 1.0 / max(1.0, float(np.abs(rise[limits.node]).max()))
    return (
        Number(lambda shift: (reference + shift, power), 1.0, coldest, np.inf),
        Number(
            lambda more: (reference, np.where(is_power, power * (1.0 + more), power)),
            scale,
            -1.0,
            LARGEST_FACTOR - 1.0,
        ),
    )


def _upper_limits(
    solved: Solved, parts: tuple[PartFinding, ...], walls: tuple[WallFinding, ...]
) -> Limits | None:
    places = solved.network.places
    rows: list[tuple[int, float, str]] = [
        (
            getattr(places.parts[part.name], part.limit_kind),
            part.limit_c,
            f"{part.name} {part.limit_kind}",
        )
        for part in parts
        if part.limit_side == "max"
    ]
    rows += [
        (int(node), wall.touch_max_c, f"{wall.name} wall touch")
        for wall in walls
        if wall.touch_max_c is not None
        for node in places.wall_outside[wall.name].cells.ravel()
    ]
    if not rows:
        return None
    offset = float(solved.network.reference_k[0]) - solved.case.surroundings.air_c
    return Limits(
        np.array([row[0] for row in rows], dtype=np.intp),
        np.array([row[1] for row in rows]) + offset,
        tuple(row[2] for row in rows),
    )


def _guess_factor(
    limits: Limits, rise: FloatArray, reference_k: FloatArray, wanted: float
) -> float:
    own = rise[limits.node, 0]
    allowed = own + limits.margins(rise, reference_k)[:, 0] - wanted
    share = np.where(own > 1e-6, allowed / np.maximum(own, 1e-6), np.inf)
    least = float(share.min())
    if least <= 0:
        return 0.0
    return float(min(least ** (1 / _RISE_EXPONENT), LARGEST_FACTOR))


class _End(NamedTuple):
    """Where a search ended: the shift [K] or the factor, and what it is limited by."""

    answer: float | None
    limited_by: str | None


class _Search:
    """The two searches: shift of the surroundings [K] and factor on the power."""

    def __init__(
        self,
        network: Network,
        numbers: Sequence[Number],
        limits: Limits,
        wanted: float,
        start: FloatArray,
        inverse: Inverse,
    ) -> None:
        self.network = network
        self.numbers = numbers
        self.limits = limits
        self.wanted = wanted
        # The last two states of either search, from which the next is foreseen.
        self.states = [[(0.0, start[:, 0])], [(1.0, start[:, 0])]]
        self.inverse = inverse
        base = limits.margins(network.full_rise(start), network.reference_k)[:, 0] - wanted
        self.base = float(base.min())
        self.base_name = limits.names[int(base.argmin())]

    def run(
        self, known: tuple[_End | None, _End | None], shift: float, coldest: float, factor: float
    ) -> tuple[_End, _End]:
        """Search what is not known from the first guesses, the shift not below the coldest."""
        at = self.base, self.base_name
        tracks = (
            _Track(0.0, *at, shift, coldest, np.inf, CLOSE_TO_RUNAWAY_K),
            _Track(1.0, *at, factor, 0.0, LARGEST_FACTOR, CLOSE_TO_RUNAWAY_SHARE),
        )
        for track, end in zip(tracks, known, strict=True):
            if end is not None:
                track.end(*end)
        for _ in range(MOST_STEPS):
            if all(track.done for track in tracks):
                break
            # One that has ended is not reckoned on.
            going = [index for index, track in enumerate(tracks) if not track.done]
            margins, found = self._margins({index: tracks[index].next for index in going})
            for column, index in enumerate(going):
                least = int(margins[:, column].argmin())
                if found[column]:
                    tracks[index].take(float(margins[least, column]), self.limits.names[least])
                else:
                    tracks[index].go_back()
        shifted, scaled = (_End(track.answer, track.limited_by) for track in tracks)
        return shifted, scaled

    def _margins(self, values: dict[int, float]) -> tuple[FloatArray, BoolArray]:
        """Margins over the wanted ones by limit and search, and which searches have any.

        ``values`` are those to be tried: the shift under 0, the factor under 1.
        """
        network = self.network
        # The shift counts from none, the factor from one.
        more = np.array([value - index for index, value in values.items()])
        tried = turned(network, [self.numbers[index] for index in values], more)
        start = np.stack([self._foreseen(*each) for each in values.items()], axis=1)
        solution = solve_nearby(tried, start, self.inverse, _CLOSE)
        found = solution.each_converged
        for column, (index, value) in enumerate(values.items()):
            if found[column] and value != self.states[index][-1][0]:
                state = value, solution.rise[network.unknown, column]
                self.states[index] = [self.states[index][-1], state]
        return self.limits.margins(solution.rise, tried.reference_k) - self.wanted, found

    def _foreseen(self, index: int, value: float) -> FloatArray:
        """Rises of the unknown nodes to start from [K], on the line through the last states."""
        last, x = self.states[index][-1]
        if len(self.states[index]) == 2:
            before, y = self.states[index][0]
            return x + (x - y) * ((value - last) / (last - before))
        return x * value**_RISE_EXPONENT if index == 1 else x


class _Track:
    """One secant search for the zero of a margin that falls with its value."""

    def __init__(
        self,
        value: float,
        margin: float,
        name: str,
        guess: float,
        low: float,
        high: float,
        close_to_runaway: float,
    ) -> None:
        self._low, self._high, self._close = low, high, close_to_runaway
        self._last = (value, margin)
        self._runaway: float | None = None
        """Least value known to have no steady state."""
        self.answer: float | None = None
        self.limited_by: str | None = None
        self.done = False
        self.next = min(max(guess, low), high)
        if abs(margin) < CLOSE_K:
            self.end(value, name)

    def end(self, answer: float | None, limited_by: str | None) -> None:
        """End the search with an answer, or without one."""
        self.answer, self.limited_by, self.done = answer, limited_by, True

    def take(self, margin: float, name: str) -> None:
        """Take the margin at `next`, of the limit named, and move on."""
        value, (last_value, last_margin) = self.next, self._last
        if abs(margin) < CLOSE_K:
            self.end(value, name)
            return
        slope = (margin - last_margin) / (value - last_value) if value != last_value else 0.0
        if slope >= 0:
            self.end(None, None)
            return
        self._last = (value, margin)
        moved = min(max(value - margin / slope, self._low), self._high)
        if moved == value:
            # At the end of the range and the margin still not met: no answer in reach.
            self.end(None, None)
        elif self._runaway is not None and moved >= self._runaway:
            self._halve(self._runaway)
        else:
            self.next = moved

    def go_back(self) -> None:
        """Take it that there is no steady state at `next`, and move on."""
        self._runaway = self.next
        self._halve(self.next)

    def _halve(self, runaway: float) -> None:
        """Go half the way from the last steady state to where there is none, or end there."""
        value, margin = self._last
        # A factor is found to a share of itself, a shift to so many kelvin.
        scale = max(value, 1.0) if self._high < np.inf else 1.0
        if runaway - value < self._close * scale:
            self.end(value if margin > 0 else None, RUNAWAY if margin > 0 else None)
        else:
            self.next = 0.5 * (value + runaway)
