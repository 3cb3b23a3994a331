"""Networks like one that was built: pieces made of the same things are taken over from it.

A network is built piece by piece, and every piece only adds to what a `Site` collects. The record
of a network tells where each of its pieces begins and ends in all that was collected. Another
network of a case that differs in little is built alike; what is made of the same things is copied
from there, and only the rest is built. The result is that of building from nothing, bit for bit.
"""

from collections.abc import Callable, Hashable, Iterator, Mapping
from functools import cached_property
from typing import Any

from enclosure_check.description.case import BoardCase, Case
from enclosure_check.network.build import build_network, build_on
from enclosure_check.network.builder import Blocks
from enclosure_check.network.grid import GridOptions
from enclosure_check.network.network import Network
from enclosure_check.network.site import Site
from enclosure_check.records import dataclass, replace

# How far all that is collected has grown.
Marks = tuple[int, ...]
Name = tuple[str, Hashable]


def collected(site: Site) -> tuple[Any, ...]:
    """Give all that pieces add to."""
    builder, air, patches = site.builder, site.air_site, site.patches
    return (
        *builder.collected(),
        air.films,
        patches.patch_of,
        air.faces,
        air.tops,
        patches.rectangles,
        patches.obstacles,
        patches.faces,
        patches.grids,
        site.spots.contacts,
        site.surfaces,
        site.grids,
        site.wall_outside,
        site.wall_inside,
        site.boards,
        site.board_faces,
        site.cans,
        site.parts,
    )


# Those of them that later pieces refer to by number.
_NUMBERED = (0, 1, 9, 10)


def _marks(site: Site) -> Marks:
    return tuple(len(each) for each in collected(site))


class Builds:
    """Builds networks of cases that differ little from one, in less time."""

    def __init__(self, case: Case) -> None:
        self._case = case

    def network(self, case: Case) -> Network:
        """Build the network of a case as `build_network` does."""
        different = changed(case, self._case)
        if different is not None:
            record = self._record
            site = Site.of(case, GridOptions())
            site.follow = Following(record, different, site)
            network = build_on(site, case)
            if alike(site, record.site):
                return network
        return build_network(case)

    @property
    def own(self) -> Network:
        """The network of the case itself; others have the links in common that are the same."""
        return self._recorded[1]

    @property
    def _record(self) -> "Record":
        return self._recorded[0]

    @cached_property
    def _recorded(self) -> "tuple[Record, Network]":
        site = Site.of(self._case, GridOptions())
        site.follow = record = Record(site)
        return record, build_on(site, self._case)


class Record:
    """A network's pieces, as they were built."""

    def __init__(self, site: Site) -> None:
        self.site = site
        self.marks: dict[Name, tuple[Marks, Marks]] = {}

    def piece(self, name: Name, build: Callable[[], None]) -> None:
        """Build a piece."""
        start = _marks(self.site)
        build()
        self.marks[name] = start, _marks(self.site)

    def settle(self) -> None:
        """Have all pieces so far in place: they are."""


class Following:
    """A network being built like a recorded one."""

    def __init__(self, record: Record, changed: "Changed", site: Site) -> None:
        self._record, self._changed, self._site = record, changed, site
        # Pieces to be taken over that lie one after the other, not copied yet.
        self._waiting: tuple[Marks, Marks] | None = None

    def piece(self, name: Name, build: Callable[[], None]) -> None:
        """Take a piece over, or build it where it is made of other things."""
        known = self._record.marks.get(name)
        if known is None or self._differs(name) or not self._fits(known[0]):
            self.settle()
            build()
        elif self._waiting is not None and self._waiting[1] == known[0]:
            self._waiting = self._waiting[0], known[1]
        else:
            self.settle()
            self._waiting = known

    def settle(self) -> None:
        """Have all pieces so far in place."""
        if self._waiting is None:
            return
        targets, sources = collected(self._site), collected(self._record.site)
        for target, source, start, end in zip(targets, sources, *self._waiting, strict=True):
            if end > start:
                _take(target, source, start, end)
        self._waiting = None

    def _differs(self, name: Name) -> bool:
        kind, which = name
        if kind == "contacts":
            self.settle()
            own, other = self._site.spots.on(which), self._record.site.spots.on(which)
            alike = len(own) == len(other)
            return not alike or any(a is not b for a, b in zip(own, other, strict=True))
        return self._changed.touches(kind, which)

    def _fits(self, start: Marks) -> bool:
        """Whether what a piece refers to by number has the same numbers."""
        here = _marks(self._site) if self._waiting is None else self._waiting[1]
        return all(here[place] == start[place] for place in _NUMBERED)


def _take(target: Any, source: Any, start: int, end: int) -> None:
    if isinstance(target, Blocks):
        target.take(source, start, end)
    elif isinstance(target, dict):
        target.update(list(source.items())[start:end])
    else:
        target.extend(source[start:end])


def alike(site: Site, other: Site) -> bool:
    """Whether nodes, labels, films and patches of two finished sites have the same numbers.

    Only then may pieces of one refer to them in the other.
    """
    own, others = site.builder.collected(), other.builder.collected()
    return (
        own[0] == others[0]
        and list(own[1]) == list(others[1])
        and [film.name for film in site.air_site.films]
        == [film.name for film in other.air_site.films]
        and site.patches.patch_of == other.patches.patch_of
    )


# What is different -------------------------------------------------------------------------


@dataclass(frozen=True)
class Changed:
    """What is different between two cases that have everything else alike."""

    walls: frozenset[str]
    """In anything but openings and cables."""
    sheets: frozenset[str]
    """Walls, in what conducts along them."""
    openings: bool
    cables: bool
    boards: frozenset[str]
    """In anything but what joins them to walls."""
    joints: frozenset[str]
    """Boards, in anything."""
    parts: frozenset[str]
    covered: frozenset[str]
    """Walls and boards that something stands on which is different."""
    on: dict[str, str]
    """Host of every part."""

    def touches(self, kind: str, which: Hashable) -> bool:
        """Tell whether a piece is made of anything that is different."""
        match kind:
            case "wall":
                return which in self.walls or which in self.covered
            case "corners":
                return bool(self.sheets)
            case "outside":
                return bool(self.walls)
            case "cables":
                return self.cables
            case "openings":
                return self.openings or bool(self.boards)
            case "board":
                return which in self.boards or which in self.covered
            case "features":
                return bool(self.sheets) or which in self.joints or which in self.covered
            case "part":
                host = self.on[str(which)]
                return bool(self.sheets) or which in self.parts or host in self.boards
        return True


def changed(case: Case, other: Case) -> Changed | None:
    """Give what is different; None where too much is for any piece to be taken over."""
    shell = ("surroundings", "up", "inside_mm", "outside_mm", "stirred")
    if any(getattr(case, name) != getattr(other, name) for name in shell):
        return None
    things: list[tuple[Mapping[Any, object], Mapping[Any, object]]]
    things = [(case.walls, other.walls), (case.boards, other.boards), (case.parts, other.parts)]
    if any(list(one) != list(two) for one, two in things):
        return None
    hosts = {name: part.host for name, part in case.parts.items()}
    if hosts != {name: part.host for name, part in other.parts.items()}:
        return None
    walls, boards, parts = (
        frozenset(name for name in one if one[name] != two[name]) for one, two in things
    )
    pairs = {name: (case.walls[name], other.walls[name]) for name in case.walls if name in walls}
    covered = {
        plate
        for each in (case, other)
        for plate in (*_under_parts(each, parts), *_under_fillers(each, boards))
    }
    return Changed(
        walls=frozenset(
            name
            for name, (one, two) in pairs.items()
            if replace(one, openings=two.openings, cables=two.cables) != two
        ),
        sheets=frozenset(
            name
            for name, (one, two) in pairs.items()
            if (one.material, one.thickness_mm) != (two.material, two.thickness_mm)
        ),
        openings=any(one.openings != two.openings for one, two in pairs.values()),
        cables=any(one.cables != two.cables for one, two in pairs.values()),
        boards=frozenset(
            name for name in boards if _alone(case.boards[name]) != _alone(other.boards[name])
        ),
        joints=boards,
        parts=parts,
        covered=frozenset(covered),
        on=hosts,
    )


def _alone(board: BoardCase) -> BoardCase:
    """Give a board without what joins it to walls and covers nothing of it."""
    return replace(board, stand_offs=(), edge_clamps=())


def _under_parts(case: Case, parts: frozenset[str]) -> Iterator[str]:
    """Give walls and boards that parts stand on, by themselves or their pads."""
    for part in (case.parts[name] for name in parts):
        yield part.host
        if part.pad is not None:
            yield part.pad.wall


def _under_fillers(case: Case, boards: frozenset[str]) -> Iterator[str]:
    """Give walls that the fillers of boards lie on."""
    for board in (case.boards[name] for name in boards):
        yield from (filler.side for filler in board.fillers)
