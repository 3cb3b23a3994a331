"""Openings: what is open of them, where they lie, what they take, and what is refused.

`box`: 200 wide (x), 100 deep (y), 150 high (z) inside, walls 2 mm.
"""

import math

import pytest
from support.cases import board, box, case_of, errors_of, part

HOLE = {"kind": "hole", "diameter_mm": 20}
PERFORATED = {"kind": "perforated", "width_mm": 80, "height_mm": 40, "hole_mm": 3, "pitch_mm": 5}
SLOTS = {
    "kind": "slots",
    "width_mm": 60,
    "height_mm": 36,
    "slot_width_mm": 4,
    "pitch_mm": 8,
    "run": "up",
}
LOUVRE = {
    "kind": "louvre",
    "width_mm": 80,
    "height_mm": 40,
    "slot_width_mm": 6,
    "free_area_pct": 45,
}
MESH = {"kind": "mesh", "width_mm": 80, "height_mm": 40}
FILTER = {"kind": "filter", "width_mm": 80, "height_mm": 40}
GLAND = {"kind": "cable_gland", "diameter_mm": 12, "thickness_mm": 20}
ALL = {
    "hole": HOLE,
    "perforated": PERFORATED,
    "slots": SLOTS,
    "louvre": LOUVRE,
    "mesh": MESH,
    "filter": FILTER,
    "cable_gland": GLAND,
}
PATH = "walls.back.openings.a"


def vented(row, wall="back", **changes):
    return box(walls={wall: {"openings": {"a": row}}}, **changes)


def made(row, wall="back"):
    (found,) = case_of(vented(row, wall)).walls[wall].openings
    return found


def errors(row, wall="back", **changes):
    return errors_of(vented(row, wall, **changes))


def warnings(document):
    return [(note.path, note.message) for note in case_of(document).warnings]


def assumed(row):
    return "\n".join(case_of(vented(row)).assumptions)


# What is open ---------------------------------------------------------------------------------


def test_a_wall_has_none_unless_said():
    assert all(wall.openings == () for wall in case_of(box()).walls.values())


def test_round_and_rectangular_cut_outs():
    round_one = made(HOLE)
    assert round_one.free_area_mm2 == pytest.approx(math.pi * 100)
    assert (round_one.hole_mm, round_one.hole_aspect, round_one.free_share) == (20, None, 1)
    flat = made({"kind": "hole", "width_mm": 60, "height_mm": 20})
    assert flat.free_area_mm2 == pytest.approx(1200)
    assert flat.hole_mm == pytest.approx(4 * 1200 / 160)
    assert flat.hole_aspect == pytest.approx(1 / 3)


def test_cut_outs_in_a_row():
    row = made({**HOLE, "count": 4, "pitch_mm": 25, "run": "up"})
    assert row.free_area_mm2 == pytest.approx(4 * math.pi * 100)
    assert row.size_mm == pytest.approx((20, 0, 95))
    assert (row.hole_mm, row.count, row.free_share) == (20, 4, 1)
    assert made({**HOLE, "count": 4, "pitch_mm": 25}).size_mm == pytest.approx((95, 0, 20))


@pytest.mark.parametrize(
    ("pattern", "cell"), [("staggered", math.sqrt(3) / 2 * 25), ("square", 25), (None, None)]
)
def test_open_share_of_a_pitch(pattern, cell):
    """One hole in its cell: a square, or a rhombus of two equilateral triangles."""
    row = made({**PERFORATED, "pattern": pattern})
    share = math.pi / 4 * 9 / (cell or math.sqrt(3) / 2 * 25)
    assert row.free_share == pytest.approx(share)
    assert row.free_area_mm2 == pytest.approx(share * 3200)
    assert ("stand staggered" in assumed({**PERFORATED, "pattern": pattern})) is (pattern is None)


def test_open_share_of_holes_counted_or_stated():
    row = {**PERFORATED, "pitch_mm": None}
    assert made({**row, "count": 100}).free_area_mm2 == pytest.approx(100 * math.pi / 4 * 9)
    assert made({**row, "free_area_pct": 40}).free_area_mm2 == pytest.approx(0.4 * 3200)
    disc = {**row, "width_mm": None, "height_mm": None, "diameter_mm": 50, "free_area_pct": 40}
    assert made(disc).free_area_mm2 == pytest.approx(0.4 * math.pi / 4 * 2500)


def test_slots_by_pitch_by_count_or_by_both():
    assert made(SLOTS).free_area_mm2 == pytest.approx(60 * 36 / 2)
    assert made(SLOTS).hole_mm == pytest.approx(2 * 4 * 60 / 64)
    counted = {**SLOTS, "pitch_mm": None, "count": 5}
    assert made(counted).free_area_mm2 == pytest.approx(5 * 4 * 60)
    both = {**SLOTS, "height_mm": None, "count": 5}
    assert made(both).size_mm == pytest.approx((60, 0, 36))
    assert made(both).free_area_mm2 == pytest.approx(5 * 4 * 60)
    upright = {**SLOTS, "run": "right", "width_mm": None, "height_mm": 60, "count": 5}
    assert made(upright).size_mm == pytest.approx((36, 0, 60))
    assert made(upright).hole_mm == pytest.approx(made(both).hole_mm)


def test_louvre_mesh_and_filter():
    louvre = made(LOUVRE)
    assert louvre.free_area_mm2 == pytest.approx(0.45 * 3200)
    assert louvre.stated_loss == 2.5
    assert made({**LOUVRE, "louvre": "pressed"}).stated_loss == 4.0
    assert "louvre: fixed_blades (back/a)" in assumed(LOUVRE)
    mesh = made(MESH)
    assert mesh.free_share == pytest.approx((1.2 / 1.48) ** 2)
    assert mesh.screen is not None
    assert mesh.screen.name == "insect_mesh"
    assert "mesh over an opening: insect_mesh (back/a)" in assumed(MESH)
    filtered = made(FILTER)
    assert filtered.filter_pa_s_per_m == pytest.approx(22)
    assert filtered.free_area_mm2 == pytest.approx(3200)
    assert "filters are clean" in assumed(FILTER)


def test_gland_round_its_cable():
    row = made({**GLAND, "cable_mm": 8})
    assert row.free_area_mm2 == pytest.approx(math.pi / 4 * (144 - 64))
    assert (row.hole_mm, row.hole_aspect, row.thickness_mm) == (4, 0, 20)


def test_filter_in_series_counts_on_the_free_area():
    row = {**PERFORATED, "pitch_mm": None, "free_area_pct": 40}
    made_row = made({**row, "filter": {"loss_pa": 30, "at_m_per_s": 1.5}})
    assert made_row.filter_pa_s_per_m == pytest.approx(20 * 0.4)


def test_blocked_share_takes_area_and_nothing_else():
    free, half = made(PERFORATED), made({**PERFORATED, "blocked_pct": 50})
    assert half.free_area_mm2 == pytest.approx(free.free_area_mm2 / 2)
    assert half.free_share == free.free_share
    assert not half.closed
    assert made({**PERFORATED, "blocked_pct": 100}).closed


def test_thickness_is_that_of_the_wall_unless_said():
    assert made(HOLE).thickness_mm == 2
    assert made({**HOLE, "thickness_mm": 0.8}).thickness_mm == 0.8


# Places ---------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("wall", "low", "size"),
    [
        ("back", (30, 100, 20), (20, 0, 10)),
        ("front", (150, 0, 20), (20, 0, 10)),
        ("left", (0, 30, 20), (0, 20, 10)),
        ("right", (200, 50, 20), (0, 20, 10)),
        ("bottom", (30, 20, 0), (20, 10, 0)),
        ("top", (150, 20, 150), (20, 10, 0)),
    ],
)
def test_place_counts_from_the_lower_left_seen_from_inside(wall, low, size):
    row = {"kind": "hole", "width_mm": 20, "height_mm": 10, "at_mm": [40, 25]}
    assert made(row, wall).low_mm == pytest.approx(low)
    assert made(row, wall).size_mm == pytest.approx(size)


def test_place_from_another_corner_and_the_middle():
    row = {"kind": "hole", "width_mm": 20, "height_mm": 10}
    corner = {**row, "at_mm": [40, 25], "at_from": "upper_right"}
    assert made(corner).low_mm == pytest.approx((150, 100, 120))
    assert made(row).low_mm == pytest.approx((90, 100, 70))


# What is refused ------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("kind", "changes", "path", "message"),
    [
        ("hole", {"hole_mm": 3}, "hole_mm", "does not apply to kind hole, which takes diameter_mm"),
        ("mesh", {"run": "up"}, "run", "does not apply to kind mesh"),
        ("hole", {"diameter_mm": None}, "width_mm", "missing; kind hole takes `diameter_mm`, or"),
        ("slots", {"height_mm": None}, "height_mm", "kind slots takes `width_mm` and `height_mm`"),
        ("cable_gland", {"diameter_mm": None}, "diameter_mm", "takes `diameter_mm`"),
        ("hole", {"width_mm": 20}, "width_mm", "given together with `diameter_mm`"),
        ("hole", {"count": 3}, "pitch_mm", "missing; 3 in a row have a pitch"),
        ("hole", {"pitch_mm": 30}, "pitch_mm", "a pitch goes with a `count` of more than one"),
        ("hole", {"count": 3, "pitch_mm": 15}, "pitch_mm", "cut-outs of 20 mm run into each other"),
        ("cable_gland", {"cable_mm": 12}, "cable_mm", "given 12; fills the bore of 12"),
        ("perforated", {"pitch_mm": 3}, "hole_mm", "at a pitch of 3 mm run into each other"),
        ("perforated", {"hole_mm": None}, "hole_mm", "missing; kind perforated needs it"),
        ("perforated", {"hole_mm": 90, "pitch_mm": 95}, "hole_mm", "larger than the area"),
        ("perforated", {"pitch_mm": None}, "", "give one of `free_area_pct`, `pitch_mm`, `count`"),
        ("perforated", {"free_area_pct": 40}, "pitch_mm", "together with `free_area_pct`"),
        ("perforated", {"pitch_mm": None, "count": 500}, "count", "more than the area holds"),
        (
            "perforated",
            {"pitch_mm": None, "count": 5, "pattern": "square"},
            "pattern",
            "applies with `pitch_mm` only",
        ),
        ("slots", {"slot_width_mm": None}, "slot_width_mm", "kind slots needs the clear width"),
        ("slots", {"slot_width_mm": 40}, "slot_width_mm", "given 40; the area is 36 mm across"),
        ("slots", {"slot_width_mm": 10}, "slot_width_mm", "at a pitch of 8 mm run into each other"),
        ("slots", {"count": 9, "pitch_mm": None, "slot_width_mm": 5}, "count", "36 mm hold"),
        ("slots", {"count": 9}, "height_mm", "given 36; 9 slots at that pitch take 68 mm"),
        ("slots", {"pitch_mm": None}, "", "does not say what is open"),
        ("louvre", {"free_area_pct": None}, "free_area_pct", "missing; kind louvre needs it"),
        ("louvre", {"louvre": "presed"}, "louvre", "is no louvre; did you mean 'pressed'?"),
        ("louvre", {"louvre": "pressed", "loss_coefficient": 3}, "louvre", "give one of them"),
        ("mesh", {"screen": {"type": "insect"}}, "screen.type", "did you mean 'insect_mesh'?"),
        ("mesh", {"screen": {"wire_mm": 0.3}}, "screen.aperture_mm", "missing; a mesh has"),
        (
            "hole",
            {"screen": {"type": "wire_guard", "wire_mm": 1, "aperture_mm": 5}},
            "screen.type",
            "given together with `wire_mm`",
        ),
        ("filter", {"filter": {"loss_pa": 20}}, "filter.at_m_per_s", "missing; a loss is stated"),
        ("filter", {"filter": {"type": "coarse_matt"}}, "filter.type", "mean 'coarse_mat'?"),
        (
            "filter",
            {"filter": {"type": "coarse_mat", "loss_pa": 20, "at_m_per_s": 1}},
            "filter.type",
            "given together with `loss_pa`",
        ),
        ("hole", {"at_mm": [5, 50]}, "at_mm", "reaches 5 mm over the edge of the back wall"),
        ("hole", {"diameter_mm": 160}, "", "reaches 5 mm over the edge of the back wall"),
    ],
)
def test_what_does_not_fit(kind, changes, path, message):
    found = errors({**ALL[kind], **changes})
    where = f"{PATH}.{path}".rstrip(".")
    assert list(found) == [where]
    assert message in found[where]


@pytest.mark.parametrize("kind", ALL)
def test_every_kind_stands_as_written(kind):
    assert errors(ALL[kind]) == {}
    assert made(ALL[kind]).free_area_mm2 > 0


@pytest.mark.parametrize(
    ("mounting", "message"),
    [
        ({"kind": "standing_on"}, "mounted standing_on; leave a gap"),
        ({"kind": "bolted_to", "contact_w_per_m2k": 100}, "mounted bolted_to"),
        ({"kind": "insulated"}, "mounted insulated"),
        ({"kind": "against_surface"}, "mounted against_surface without a gap"),
        ({"kind": "neighbour", "gap_mm": 10, "edges": "closed"}, "has closed edges"),
    ],
)
def test_no_air_outside(mounting, message):
    def document(row):
        return box(walls={"back": {"mounting": mounting, "openings": {"a": row}}})

    found = errors_of(document(HOLE))
    assert list(found) == [PATH]
    assert message in found[PATH]
    assert errors_of(document({**HOLE, "blocked_pct": 100})) == {}


@pytest.mark.parametrize(("gap", "narrow"), [(3, True), (30, False)])
def test_a_gap_outside_is_told(gap, narrow):
    wall = {"mounting": {"kind": "against_surface", "gap_mm": gap}, "openings": {"a": HOLE}}
    ((path, message),) = warnings(box(walls={"back": wall}))
    assert path == ("walls", "back", "openings", "a")
    assert message.startswith(f"opens into a gap of {gap} mm; reckoned as into open air")
    # The rim of the outline, 80 mm round, times the gap against 314 mm2.
    assert ("less air will pass" in message) is narrow


def test_openings_over_each_other_are_told():
    def document(at):
        rows = {"a": HOLE, "b": {**HOLE, "at_mm": at}}
        return box(walls={"back": {"openings": rows}})

    ((path, message),) = warnings(document([110, 75]))
    assert path == ("walls", "back", "openings", "b")
    assert "lies over the opening 'a'" in message
    assert warnings(document([120, 75])) == []


def test_what_stands_over_an_opening_is_told():
    on_wall = part(place="back", side=None, at_mm=[100, 75])
    (found,) = warnings(vented(HOLE, parts={"U1": on_wall}))
    assert "part 'U1' stands over it" in found[1]
    assert warnings(vented(HOLE, parts={"U1": {**on_wall, "at_mm": [30, 75]}})) == []
    assert warnings(vented({**HOLE, "blocked_pct": 100}, parts={"U1": on_wall})) == []
    pad = {"to": "back", "thickness_mm": 60, "conductivity_w_per_mk": 2}
    with_pad = part(side="back", pad=pad)
    document = vented(HOLE, boards={"main": board()}, parts={"U1": with_pad})
    assert any("part 'U1' stands over it" in message for _, message in warnings(document))
    filler = {"a": {"side": "back", "conductivity_w_per_mk": 1.5}}
    document = vented(HOLE, boards={"main": board(fillers=filler)})
    assert any("filler 'a' stands over it" in message for _, message in warnings(document))


# In a document --------------------------------------------------------------------------------


VENTED = """\
title: Vented
defaults:
  wall: {material: mild_steel, thickness_mm: 1, finish_outside: grey_paint}
box: {width_mm: 200, height_mm: 150, depth_mm: 80}
surroundings: {air_c: 30}
walls:
  bottom:
    openings:
      in: {kind: hole, diameter_mm: 20}
conditions:
  clear: {}
  blocked: {walls: {bottom: {openings: {in: {blocked_pct: 100}}}}}
"""


def test_a_condition_blocks_an_opening(load):
    clear, blocked = load(VENTED).cases()
    assert not clear.walls["bottom"].openings[0].closed
    assert blocked.walls["bottom"].openings[0].closed


def test_errors_name_line_and_key(refused):
    (problem,) = refused(VENTED.replace("diameter_mm: 20", "diameter_mm: 90"))
    assert (problem.line, problem.field) == (9, "walls.bottom.openings.in")
    (problem,) = refused(VENTED.replace("diameter_mm: 20", "diamter_mm: 20"))
    assert "did you mean 'diameter_mm'?" in problem.message
