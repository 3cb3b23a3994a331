"""How far the surroundings' temperature and the power can rise until a limit is met.

Both searches run side by side as two variants of the network, by the secant method on the
smallest margin; the rises of the check are the first guess.
"""

from collections.abc import Callable
from dataclasses import dataclass, replace

import numpy as np

from enclosure_check.findings.results import Headroom, PartFinding, WallFinding
from enclosure_check.findings.solved import Solved
from enclosure_check.network.links import FloatArray, IntArray
from enclosure_check.network.network import Network
from enclosure_check.solve.nearby import Inverse, solve_nearby
from enclosure_check.solve.steady import SolveOptions

# The searches end when the smallest margin is met this closely. [K]
CLOSE_K = 0.02
MOST_STEPS = 8
# Power is not searched for beyond this multiple.
LARGEST_FACTOR = 100.0
# Balance of the states on the way: far closer than the searches end.
_CLOSE = SolveOptions(node_tolerance=1e-6, overall_tolerance=1e-5)
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
    shift, factor = search.run(float(now.min()), first_factor)
    air = None if shift is None else shift + solved.case.surroundings.air_c
    return Headroom(
        wanted_margin_k=wanted,
        highest_air_c=air,
        air_limited_by=None if shift is None else search.limited_by[0],
        power_pct=None if factor is None or not powered else factor * 100,
        power_limited_by=None if factor is None or not powered else search.limited_by[1],
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
        self.start = np.repeat(start, 2, axis=1)
        self.inverse = inverse
        self.limited_by: list[str | None] = [None, None]
        base = limits.margins(network.full_rise(start), network.reference_k)[:, 0]
        self.base = float(base.min()) - wanted

    def run(self, shift: float, factor: float) -> tuple[float | None, float | None]:
        """Search both from their first guesses; None where no answer lies in reach."""
        tracks = (
            _Track(0.0, self.base, shift, lambda value: value),
            _Track(1.0, self.base, factor, lambda value: min(max(value, 0.0), LARGEST_FACTOR)),
        )
        for _ in range(MOST_STEPS):
            if all(track.done for track in tracks):
                break
            margins = self._margins(tracks[0].next, tracks[1].next)
            if margins is None:
                return None, None
            for track, column in zip(tracks, margins.T, strict=True):
                track.take(float(column.min()))
            self.limited_by = [self.limits.names[index] for index in margins.argmin(axis=0)]
        return tracks[0].answer, tracks[1].answer

    def _margins(self, shift: float, factor: float) -> FloatArray | None:
        """Margins over the wanted ones in both variants, shape (limits, 2)."""
        network = self.network
        is_power = np.array(
            [network.labels[label].role == "power" for label in network.sources.label], dtype=bool
        )
        scaled = np.where(is_power[:, None], [1.0, factor], 1.0)
        pair = replace(
            network,
            reference_k=network.reference_k + np.array([shift, 0.0]),
            fixed_rise=np.repeat(network.fixed_rise, 2, axis=1),
            sources=replace(network.sources, power=network.sources.power * scaled),
        )
        solution = solve_nearby(pair, self.start, self.inverse, _CLOSE)
        if not solution.converged:
            return None
        self.start = solution.rise[network.unknown]
        return self.limits.margins(solution.rise, pair.reference_k) - self.wanted


class _Track:
    """One secant search for the zero of a margin that falls with its value."""

    def __init__(
        self, value: float, margin: float, guess: float, clip: Callable[[float], float]
    ) -> None:
        self._clip = clip
        self._last = (value, margin)
        self.next = clip(guess)
        self.answer: float | None = value if abs(margin) < CLOSE_K else None
        self.done = self.answer is not None

    def take(self, margin: float) -> None:
        """Take the margin at `next` and move on."""
        if self.done:
            return
        value, (last_value, last_margin) = self.next, self._last
        if abs(margin) < CLOSE_K:
            self.answer, self.done = value, True
            return
        slope = (margin - last_margin) / (value - last_value) if value != last_value else 0.0
        if slope >= 0:
            self.done = True
            return
        self._last = (value, margin)
        moved = self._clip(value - margin / slope)
        if moved == value:
            # At the end of the range and the margin still not met: no answer in reach.
            self.done = True
        self.next = moved
