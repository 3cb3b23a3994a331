"""How far the surroundings' temperature and the power can rise until a limit is met.

Both searches run side by side as two variants of the network, by the secant method on the
smallest margin; the rises of the check are the first guess. Where power that grows with temperature
leaves no steady state, the search goes back towards the last one there was.
"""

import numpy as np

from enclosure_check.findings.results import Headroom, PartFinding, WallFinding
from enclosure_check.findings.solved import Solved
from enclosure_check.network.links import FloatArray, IntArray
from enclosure_check.network.network import BoolArray, Network
from enclosure_check.records import dataclass, replace
from enclosure_check.solve.nearby import Inverse, solve_nearby
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


@dataclass(frozen=True, eq=False)
class _Limits:
    """The upper limits: nodes, their limits, and their names."""

    node: IntArray
    limit_k: FloatArray
    names: tuple[str, ...]

    def margins(self, rise: FloatArray, reference_k: FloatArray) -> FloatArray:
        """Margins by limit and variant [K], shape (limits, v)."""
        return self.limit_k[:, None] - rise[self.node] - reference_k


def headroom(
    solved: Solved, parts: tuple[PartFinding, ...], walls: tuple[WallFinding, ...]
) -> Headroom:
    """Give the highest surroundings and the power at which the wanted margin is just kept."""
    wanted = solved.case.margin_k or 0.0
    limits = _upper_limits(solved, parts, walls)
    if limits is None:
        return Headroom(wanted, None, None, None, None)
    network, rise = solved.network, solved.solution.rise
    reference = network.reference_k
    now = limits.margins(rise, reference)[:, 0] - wanted
    powered = solved.total_put_in("power") > 0
    search = _Search(network, limits, wanted, rise[network.unknown], solved.inverse)
    first_factor = _guess_factor(limits, rise, reference, wanted) if powered else 1.0
    coldest = COLDEST_AIR_C - solved.case.surroundings.air_c
    shift, factor = search.run(float(now.min()), coldest, first_factor)
    air = None if shift.answer is None else shift.answer + solved.case.surroundings.air_c
    return Headroom(
        wanted_margin_k=wanted,
        highest_air_c=air,
        air_limited_by=shift.limited_by,
        power_pct=None if factor.answer is None or not powered else factor.answer * 100,
        power_limited_by=factor.limited_by if powered else None,
    )


def _upper_limits(
    solved: Solved, parts: tuple[PartFinding, ...], walls: tuple[WallFinding, ...]
) -> _Limits | None:
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
    return _Limits(
        np.array([row[0] for row in rows], dtype=np.intp),
        np.array([row[1] for row in rows]) + offset,
        tuple(row[2] for row in rows),
    )


def _guess_factor(
    limits: _Limits, rise: FloatArray, reference_k: FloatArray, wanted: float
) -> float:
    own = rise[limits.node, 0]
    allowed = own + limits.margins(rise, reference_k)[:, 0] - wanted
    share = np.where(own > 1e-6, allowed / np.maximum(own, 1e-6), np.inf)
    least = float(share.min())
    if least <= 0:
        return 0.0
    return float(min(least ** (1 / _RISE_EXPONENT), LARGEST_FACTOR))


class _Search:
    """The two searches: shift of the surroundings [K] and factor on the power."""

    def __init__(
        self,
        network: Network,
        limits: _Limits,
        wanted: float,
        start: FloatArray,
        inverse: Inverse,
    ) -> None:
        self.network = network
        self.limits = limits
        self.wanted = wanted
        # The last two states of either search, from which the next is foreseen.
        self.states = [[(0.0, start[:, 0])], [(1.0, start[:, 0])]]
        self.inverse = inverse
        roles = np.array([label.role == "power" for label in network.labels], dtype=bool)
        self.is_power = roles[network.sources.label]
        base = limits.margins(network.full_rise(start), network.reference_k)[:, 0] - wanted
        self.base = float(base.min())
        self.base_name = limits.names[int(base.argmin())]

    def run(self, shift: float, coldest: float, factor: float) -> tuple["_Track", "_Track"]:
        """Search both from their first guesses; the shift not below the coldest there may be."""
        at = self.base, self.base_name
        tracks = (
            _Track(0.0, *at, shift, coldest, np.inf, CLOSE_TO_RUNAWAY_K),
            _Track(1.0, *at, factor, 0.0, LARGEST_FACTOR, CLOSE_TO_RUNAWAY_SHARE),
        )
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
        return tracks

    def _margins(self, values: dict[int, float]) -> tuple[FloatArray, BoolArray]:
        """Margins over the wanted ones by limit and search, and which searches have any.

        ``values`` are those to be tried: the shift under 0, the factor under 1.
        """
        network, count = self.network, len(values)
        shifts = np.array([value if index == 0 else 0.0 for index, value in values.items()])
        factors = np.array([value if index == 1 else 1.0 for index, value in values.items()])
        scaled = np.where(self.is_power[:, None], factors, 1.0)
        tried = replace(
            network,
            reference_k=network.reference_k + shifts,
            fixed_rise=np.repeat(network.fixed_rise, count, axis=1),
            sources=replace(network.sources, power=network.sources.power * scaled),
        )
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
            self._end(value, name)

    def _end(self, answer: float | None, limited_by: str | None) -> None:
        self.answer, self.limited_by, self.done = answer, limited_by, True

    def take(self, margin: float, name: str) -> None:
        """Take the margin at `next`, of the limit named, and move on."""
        value, (last_value, last_margin) = self.next, self._last
        if abs(margin) < CLOSE_K:
            self._end(value, name)
            return
        slope = (margin - last_margin) / (value - last_value) if value != last_value else 0.0
        if slope >= 0:
            self._end(None, None)
            return
        self._last = (value, margin)
        moved = min(max(value - margin / slope, self._low), self._high)
        if moved == value:
            # At the end of the range and the margin still not met: no answer in reach.
            self._end(None, None)
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
            self._end(value if margin > 0 else None, RUNAWAY if margin > 0 else None)
        else:
            self.next = 0.5 * (value + runaway)
