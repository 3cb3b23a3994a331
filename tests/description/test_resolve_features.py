"""Zones, stand-offs, clamps, fillers, cans and cables: where they end up, and what is refused.

`box`: 200 wide (x), 100 deep (y), 150 high (z) inside, walls 2 mm. `board`: 120 x 100, 1.6 thick,
upright in the middle, so x 40 to 160, y 49.2 to 50.8, z 25 to 125.
"""

import math

import pytest
from support.cases import board, box, case_of, errors_of, part, patched

from enclosure_check.description.resolve_features import FOOT_MM

ZONE = {"at_mm": [60, 50], "length_mm": 20, "width_mm": 10}
STAND_OFF = {"to": "back", "at_mm": [10, 20], "diameter_mm": 6, "material": "brass"}
CLAMP = {"conductance_w_per_mk": 20}
FILLER = {"side": "front", "conductivity_w_per_mk": 1.5}
CAN = {"side": "front", "at_mm": [60, 50], "length_mm": 30, "width_mm": 20, "height_mm": 5}
CABLE = {"conductor_mm2": 1.5, "outer_mm": 3, "inside_mm": 150}


def boxed(parts=None, walls=None, **features):
    return box(boards={"main": board(**features)}, parts=parts or {}, walls=walls or {})


def main(**features):
    return case_of(boxed(**features)).boards["main"]


def without(row, *keys):
    return {key: value for key, value in row.items() if key not in keys}


def assumed(document):
    return "\n".join(case_of(document).assumptions)


# None -----------------------------------------------------------------------------------------


def test_a_board_has_none_unless_said():
    made = main()
    assert made.zones == made.stand_offs == made.edge_clamps == made.fillers == ()
    assert made.shield_cans == ()
    assert all(wall.cables == () for wall in case_of(boxed()).walls.values())


# Places ---------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("parallel", "length", "low", "size"),
    [
        # 20 to the right, 10 up; its centre 30 right of and 20 above the low corner.
        ("back", 120, (40 + 20, 49.2, 35 + 15), (20, 1.6, 10)),
        ("left", 90, (99.2, 5 + 20, 35 + 15), (1.6, 20, 10)),
        ("bottom", 120, (40 + 20, 10 + 15, 74.2), (20, 10, 1.6)),
    ],
)
def test_places_count_from_the_boards_low_corner(parallel, length, low, size):
    """Seen from the front, the right or the top: up is z, or y on a level board."""
    row = {**board(), "parallel_to": parallel, "length_mm": length, "width_mm": 80}
    row["zones"] = {"a": {**ZONE, "at_mm": [30, 20]}}
    (found,) = case_of(box(boards={"main": row})).boards["main"].zones
    assert found.low_mm == pytest.approx(low)
    assert found.size_mm == pytest.approx(size)


def test_zones_keep_their_order_and_copper():
    zones = {
        "pour": {**ZONE, "copper": {"top": {"thickness_um": 70, "coverage_pct": 90}}},
        "bare": ZONE,
        "given": {**ZONE, "conductivity_in_plane_w_per_mk": 50},
    }
    first, second, third = main(zones=zones).zones
    assert [zone.name for zone in (first, second, third)] == ["pour", "bare", "given"]
    assert [(layer.thickness_um, layer.coverage_pct) for layer in first.copper] == [(70, 90)]
    assert (second.copper, second.conductivity_in_plane_w_per_mk) == ((), None)
    assert third.conductivity_in_plane_w_per_mk == 50


@pytest.mark.parametrize(("to", "length"), [("back", 100 - 50.8), ("front", 49.2)])
def test_stand_off_is_as_long_as_the_clear_distance(to, length):
    (made,) = main(stand_offs={"a": {**STAND_OFF, "to": to}}).stand_offs
    assert made.length_mm == pytest.approx(length)
    assert made.wall == to
    assert made.conductivity_w_per_mk == 115  # brass of the library


def test_foot_is_a_square_of_the_area_of_its_outline():
    (made,) = main(stand_offs={"a": {**STAND_OFF, "bore_mm": 3}}).stand_offs
    assert made.size_mm[0] * made.size_mm[2] == pytest.approx(math.pi / 4 * 36)
    assert made.section_mm2 == pytest.approx(math.pi / 4 * (36 - 9))
    middle = [low + size / 2 for low, size in zip(made.low_mm, made.size_mm, strict=True)]
    assert (middle[0], middle[2]) == pytest.approx((50, 45))


def test_stand_off_by_its_resistance_has_an_assumed_foot():
    row = {**without(STAND_OFF, "diameter_mm", "material"), "resistance_k_per_w": 8}
    document = boxed(stand_offs={"a": row})
    (made,) = case_of(document).boards["main"].stand_offs
    assert made.resistance_k_per_w == 8
    assert made.conductivity_w_per_mk is None
    assert made.size_mm[0] == pytest.approx(math.sqrt(math.pi) / 2 * FOOT_MM)
    assert "a foot of 5 mm (main/a)" in assumed(document)
    assert "a foot of" not in assumed(boxed(stand_offs={"a": STAND_OFF}))


@pytest.mark.parametrize(
    ("wall", "low", "size"),
    [
        ("left", (40, 49.2, 25 + 20), (0, 1.6, 60)),
        ("right", (160, 49.2, 25 + 20), (0, 1.6, 60)),
        ("bottom", (40 + 30, 49.2, 25), (60, 1.6, 0)),
        ("top", (40 + 30, 49.2, 125), (60, 1.6, 0)),
    ],
)
def test_clamp_is_the_middle_of_the_edge_that_faces_its_wall(wall, low, size):
    (made,) = main(edge_clamps={wall: {**CLAMP, "length_mm": 60}}).edge_clamps
    assert made.low_mm == pytest.approx(low)
    assert made.size_mm == pytest.approx(size)


def test_clamp_takes_the_whole_edge_unless_said():
    (made,) = main(edge_clamps={"top": CLAMP}).edge_clamps
    assert made.size_mm == pytest.approx((120, 1.6, 0))


@pytest.mark.parametrize(("side", "low"), [("front", 0), ("back", 50.8)])
def test_filler_reaches_from_the_board_to_the_wall(side, low):
    (made,) = main(fillers={"a": {**FILLER, "side": side}}).fillers
    assert made.distance_mm == pytest.approx(49.2)
    assert made.low_mm == pytest.approx((40, low, 25))
    assert made.size_mm == pytest.approx((120, 49.2, 100))


def test_filler_over_a_rectangle():
    row = {**FILLER, "at_mm": [30, 40], "length_mm": 20, "width_mm": 10}
    (made,) = main(fillers={"a": row}).fillers
    assert made.low_mm == pytest.approx((40 + 20, 0, 25 + 35))
    assert made.size_mm == pytest.approx((20, 49.2, 10))


@pytest.mark.parametrize(("side", "low"), [("front", 49.2 - 5), ("back", 50.8)])
def test_can_stands_on_its_side(side, low):
    (made,) = main(shield_cans={"a": {**CAN, "side": side}}).shield_cans
    assert made.low_mm == pytest.approx((40 + 45, low, 25 + 40))
    assert made.size_mm == pytest.approx((30, 5, 20))


def test_what_is_assumed_of_a_can_is_said():
    text = assumed(boxed(shield_cans={"a": CAN}))
    assert "shield can finish stainless_mill (main/a)" in text
    assert "20 W/mK of its outline (main/a)" in text
    row = {**CAN, "finish": "grey_paint", "frame_conductance_w_per_mk": 20}
    assert "shield can" not in assumed(boxed(shield_cans={"a": row}))
    assert main(shield_cans={"a": row}).shield_cans[0].finish.emissivity == 0.88


def test_cables_of_a_wall():
    walls = {"left": {"cables": {"supply": {**CABLE, "count": 4, "current_a": 3}, "bus": CABLE}}}
    case = case_of(boxed(walls=walls))
    supply, bus = case.walls["left"].cables
    assert (supply.name, supply.count, supply.conductor_mm2) == ("supply", 4, 1.5)
    assert (supply.outer_mm, supply.inside_mm, supply.current_a) == (3, 150, 3)
    assert (bus.count, bus.current_a) == (1, 0)
    assert case.walls["right"].cables == ()
    assert "as at 10 K over the air (left/supply, left/bus)" in "\n".join(case.assumptions)


def test_a_bare_conductor_fills_its_diameter():
    """A round of 1.5 mm2 has 1.38 mm; rounded to a tenth it still counts as bare."""
    walls = {"left": {"cables": {"bare": {**CABLE, "outer_mm": 1.38}}}}
    assert errors_of(boxed(walls=walls)) == {}


# Errors ---------------------------------------------------------------------------------------

MAIN = "boards.main"
ERRORS = {
    "zone over the edge": (
        {"zones": {"a": {**ZONE, "at_mm": [5, 50]}}},
        f"{MAIN}.zones.a",
        "reaches 5 mm over the edge of 'main'",
    ),
    "zone with too much copper": (
        {"zones": {"a": {**ZONE, "copper": {"x": {"thickness_um": 900, "coverage_pct": 1},
                                            "y": {"thickness_um": 900, "coverage_pct": 1}}}}},
        f"{MAIN}.zones.a.copper",
        "1.8 mm of copper in a 1.6 mm board",
    ),
    "zone stated twice": (
        {"zones": {"a": {**ZONE, "conductivity_in_plane_w_per_mk": 3,
                         "copper": {"x": {"thickness_um": 35, "coverage_pct": 1}}}}},
        f"{MAIN}.zones.a.conductivity_in_plane_w_per_mk",
        "given together with `copper`",
    ),
    "stand-off to a wall at the edge": (
        {"stand_offs": {"a": {**STAND_OFF, "to": "left"}}},
        f"{MAIN}.stand_offs.a.to",
        "given 'left'; board 'main' has the sides front and back",
    ),
    "stand-off over the edge": (
        {"stand_offs": {"a": {**STAND_OFF, "at_mm": [2, 20]}}},
        f"{MAIN}.stand_offs.a",
        "reaches 1 mm over the edge of 'main'",
    ),
    "stand-off of nothing": (
        {"stand_offs": {"a": without(STAND_OFF, "diameter_mm", "material")}},
        f"{MAIN}.stand_offs.a",
        "give `diameter_mm` and `material`, or `resistance_k_per_w`",
    ),
    "stand-off without a material": (
        {"stand_offs": {"a": without(STAND_OFF, "material")}},
        f"{MAIN}.stand_offs.a.material",
        "missing; a column has a diameter and a material",
    ),
    "stand-off without a diameter": (
        {"stand_offs": {"a": without(STAND_OFF, "diameter_mm")}},
        f"{MAIN}.stand_offs.a.diameter_mm",
        "missing; a column has a diameter and a material",
    ),
    "stand-off of an unknown material": (
        {"stand_offs": {"a": {**STAND_OFF, "material": "bras"}}},
        f"{MAIN}.stand_offs.a.material",
        "given 'bras', which is no material; did you mean 'brass'?",
    ),
    "stand-off with a resistance and a bore": (
        {"stand_offs": {"a": {**without(STAND_OFF, "diameter_mm", "material"), "bore_mm": 3,
                              "resistance_k_per_w": 3}}},
        f"{MAIN}.stand_offs.a.bore_mm",
        "given together with `resistance_k_per_w`",
    ),
    "stand-off all bore": (
        {"stand_offs": {"a": {**STAND_OFF, "bore_mm": 6}}},
        f"{MAIN}.stand_offs.a.bore_mm",
        "given 6; leaves nothing of a diameter of 6",
    ),
    "clamp on a side": (
        {"edge_clamps": {"back": CLAMP}},
        f"{MAIN}.edge_clamps.back",
        "lies parallel to the back wall; its edges face left, right, bottom, top",
    ),
    "clamp longer than its edge": (
        {"edge_clamps": {"left": {**CLAMP, "length_mm": 110}}},
        f"{MAIN}.edge_clamps.left.length_mm",
        "given 110; the edge is 100 mm long",
    ),
    "filler at an edge": (
        {"fillers": {"a": {**FILLER, "side": "top"}}},
        f"{MAIN}.fillers.a.side",
        "given 'top'; board 'main' has the sides front and back",
    ),
    "filler over the edge": (
        {"fillers": {"a": {**FILLER, "length_mm": 130}}},
        f"{MAIN}.fillers.a",
        "reaches 5 mm over the edge of 'main'",
    ),
    "filler without room": (
        {"fillers": {"a": FILLER}, "from_walls_mm": {"front": 0}},
        f"{MAIN}.fillers.a.side",
        "no room for it: the board lies on the front wall",
    ),
    "fillers in one place": (
        {"fillers": {"a": FILLER, "b": {**FILLER, "length_mm": 10}}},
        f"{MAIN}.fillers.b",
        "shares its place with the filler 'a'",
    ),
    "can at an edge": (
        {"shield_cans": {"a": {**CAN, "side": "left"}}},
        f"{MAIN}.shield_cans.a.side",
        "given 'left'; board 'main' has the sides front and back",
    ),
    "can over the edge": (
        {"shield_cans": {"a": {**CAN, "at_mm": [60, 5]}}},
        f"{MAIN}.shield_cans.a",
        "reaches 5 mm over the edge of 'main'",
    ),
    "can of an unknown finish": (
        {"shield_cans": {"a": {**CAN, "finish": "gold_leaf"}}},
        f"{MAIN}.shield_cans.a.finish",
        "given 'gold_leaf', which is no finish",
    ),
    "can into the wall": (
        {"shield_cans": {"a": {**CAN, "height_mm": 50}}},
        f"{MAIN}.shield_cans.a.height_mm",
        "reaches 0.8 mm into the front wall",
    ),
    "cans in one place": (
        {"shield_cans": {"a": CAN, "b": {**CAN, "at_mm": [80, 50]}}},
        f"{MAIN}.shield_cans.b",
        "shares its place with the can 'a'",
    ),
    "can in a filler": (
        {"shield_cans": {"c": CAN}, "fillers": {"a": FILLER}},
        f"{MAIN}.fillers.a",
        "can 'c' reaches into it",
    ),
}  # fmt: skip


@pytest.mark.parametrize(("features", "path", "message"), ERRORS.values(), ids=ERRORS)
def test_error_stands_at_its_field(features, path, message):
    found = errors_of(boxed(**features))
    assert list(found) == [path]
    assert message in found[path]


def test_stand_off_with_a_resistance_and_a_column():
    found = errors_of(boxed(stand_offs={"a": {**STAND_OFF, "resistance_k_per_w": 3}}))
    assert set(found) == {f"{MAIN}.stand_offs.a.{key}" for key in ("diameter_mm", "material")}
    assert all("given together with `resistance_k_per_w`" in each for each in found.values())


# What lies under cans and in fillers: U1 is 14 x 10 x 2 with its centre at (60, 50) of the front
# side, which is counted from the left as the can is.
PAD = {"to": "front", "thickness_mm": 50, "conductivity_w_per_mk": 2}
BAR = {"place": "front", "at_mm": [100, 75], "length_mm": 10, "width_mm": 10, "height_mm": 3}
BODY = {"place": "air", "length_mm": 10, "width_mm": 10, "height_mm": 10,
        "from_walls_mm": {"front": 10}}  # fmt: skip
COVERED = {
    "part half under a can": (
        {"shield_cans": {"c": CAN}}, part(at_mm=[45, 50]), f"{MAIN}.shield_cans.c",
        "part 'U1' lies partly under its edge",
    ),
    "part larger than its can": (
        {"shield_cans": {"c": CAN}}, part(length_mm=40), f"{MAIN}.shield_cans.c",
        "part 'U1' lies partly under its edge",
    ),
    "part higher than its can": (
        {"shield_cans": {"c": CAN}}, part(height_mm=6), f"{MAIN}.shield_cans.c.height_mm",
        "given 5; part 'U1' under it is 6 mm high",
    ),
    "pad under a can": (
        {"shield_cans": {"c": CAN}}, part(pad=PAD), f"{MAIN}.shield_cans.c",
        "part 'U1' under it has a pad to the wall",
    ),
    "pad in a filler": (
        {"fillers": {"a": FILLER}}, part(pad=PAD), f"{MAIN}.fillers.a",
        "part 'U1' in it has a pad",
    ),
    "part of the wall in a filler": (
        {"fillers": {"a": FILLER}}, {**BAR}, f"{MAIN}.fillers.a",
        "part 'U1' reaches into it, which is not computed",
    ),
    "body in the air in a filler": (
        {"fillers": {"a": FILLER}}, BODY, f"{MAIN}.fillers.a",
        "part 'U1' reaches into it, which is not computed",
    ),
}  # fmt: skip


@pytest.mark.parametrize(("features", "row", "path", "message"), COVERED.values(), ids=COVERED)
def test_what_a_cover_refuses(features, row, path, message):
    found = errors_of(boxed(parts={"U1": row}, **features))
    assert list(found) == [path]
    assert message in found[path]


def test_another_board_in_a_filler():
    other = {**board(length_mm=50, width_mm=50), "from_walls_mm": {"front": 20}}
    document = patched(boxed(fillers={"a": FILLER}), {"boards": {"other": other}})
    found = errors_of(document)
    assert found == {f"{MAIN}.fillers.a": "board 'other' reaches into it, which is not computed"}
    beyond = patched(document, {"boards": {"other": {"from_walls_mm": {"front": 60}}}})
    assert errors_of(beyond) == {}


@pytest.mark.parametrize(
    "row",
    [
        part(),  # wholly under it
        part(at_mm=[60 + 15 - 7, 50]),  # at its edge from inside
        part(at_mm=[60 + 15 + 7, 50]),  # from outside
        part(height_mm=5),  # as high as it
        part(side="back", pad={**PAD, "to": "back"}),  # on the other side
    ],
)
def test_what_a_can_allows(row):
    assert errors_of(boxed(parts={"U1": row}, shield_cans={"c": CAN})) == {}


@pytest.mark.parametrize("row", [part(), part(side="back", pad={**PAD, "to": "back"})])
def test_what_a_filler_allows(row):
    assert errors_of(boxed(parts={"U1": row}, fillers={"a": FILLER})) == {}


def test_conductor_wider_than_its_cable():
    walls = {"left": {"cables": {"a": {**CABLE, "outer_mm": 1}}}}
    found = errors_of(boxed(walls=walls))
    assert found == {
        "walls.left.cables.a.conductor_mm2": "given 1.5; a diameter of 1 mm has room for 0.785 mm2"
    }


def test_every_error_is_shown_at_once():
    features = {
        "zones": {"a": {**ZONE, "at_mm": [5, 50]}},
        "edge_clamps": {"back": CLAMP},
        "fillers": {"a": {**FILLER, "side": "top"}},
    }
    assert len(errors_of(boxed(**features))) == 3
