"""The explanation of a part: heat that balances thing by thing, and costs that hold."""

import re
from collections import defaultdict

import pytest
from support.cases import COARSE, box, part, patched, solved
from support.explained import DOCUMENT, VENTED, scaled

from enclosure_check.check import check_and_explain
from enclosure_check.description.load import load_document
from enclosure_check.findings.explain import PRUNED_BELOW_PCT, Worst, cost, explain
from enclosure_check.findings.openings import openings_finding
from enclosure_check.findings.parts import part_findings
from enclosure_check.findings.things import flows_of, things_of
from enclosure_check.physics.correlation import CORRELATIONS
from enclosure_check.solve.levers import Lever
from enclosure_check.solve.steady import solve_steady

# Of the heat that comes to a thing.
BALANCED = 1e-6
PARTS = ("U1", "U2", "U3", "R1", "B1")


@pytest.fixture(scope="module")
def answer():
    return solved(DOCUMENT, COARSE)


def limit_of(answer, name):
    return next((row for row in part_findings(answer, None) if row.name == name), None)


@pytest.fixture(scope="module", params=PARTS)
def told(request, answer):
    return explain(answer, request.param, limit_of(answer, request.param))


def thing_named(told, name):
    (found,) = (thing for thing in told.things if thing.name == name)
    return found


# Balance ------------------------------------------------------------------------------------


def thing_by_label(label: str) -> str:
    """What a node belongs to, by its label alone."""
    for pattern, name in (
        (r"(board \w+|\w+ wall (?:inside|outside))(?:, (?:cell \d+|mean))", r"\1"),
        (r"inside air, .*", "inside air"),
        (r"irradiation of patch, cell \d+", "radiation inside"),
        (r"middle of (.*)", r"stand-off \1"),
        (r"surface behind (.*)", r"behind \1"),
    ):
        if re.fullmatch(pattern, label):
            return re.sub(pattern, name, label)
    return label


def test_openings_take_their_share():
    answer = solved(VENTED, COARSE)
    told = explain(answer, "U1", limit_of(answer, "U1"))
    test_every_thing_gives_what_it_gets(told)
    test_all_of_the_heat_leaves_at_last(told)
    (out,) = (link for link in told.links if link.way == "openings")
    assert (out.start, out.end) == ("inside air", "surrounding air")
    carried = sum(
        answer.flow(label.owner, "openings")
        for label in answer.network.labels
        if label.role == "openings"
    )
    assert out.heat_w == pytest.approx(carried) != 0
    assert out.k_per_pct < 0
    # Its holes run between creeping and fast flow: the laws of both ends, each with its own range.
    reynolds = [row.reynolds for row in openings_finding(answer).each]
    audited = {law.key: law for law in out.laws if law.key is not None}
    assert set(audited) == {"perforated_plate", "creeping_hole"}
    slow, fast = audited["creeping_hole"], audited["perforated_plate"]
    assert slow.inside_range is (max(reynolds) <= CORRELATIONS["creeping_hole"].valid_to)
    assert fast.inside_range is (min(reynolds) >= CORRELATIONS["perforated_plate"].valid_from)
    if not slow.inside_range:
        limit = CORRELATIONS["creeping_hole"].valid_to
        assert slow.outside_by == pytest.approx(max(reynolds) / limit)


def sums_by_label(answer):
    """Heat that leaves every thing to each other, and heat put in, added up link by link."""
    network, rise = answer.network, answer.solution.rise
    labels = network.node_labels
    between: dict[tuple[str, str], float] = defaultdict(float)
    for kind in network.kinds:
        heat = kind.evaluate(rise, network.reference_k)[:, 0]
        for a, b, watts in zip(kind.a.tolist(), kind.b.tolist(), heat.tolist(), strict=True):
            if labels[b] != "no place":
                one, other = thing_by_label(labels[a]), thing_by_label(labels[b])
                between[one, other] += watts
                between[other, one] -= watts
    return between


def merged(name: str, told) -> set[str]:
    """The nodes' names that make up a thing as it is told."""
    if any(thing.name == name for thing in told.things) and name not in PARTS:
        even = {f"{name} inside", f"{name} outside"} if name.endswith(" wall") else set()
        return {name} | even
    return {f"{name} junction", f"{name} case"} if name in PARTS else {name}


def test_every_thing_gives_what_it_gets(told):
    for thing in told.things:
        if not thing.outside:
            brought = thing.in_w + thing.put_in_w
            assert thing.out_w == pytest.approx(brought, rel=BALANCED, abs=1e-8), thing.name


def test_heat_is_that_of_links_added_up_by_their_labels(told, answer):
    between = sums_by_label(answer)
    for link in told.links:
        if link.heat_w is None or link.start == link.end:
            continue
        same = [
            each.heat_w if each.start == link.start else -each.heat_w
            for each in told.links
            if {each.start, each.end} == {link.start, link.end} and each.heat_w is not None
        ]
        starts, ends = merged(link.start, told), merged(link.end, told)
        expected = sum(between[a, b] for a in starts for b in ends)
        assert sum(same) == pytest.approx(expected, rel=1e-6, abs=1e-8), (link.start, link.end)


def test_things_take_up_all_power_and_sun(told, answer):
    total = sum(thing.put_in_w for thing in told.things)
    expected = answer.total_put_in("power") + answer.total_put_in("sun")
    assert total == pytest.approx(expected, rel=1e-12)


def test_sums_of_things_are_those_of_their_links(told):
    for thing in told.things:
        into = sum(x.heat_w for x in told.links if x.end == thing.name != x.start)
        out = sum(x.heat_w for x in told.links if x.start == thing.name != x.end)
        assert (thing.in_w, thing.out_w) == pytest.approx((into, out), rel=1e-12)
        if thing.heated_by:
            assert sum(each.share_pct for each in thing.heated_by) == pytest.approx(100)
            told_w = sum(each.heat_w for each in thing.heated_by)
            assert told_w == pytest.approx(thing.in_w + max(thing.put_in_w, 0.0))
            assert [x.heat_w for x in thing.heated_by] == sorted(
                (x.heat_w for x in thing.heated_by), reverse=True
            )


# Shares -------------------------------------------------------------------------------------


def test_all_of_the_heat_leaves_at_last(told):
    assert sum(end.share_pct for end in told.ends) == pytest.approx(100, rel=1e-6)
    outside = {thing.name for thing in told.things if thing.outside}
    assert {end.name for end in told.ends} <= outside


def test_shares_go_with_the_heat_of_each_thing(told):
    for link in told.links:
        if link.share_pct is not None and link.start != link.end:
            start = thing_named(told, link.start)
            expected = start.share_pct * link.heat_w / start.out_w
            assert link.share_pct == pytest.approx(expected, rel=1e-9, abs=1e-12)
    root = thing_named(told, told.root)
    assert root.share_pct >= 100 * (1 - 1e-9)
    assert told.heat_w == root.out_w


def test_differences_add_up_from_the_part_to_the_surroundings(told):
    spreading = {x.start: x.drop_k for x in told.links if x.start == x.end and x.drop_k}
    for end in ("surrounding air", "radiant surroundings", "sky"):
        chain = chain_to(told, end)
        total = sum(link.drop_k for link in chain)
        if told.links[told.tree[0].link].way == "mount":
            total += sum(spreading.get(link.end, 0.0) for link in chain if link.way == "mount")
        ends = thing_named(told, told.root).temperature_c - thing_named(told, end).temperature_c
        assert total == pytest.approx(ends, abs=1e-9)


def chain_to(told, end):
    """Links of the tree from the root to a thing, the first that leads there."""
    by_place = list(told.tree)
    place = next(
        n
        for n, step in enumerate(by_place)
        if told.links[step.link].end == end
        and not step.inward
        and told.links[step.link].start != end
    )
    chain, depth = [], by_place[place].depth
    chain.append(told.links[by_place[place].link])
    inward = False
    for step in reversed(by_place[:place]):
        link = told.links[step.link]
        if step.depth == depth - 1 and link.start != link.end and not step.again:
            chain.append(link)
            depth -= 1
            inward = step.inward
            if depth == 0:
                break
    assert depth == 0
    assert not inward
    return chain


# Costs --------------------------------------------------------------------------------------


@pytest.mark.parametrize("name", ["U1", "U2"])
def test_a_change_told_to_give_a_kelvin_gives_about_one(answer, name):
    told = explain(answer, name, limit_of(answer, name))
    things = things_of(answer, name)
    by_ends = {
        (things.names[flow.start], things.names[flow.end], flow.bundle.kind, flow.role): flow
        for flow in flows_of(answer, things)
    }
    node = getattr(answer.network.places.parts[name], told.point)
    tried = 0
    for link in told.links:
        if link.one_kelvin_resistance_pct is None:
            continue
        flows = [
            flow
            for (start, end, *_), flow in by_ends.items()
            if (start, end) == (link.start, link.end)
            and (link.heat_w is None or flow.heat_w == link.heat_w)
        ]
        if len(flows) != 1:
            continue
        factor = 1 / (1 + link.one_kelvin_resistance_pct / 100)
        solution = solve_steady(scaled(answer.network, flows[0].bundle, factor))
        assert solution.converged
        gained = float(answer.solution.rise[node, 0] - solution.rise[node, 0])
        # Links spread over hot and cold cells do not bend as one link does: half as much again.
        assert 0.9 < gained < 1.5, (link.start, link.end, link.way, gained)
        assert link.k_per_pct * (factor - 1) < 0
        tried += 1
    assert tried >= 5


def test_less_power_by_what_is_told_gives_a_kelvin(answer):
    told = explain(answer, "U1", limit_of(answer, "U1"))
    (own,) = (row for row in told.powers if row.name == "U1")
    assert own.kind == "power"
    assert own.one_kelvin_w == pytest.approx(-1 / own.k_per_w)
    less = 2.0 + own.one_kelvin_w
    cooler = solved(patched(DOCUMENT, {"parts": {"U1": {"power_w": less}}}), COARSE)
    node = answer.network.places.parts["U1"].junction
    assert answer.at(node) - cooler.at(node) == pytest.approx(1.0, abs=0.02)


def test_powers_are_every_source_the_sun_too(told, answer):
    assert {row.name for row in told.powers if row.kind == "sun"} == {"top wall"}
    named = {row.name for row in told.powers if row.kind == "power"}
    assert named == {"U1", "U2", "U3", "R1", "board main"}
    total = sum(row.heat_w for row in told.powers)
    assert total == pytest.approx(answer.total_put_in("power") + answer.total_put_in("sun"))
    assert [row.adds_k for row in told.powers] == sorted(
        (row.adds_k for row in told.powers), reverse=True
    )


def test_a_lowest_limit_asks_for_the_contrary(answer):
    rows = {row.limit_side: row for row in part_findings(answer, None) if row.name == "U2"}
    high, low = (explain(answer, "U2", rows[side]) for side in ("max", "min"))
    by_high = {row.name: row.one_kelvin_w for row in high.powers}
    by_low = {row.name: row.one_kelvin_w for row in low.powers}
    assert by_high["U2"] == pytest.approx(-by_low["U2"])
    assert by_low["U1"] > 0
    for one, other in zip(high.links, low.links, strict=True):
        assert one.k_per_pct == other.k_per_pct
        if one.one_kelvin_resistance_pct and other.one_kelvin_resistance_pct:
            assert one.one_kelvin_resistance_pct * other.one_kelvin_resistance_pct < 0


@pytest.mark.parametrize(
    ("slope", "bend", "cooler", "change"),
    [
        (-4.0, 1.0, True, 1 / 3),  # all heat passes: resistance down by a quarter gives 1 K
        (-4.0, 0.0, True, 0.25),
        (-4.0, 1.0, False, -0.2),  # resistance up by a quarter
        (4.0, 0.0, True, -0.25),
        (-0.9, 1.0, True, None),  # only 0.9 K lie across it
        (-0.5, 0.0, True, 2.0),
        (-0.3, 0.0, True, None),  # more than fourfold
        (0.5, 0.0, True, None),  # gone altogether it gives no more than half a kelvin
        (0.0, 0.0, True, None),
    ],
)
def test_cost_of_a_kelvin(slope, bend, cooler, change):
    assert cost(Lever(slope, bend), cooler) == (None if change is None else pytest.approx(change))


# Tree and laws ------------------------------------------------------------------------------


def test_every_thing_is_followed_once(told):
    entered = [
        told.links[step.link].start if step.inward else told.links[step.link].end
        for step in told.tree
        if not step.again and told.links[step.link].start != told.links[step.link].end
    ]
    inside = [name for name in entered if not thing_named(told, name).outside]
    assert len(inside) == len(set(inside))
    assert told.root not in inside
    again = {
        told.links[step.link].start if step.inward else told.links[step.link].end
        for step in told.tree
        if step.again
    }
    assert again <= {*inside, told.root}


def test_no_link_stands_twice_and_depths_go_step_by_step(told):
    links = [step.link for step in told.tree]
    assert len(links) == len(set(links))
    depth = -1
    for step in told.tree:
        assert 0 <= step.depth <= depth + 1
        depth = step.depth


def test_what_is_left_out_matters_little(told):
    strongest = max(abs(link.k_per_pct) for link in told.links)
    shown = {step.link for step in told.tree}
    for number, link in enumerate(told.links):
        if number not in shown and link.share_pct is not None:
            assert link.share_pct < PRUNED_BELOW_PCT or abs(link.k_per_pct) < 0.03 * strongest


def test_every_link_tells_its_laws_by_the_register(told):
    for link in told.links:
        assert link.laws, link
        for law in link.laws:
            if law.key is not None:
                assert CORRELATIONS[law.key].name == law.name
                assert law.inside_range is (law.outside_by == 1.0) or law.inside_range is None
            if law.films_w_per_m2k is not None:
                assert 0 < law.films_w_per_m2k[0] <= law.films_w_per_m2k[1]


def test_ways_and_laws_of_a_part_on_its_board(answer):
    told = explain(answer, "U1", limit_of(answer, "U1"))
    ways = {
        (link.start, link.end, link.way): [law.key or law.name for law in link.laws]
        for link in told.links
    }
    assert ways["U1 junction", "board main", "mount"] == [
        "stated theta_jb, and spreading finer than the cells"
    ]
    assert ways["U1 junction", "U1 case", "to its case"] == ["stated theta_jc_top"]
    assert "view_factors" in ways["U1 case", "radiation inside", "radiation"]
    assert ways["back wall", "behind the back wall", "gap"] == [
        "bar_cohen_rohsenow_channel",
        "elsherbiny_vertical_gap",
    ]
    assert "swinbank_sky" in ways["top wall", "sky", "radiation"]
    assert "churchill_chu_1975_cylinder" in ways["inside air", "surrounding air", "cables"]
    (cables,) = (link for link in told.links if link.way == "cables")
    assert cables.laws[-1].inside_range is True
    assert ways["bottom wall", "behind the bottom wall", "contact"] == [
        "stated contact conductance"
    ]


def test_a_part_without_power_tells_what_heats_it(answer):
    told = explain(answer, "B1", limit_of(answer, "B1"))
    assert told.root == "B1"
    assert thing_named(told, "B1").put_in_w == 0
    inward = [told.links[step.link] for step in told.tree if step.inward]
    assert inward
    assert {link.end for link in inward} == {"B1"}
    assert sum(link.heat_w for link in inward) == pytest.approx(told.heat_w, rel=0.05)


def test_without_a_limit_the_junction_is_to_be_cooler(answer):
    told = explain(answer, "R1", limit_of(answer, "R1"))
    assert (told.point, told.limit_side, told.limit_c, told.margin_k) == (
        "junction",
        None,
        None,
        None,
    )
    (own,) = (row for row in told.powers if row.name == "R1")
    assert own.one_kelvin_w < 0


def test_nothing_passes_where_all_is_at_rest():
    cold = solved(box(parts={"B1": part(place="air", side=None, at_mm=None)}), COARSE)
    told = explain(cold, "B1", None)
    assert told.heat_w == 0
    assert told.tree == told.powers == told.ends == ()


# Which condition ----------------------------------------------------------------------------

CONDITIONS = """\
title: Two rooms
box: {width_mm: 100, height_mm: 120, depth_mm: 60}
defaults: {wall: {material: pc_abs, thickness_mm: 2, finish_outside: white_plastic}}
parts:
  X1: {place: air, length_mm: 20, width_mm: 20, height_mm: 10, power_w: 1.5, limits: {case: {max_c: 110, min_c: 0}}}
  X2: {place: left, at_mm: [30, 60], length_mm: 20, width_mm: 20, height_mm: 10}
surroundings: {air_c: 25}
conditions:
  cool: {surroundings: {air_c: 5}, parts: {X1: {power_w: 0.01}}}
  hot: {surroundings: {air_c: 45}}
  mild: {}
"""


@pytest.mark.parametrize(
    ("part_name", "conditions", "condition", "side"),
    [
        ("X1", None, "cool", "min"),
        ("X1", ("mild", "hot"), "hot", "max"),
        ("X1", ("mild",), "mild", "max"),
        ("X2", None, "hot", None),
    ],
)
def test_the_condition_with_the_smallest_margin_is_explained(
    tmp_path, part_name, conditions, condition, side
):
    path = tmp_path / "box.yaml"
    path.write_text(CONDITIONS, "utf-8")
    report = check_and_explain(load_document(str(path)), part_name, conditions=conditions)
    assert (report.explain.condition, report.explain.limit_side) == (condition, side)
    own = [row for each in report.conditions for row in each.parts if row.name == part_name]
    if side is not None:
        assert report.explain.margin_k == min(row.margin_k for row in own)


def test_a_condition_without_the_part_is_passed_over(answer):
    worst = Worst("nobody")
    worst.see(answer, None)
    with pytest.raises(AssertionError):
        worst.explained(None)
