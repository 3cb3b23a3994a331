"""Explains the temperature of one part: where its heat goes, and what a kelvin would cost."""

import heapq
from collections import defaultdict
from typing import NamedTuple

import numpy as np

from enclosure_check.findings.explanation import (
    ExplainedReport,
    Explanation,
    HeatEnd,
    HeatSource,
    LinkHeat,
    PowerCost,
    ThingHeat,
    TreeStep,
)
from enclosure_check.findings.parts import point_c
from enclosure_check.findings.ranges import range_findings
from enclosure_check.findings.results import ConditionFinding, PartFinding, Report
from enclosure_check.findings.solved import Solved
from enclosure_check.findings.things import LEAST_W, Flow, Things, flows_of, passing, things_of
from enclosure_check.findings.ways import laws_of, way_of
from enclosure_check.network.links import FloatArray
from enclosure_check.records import fields
from enclosure_check.solve.levers import Lever, Levers

# Links that carry less of the part's heat, and move its temperature less than this share of the
# strongest link, are left out of the tree. [%]
PRUNED_BELOW_PCT = 3.0
# A change of conductance beyond this factor is no longer near what is estimated from.
MOST_CHANGED = 4.0
# Within a thing, these can be changed by its builder.
_WITHIN = ("along", "junction_to_case")
# Any limit comes before none.
_NO_LIMIT_K = 1e6
# Effects below this are rounding. [K]
_LEAST_K = 1e-9


def explain(solved: Solved, part: str, finding: PartFinding | None) -> Explanation:
    """Explain a part under one condition.

    Parameters
    ----------
    solved
        The case, solved.
    part
        Its reference.
    finding
        The limit to explain; without one, the junction and that it be cooler.
    """
    things = things_of(solved, part)
    flows = [
        flow
        for flow in flows_of(solved, things)
        if (flow.heat_w > LEAST_W if flow.start != flow.end else flow.role in _WITHIN)
    ]
    shares = passing(things, flows)
    out = _sums(things, flows, "start")
    carried = [
        0.0 if flow.start == flow.end else float(shares[flow.start]) * flow.heat_w / out[flow.start]
        for flow in flows
    ]
    point = "junction" if finding is None else finding.limit_kind
    levers = Levers(
        solved.network,
        solved.solution.rise,
        getattr(solved.network.places.parts[part], point),
    )
    slopes = levers.slopes([flow.bundle for flow in flows])
    kept = _kept(carried, slopes)
    bends = levers.bends([flows[n].bundle for n in kept], [slopes[n] for n in kept])
    found = {n: Lever(slopes[n], bend) for n, bend in zip(kept, bends, strict=True)}
    cooler = finding is None or finding.limit_side == "max"
    return Explanation(
        part=part,
        condition=solved.case.condition,
        point=point,
        limit_side=None if finding is None else finding.limit_side,
        temperature_c=point_c(solved, part, point),
        limit_c=None if finding is None else finding.limit_c,
        margin_k=None if finding is None else finding.margin_k,
        heat_w=float(out[things.root]),
        root=things.names[things.root],
        things=_things(things, flows, shares),
        links=_links(solved, things, flows, carried, slopes, found, cooler),
        tree=_tree(things, flows, carried, kept),
        pruned_below_pct=PRUNED_BELOW_PCT,
        ends=_ends(things, shares),
        powers=_powers(solved, levers.by_heat, cooler),
    )


class Worst:
    """Keeps, of the conditions it is shown, the one where a part's margin is smallest.

    Where the part has no limit, the one where its junction is hottest.
    """

    def __init__(self, part: str) -> None:
        self._part = part
        self._worst: tuple[float, Solved, PartFinding | None] | None = None

    def see(self, solved: Solved, found: ConditionFinding) -> None:
        """Look at one condition."""
        if self._part not in solved.case.parts:
            return
        own = next((row for row in found.parts if row.name == self._part), None)
        unlimited = -point_c(solved, self._part, "junction") + _NO_LIMIT_K
        margin = unlimited if own is None else own.margin_k
        if self._worst is None or margin < self._worst[0]:
            self._worst = margin, solved, own

    def explained(self, report: Report) -> ExplainedReport:
        """Give the report with an explanation of the part under the condition kept."""
        assert self._worst is not None
        _, solved, own = self._worst
        fields_of = {field.name: getattr(report, field.name) for field in fields(report)}
        return ExplainedReport(**fields_of, explain=explain(solved, self._part, own))


# Things and links -------------------------------------------------------------------------


def _sums(things: Things, flows: list[Flow], end: str) -> FloatArray:
    """Heat that leaves (start) or enters (end) each thing by links [W], shape (t,)."""
    total = np.zeros(len(things.names))
    for flow in flows:
        if flow.start != flow.end:
            total[getattr(flow, end)] += flow.heat_w
    return total


def _things(things: Things, flows: list[Flow], shares: FloatArray) -> tuple[ThingHeat, ...]:
    into, out = _sums(things, flows, "end"), _sums(things, flows, "start")
    return tuple(
        ThingHeat(
            name=name,
            temperature_c=float(things.temperature_c[at]),
            outside=things.outside[at],
            put_in_w=float(things.put_in_w[at]),
            in_w=float(into[at]),
            out_w=float(out[at]),
            share_pct=100 * float(shares[at]),
            heated_by=_heated_by(things, flows, at),
        )
        for at, name in enumerate(things.names)
        if into[at] > 0 or out[at] > 0 or things.put_in_w[at] != 0
    )


def _heated_by(things: Things, flows: list[Flow], thing: int) -> tuple[HeatSource, ...]:
    brought: dict[int, float] = defaultdict(float)
    for flow in flows:
        if flow.end == thing and flow.start != thing:
            brought[flow.start] += flow.heat_w
    if things.put_in_w[thing] > 0:
        brought[thing] += float(things.put_in_w[thing])
    total = sum(brought.values())
    return tuple(
        HeatSource(things.names[at], heat, 100 * heat / total)
        for at, heat in sorted(brought.items(), key=lambda pair: -pair[1])
    )


def _links(
    solved: Solved,
    things: Things,
    flows: list[Flow],
    carried: list[float],
    slopes: list[float],
    levers: dict[int, Lever],
    cooler: bool,
) -> tuple[LinkHeat, ...]:
    ranges = {row.surface: row for row in range_findings(solved)}
    rows = []
    spot = _spot(solved, things, flows)
    for number, (flow, share, slope) in enumerate(zip(flows, carried, slopes, strict=True)):
        within = flow.start == flow.end
        conductance = None
        if not within and abs(flow.drive_k) > _LEAST_K:
            conductance = flow.heat_w / abs(flow.drive_k)
        change = cost(levers[number], cooler) if number in levers else None
        heat = None if within else flow.heat_w
        drop = None if within else _drop(things, flow)
        if spot is not None and number == spot.mount:
            drop = spot.into_k
        elif spot is not None and number == spot.along:
            heat, drop, share = flows[spot.mount].heat_w, spot.spread_k, carried[spot.mount]
        rows.append(
            LinkHeat(
                start=things.names[flow.start],
                end=things.names[flow.end],
                way=way_of(solved, things, flow),
                heat_w=heat,
                share_pct=None if heat is None else 100 * share,
                drop_k=drop,
                conductance_w_per_k=conductance,
                laws=laws_of(solved, things, flow, ranges),
                k_per_pct=slope / 100,
                one_kelvin_resistance_pct=(
                    None if change is None else 100 * (1.0 / (1.0 + change) - 1.0)
                ),
                one_kelvin_w_per_k=(
                    None if change is None or conductance is None else change * conductance
                ),
            )
        )
    return tuple(rows)


class _Spot(NamedTuple):
    """Where the part explained stands on a board: two links, and the differences along them."""

    mount: int
    along: int
    into_k: float
    """From the part to the mean under it."""
    spread_k: float
    """From there to the mean of the board."""


def _spot(solved: Solved, things: Things, flows: list[Flow]) -> _Spot | None:
    root = things.root
    mount = next((n for n, x in enumerate(flows) if x.start == root and x.role == "to_board"), None)
    if mount is None:
        return None
    board = flows[mount].end
    along = next(n for n, x in enumerate(flows) if x.start == x.end == board and x.role == "along")
    part = things.names[root].removesuffix(" junction")
    under = solved.network.places.parts[part].board
    assert under is not None
    own = solved.at(under)
    return _Spot(
        mount,
        along,
        float(things.temperature_c[root]) - own,
        own - float(things.temperature_c[board]),
    )


def _drop(things: Things, flow: Flow) -> float:
    return float(things.temperature_c[flow.start] - things.temperature_c[flow.end])


def cost(lever: Lever, cooler: bool) -> float | None:
    """Give the relative change of a conductance that moves a temperature by 1 K.

    Parameters
    ----------
    lever
        What the conductance does.
    cooler
        Whether the temperature is to fall, or to rise.

    Returns
    -------
    float or None
        Change [-] above -1, None where one by a factor of `MOST_CHANGED` is not enough.
    """
    wanted = -1.0 if cooler else 1.0
    left = lever.slope - wanted * lever.bend
    if abs(left) < _LEAST_K:
        return None
    change = wanted / left
    grows = wanted * lever.slope > 0
    within = 1.0 / MOST_CHANGED <= 1.0 + change <= MOST_CHANGED
    return change if within and (change > 0) == grows else None


# Tree -------------------------------------------------------------------------------------


def _kept(carried: list[float], slopes: list[float]) -> list[int]:
    """Give the flows that matter, those first that carry most of the part's heat."""
    cut = PRUNED_BELOW_PCT / 100
    strongest = max(map(abs, slopes), default=0.0)
    kept = [
        number
        for number, (share, slope) in enumerate(zip(carried, slopes, strict=True))
        if share >= cut or abs(slope) >= max(cut * strongest, _LEAST_K)
    ]
    return sorted(kept, key=lambda number: (-carried[number], number))


def _tree(
    things: Things, flows: list[Flow], carried: list[float], kept: list[int]
) -> tuple[TreeStep, ...]:
    """Lay out the links that matter from the root on; every thing is followed once.

    A thing is followed where most of the part's heat comes to it. Then comes what brings heat to
    the part, and where else that goes.
    """
    leaving: dict[int, list[int]] = defaultdict(list)
    within: dict[int, list[int]] = defaultdict(list)
    for number in kept:
        flow = flows[number]
        (within if flow.start == flow.end else leaving)[flow.start].append(number)
    inward = [n for n in kept if flows[n].end == things.root and flows[n].start != things.root]
    inward.sort(key=lambda number: -flows[number].heat_w)
    parent = _reached(things.root, flows, leaving, inward, carried)
    steps: list[TreeStep] = []

    def follow(thing: int, depth: int) -> None:
        steps.extend(TreeStep(depth, number, False, False) for number in within[thing])
        for number in leaving[thing]:
            end = flows[number].end
            if depth > 0 and number in inward:
                continue
            again = parent.get(end) != number and not things.outside[end]
            steps.append(TreeStep(depth, number, False, again))
            if not again:
                follow(end, depth + 1)

    follow(things.root, 0)
    for number in inward:
        start = flows[number].start
        again = parent.get(start) != number
        steps.append(TreeStep(0, number, True, again))
        if not again:
            follow(start, 1)
    return tuple(steps)


def _reached(
    root: int,
    flows: list[Flow],
    leaving: dict[int, list[int]],
    inward: list[int],
    carried: list[float],
) -> dict[int, int]:
    """Give the link by which each thing is followed: the greatest share first."""
    parent: dict[int, int] = {root: -1}
    heap: list[tuple[float, int]] = []

    def spread(thing: int) -> None:
        for number in leaving[thing]:
            heapq.heappush(heap, (-carried[number], number))
        while heap:
            _, number = heapq.heappop(heap)
            end = flows[number].end
            if end not in parent:
                parent[end] = number
                for onward in leaving[end]:
                    heapq.heappush(heap, (-carried[onward], onward))

    spread(root)
    for number in inward:
        start = flows[number].start
        if start not in parent:
            parent[start] = number
            spread(start)
    return parent


# Ends and powers --------------------------------------------------------------------------


def _ends(things: Things, shares: FloatArray) -> tuple[HeatEnd, ...]:
    ends = [
        HeatEnd(name, 100 * float(shares[at]))
        for at, name in enumerate(things.names)
        if things.outside[at] and shares[at] > 0
    ]
    return tuple(sorted(ends, key=lambda end: -end.share_pct))


def _powers(solved: Solved, by_heat: FloatArray, cooler: bool) -> tuple[PowerCost, ...]:
    network, sources = solved.network, solved.network.sources
    heat = sources.heat(solved.solution.rise[sources.node], network.reference_k)[:, 0]
    adds = by_heat[sources.node] * heat
    rows = []
    for label in sorted(set(sources.label.tolist())):
        owner, role = network.labels[label]
        own = sources.label == label
        total, added = float(heat[own].sum()), float(adds[own].sum())
        if total <= LEAST_W:
            continue
        each = added / total
        family, _, name = owner.partition(":")
        change = None
        if abs(each) > _LEAST_K:
            change = (-1.0 if cooler else 1.0) / each
            change = change if total + change >= 0 else None
        rows.append(
            PowerCost(
                name=_SOURCES.get(family, "{}").format(name),
                kind="sun" if role == "sun" else "power",
                heat_w=total,
                k_per_w=each,
                adds_k=added,
                one_kelvin_w=change,
            )
        )
    return tuple(sorted(rows, key=lambda row: -row.adds_k))


_SOURCES = {"board": "board {}", "cable": "cable {}", "wall": "{} wall"}
