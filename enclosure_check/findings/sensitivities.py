"""Which numbers of a document buy most margin where it is smallest, all by one adjoint."""

import math
from collections.abc import Callable, Mapping, Sequence
from typing import Literal, Protocol, TypeVar

import numpy as np

from enclosure_check.description.case import ToleranceCase
from enclosure_check.description.numbers import meaning, numbers
from enclosure_check.description.variation import Variation
from enclosure_check.findings.certainty import Sensitivities, Sensitivity
from enclosure_check.findings.confidence import Bands, bands, stated_turns, unit_of
from enclosure_check.findings.estimates import LARGEST_MISS, Estimates
from enclosure_check.findings.parts import point
from enclosure_check.findings.rebuilt import Rebuilding
from enclosure_check.findings.results import PartFinding
from enclosure_check.findings.solved import Solved

Result = TypeVar("Result")
Key = tuple[str, ...]
# Sections of the document that a designer does not choose.
_INSTALLATION = ("surroundings", "mode")
_AIR = ("surroundings", "air_c")
# Keys that set limits, not temperatures.
_LIMITS = ("limits", "touch_max_c")
# A number whose percent moves a margin by less is left out: it does nothing there. [K]
LEAST_K = 1e-4


class Each(Protocol):
    """Does some work with every item, on several processes perhaps; results in their order."""

    def __call__(self, work: Callable[[Key], Result], items: Sequence[Key], /) -> list[Result]:
        """Give the results."""


def _one_by_one(work: Callable[[Key], Result], items: Sequence[Key], /) -> list[Result]:
    return [work(item) for item in items]


def sensitivities(
    solved: Solved, variation: Variation, worst: PartFinding, most: int, each: Each = _one_by_one
) -> Sensitivities:
    """Give the numbers that move the smallest margin most, per percent of each.

    Parameters
    ----------
    solved
        The case it arises in.
    variation
        The document under its option and condition.
    worst
        The finding with the smallest margin.
    most
        How many to give of those a designer can change, and of those of the installation.
    each
        Does the work with the numbers that are not read off the adjoint.
    """
    node = point(solved, worst.name, worst.limit_kind)
    own = bands(solved, [node])
    found = [] if own is None else _Search(own, variation, worst, most, each).found()
    design, given = (
        [row for row in found if row.installation is kind][:most] for kind in (False, True)
    )
    return Sensitivities(
        worst.name, worst.limit_kind, worst.limit_side, solved.case.condition, (*design, *given)
    )


class _Search:
    """Finds the numbers that move a margin most: exactly those that may be among them."""

    def __init__(
        self, own: Bands, variation: Variation, worst: PartFinding, most: int, each: Each
    ) -> None:
        self._own, self._variation = own, variation
        self._sign = -1.0 if worst.limit_side == "max" else 1.0
        self._most, self._each = most, each
        self._rebuilding = Rebuilding(own.solved, own.adjoint, variation.case_with)
        self._about = Estimates(self._rebuilding, variation.document, worst.name)

    def found(self) -> list[Sensitivity]:
        """Give what numbers buy, the most first; those left out cannot be among the first."""
        asked = {
            path: value
            for path, value in numbers(self._variation.node).items()
            if not any(step in _LIMITS for step in path)
        }
        exact: dict[Key, Sensitivity] = {}
        others: list[Key] = []
        for path, value in asked.items():
            by = _by_adjoint(self._own, self._variation, path, value)
            if by is None:
                others.append(path)
            elif (row := self._row(path, value, by, "adjoint")) is not None:
                exact[path] = row
        bounds = {path: self._bound(path, asked[path]) for path in others}
        first = [path for path in others if bounds[path] is None]
        self._settle(asked, exact, self._estimates(first, asked))
        # Most of those that can do little are beyond hope when the others are known.
        least = {kind: self._least(exact, kind) for kind in (False, True)}
        bounded = [
            path
            for path, bound in bounds.items()
            if bound is not None and bound >= least[_is_installation(path)]
        ]
        self._settle(asked, exact, self._estimates(bounded, asked))
        # As the document has them where they do as much.
        rows = [row for path in asked if (row := exact.get(path)) is not None]
        return sorted((row for row in rows if _moves(row) >= LEAST_K), key=_rank)

    def _bound(self, path: Key, value: float) -> float | None:
        """Give about the most by which a number can rank [K]; None where that is not known."""
        if value == 0 and not path[-1].endswith("_c"):
            return 0.0  # as a percent of it is nothing
        most = self._about.most(path)
        return None if most is None else most * abs(value) / 100

    def _settle(
        self,
        asked: Mapping[Key, float],
        exact: dict[Key, Sensitivity],
        about: dict[Key, Sensitivity],
    ) -> None:
        """Find exactly what those do that may be among the first."""
        while doubtful := self._doubtful(exact, about):
            for path, by in zip(doubtful, self._derivatives(asked, doubtful), strict=True):
                del about[path]
                row = None if by is None else self._row(path, asked[path], by, "rebuilt")
                if row is not None:
                    exact[path] = row

    def _doubtful(
        self, exact: Mapping[Key, Sensitivity], about: Mapping[Key, Sensitivity]
    ) -> list[Key]:
        """Give numbers known about that may do more than the last one to be given of their kind.

        Those that seem to do most first, and not more than are given, as they settle the others.
        """
        doubtful: list[Key] = []
        for kind in (False, True):
            least = self._least(exact, kind)
            open_ = [path for path, row in about.items() if row.installation is kind]
            open_ = [path for path in open_ if -_rank(about[path]) * LARGEST_MISS >= least]
            doubtful += sorted(open_, key=lambda path: _rank(about[path]))[: self._most]
        return doubtful

    def _least(self, exact: Mapping[Key, Sensitivity], kind: bool) -> float:
        """Give what the last one to be given of a kind does at least, by those known [K]."""
        known = sorted(-_rank(row) for row in exact.values() if row.installation is kind)
        return known[-self._most] if len(known) >= self._most else 0.0

    def _estimates(
        self, paths: Sequence[Key], asked: Mapping[Key, float]
    ) -> dict[Key, Sensitivity]:
        """Tell about what numbers do; those that do nothing even so are left out."""

        def work(path: Key) -> float | None:
            return self._about.about(path, asked[path])

        found = zip(paths, self._each(work, paths), strict=True)
        rows = {
            path: self._row(path, asked[path], by, "rebuilt", LARGEST_MISS)
            for path, by in found
            if by is not None
        }
        return {path: row for path, row in rows.items() if row is not None}

    def _derivatives(self, asked: Mapping[Key, float], paths: Sequence[Key]) -> list[float | None]:
        def work(path: Key) -> float | None:
            by = self._rebuilding.derivative(path, asked[path])
            return None if by is None else float(by[0])

        return self._each(work, paths)

    def _row(
        self,
        path: Key,
        value: float,
        by: float,
        route: Literal["adjoint", "rebuilt"],
        miss: float = 1.0,
    ) -> Sensitivity | None:
        """Give what a number buys; None where it does nothing, by so much more than it seems."""
        per_pct = None if path[-1].endswith("_c") else self._sign * by * abs(value) / 100
        row = Sensitivity(
            path=".".join(path),
            value=value,
            unit=unit_of(path),
            margin_per_pct_k=per_pct,
            margin_per_unit_k=self._sign * by,
            installation=_is_installation(path),
            route=route,
        )
        return row if math.isfinite(by) and _moves(row) * miss >= LEAST_K else None


def _moves(row: Sensitivity) -> float:
    """Give what a percent, or one unit where there is none, does to the margin [K]."""
    whole = row.margin_per_pct_k is None or row.value == 0
    by = row.margin_per_unit_k if whole else row.margin_per_pct_k
    return abs(by or 0.0)


def _rank(row: Sensitivity) -> float:
    """Give what ranks a number first: a percent of it, a kelvin of a temperature."""
    by = row.margin_per_unit_k if row.margin_per_pct_k is None else row.margin_per_pct_k
    return -abs(by)


def _by_adjoint(own: Bands, variation: Variation, path: Key, value: float) -> float | None:
    """Derivative by a number that is one thing in the case [K/unit]; None for any other."""
    if path == _AIR:  # also what the document leaves to it, and the air in joints
        return None
    about = meaning(variation.document, path).about
    by_key = {quantity.key: quantity for quantity in own.quantities}
    if not about or any(key not in by_key for key in about) or value == 0:
        return None
    unit = ToleranceCase(path, value, 1.0, None, about, about)
    turns: Sequence[tuple[int, float]] = [
        turn for key in about for turn in stated_turns(by_key[key], unit)
    ]
    gradient = own.gradient[:, 0]
    return float(np.sum([share * gradient[knob] for knob, share in turns]))


def _is_installation(path: Key) -> bool:
    return path[0] in _INSTALLATION or path[-1] in ("surface_c", "surface_emissivity")
