"""Everything about parts that cannot fit together, each at the path of its field."""

import pytest
from support.cases import board, box, errors_of, part, patched

PAD = {"to": "front", "thickness_mm": 60, "conductivity_w_per_mk": 3}


def with_part(**changes):
    return box(boards={"main": board()}, parts={"U1": part(**changes)})


def only(document) -> tuple[str, str]:
    """The one thing wrong: its path and message."""
    ((path, message),) = errors_of(document).items()
    return path, message


def test_the_documents_these_start_from_are_valid():
    assert errors_of(with_part()) == {}
    assert errors_of(with_part(pad=PAD)) == {}
    assert errors_of(with_part(place="back", side=None)) == {}
    in_the_air = {"place": "air", "side": None, "at_mm": None}
    assert errors_of(with_part(**in_the_air, from_walls_mm={"left": 9})) == {}


# Parts: names, types and sizes --------------------------------------------------------------


@pytest.mark.parametrize("name", ["top", "air", "main"])
def test_part_named_as_something_else(name):
    document = box(boards={"main": board()}, parts={name: part()})
    path, message = only(document)
    assert path == f"parts.{name}"
    assert message == f"the name {name!r} stands for a wall, a board or the air already"


def test_part_of_an_unknown_type():
    document = patched(with_part(type="procesor"), {"part_types": {"processor": {}}})
    assert only(document) == (
        "parts.U1.type",
        "given 'procesor', which is no part type; did you mean 'processor'?",
    )


@pytest.mark.parametrize("key", ["length_mm", "width_mm", "height_mm"])
def test_part_without_a_size(key):
    assert only(with_part(**{key: None})) == (
        f"parts.U1.{key}",
        f"missing; give `{key}` for this part or its type",
    )


def test_part_of_an_unknown_finish():
    assert only(with_part(finish="gold"))[0] == "parts.U1.finish"
    of_type = patched(with_part(type="kind"), {"part_types": {"kind": {"finish": "gold"}}})
    assert only(of_type)[0] == "part_types.kind.finish"


def test_two_ways_for_power_to_grow():
    document = with_part(power_slope_pct_per_k=0.4, power_doubling_k=20)
    assert only(document) == (
        "parts.U1.power_doubling_k",
        "given together with `power_slope_pct_per_k`; give one of them",
    )


# Parts: places ------------------------------------------------------------------------------


def test_part_in_an_unknown_place():
    path, message = only(with_part(place="mian"))
    assert path == "parts.U1.place"
    assert message == "given 'mian', which is no board or wall; did you mean 'main'?"


def test_part_on_a_board_that_is_itself_wrong_is_not_told_twice():
    document = patched(with_part(), {"boards": {"main": {"material": "fr5"}}})
    assert set(errors_of(document)) == {"boards.main.material"}


@pytest.mark.parametrize(
    ("side", "given"), [(None, "missing"), ("top", "given 'top'"), ("left", "given 'left'")]
)
def test_part_on_no_side_of_its_board(side, given):
    path, message = only(with_part(side=side))
    assert path == "parts.U1.side"
    assert message == f"{given}; board 'main' has the sides front and back"


def test_part_on_a_wall_has_no_side():
    assert only(with_part(place="back")) == ("parts.U1.side", "applies to parts on boards only")


@pytest.mark.parametrize("place", ["main", "back"])
def test_part_without_its_centre(place):
    side = "front" if place == "main" else None
    path, message = only(with_part(place=place, side=side, at_mm=None))
    assert path == "parts.U1.at_mm"
    assert message == "missing; a part on a board or wall needs its centre"


@pytest.mark.parametrize("place", ["main", "back"])
def test_part_on_a_face_does_not_count_from_walls(place):
    side = "front" if place == "main" else None
    path, message = only(with_part(place=place, side=side, from_walls_mm={"left": 5}))
    assert path == "parts.U1.from_walls_mm"
    assert message == "applies to parts in the air only; use `at_mm`"


@pytest.mark.parametrize(
    ("key", "value"), [("side", "top"), ("at_mm", [50, 50])], ids=["side", "at_mm"]
)
def test_part_in_the_air_counts_from_walls(key, value):
    base = {"place": "air", "side": None, "at_mm": None}
    path, message = only(with_part(**{**base, key: value}))
    assert path == f"parts.U1.{key}"
    assert message == "applies to parts on boards and walls; use `from_walls_mm`"


@pytest.mark.parametrize(
    ("at", "over"),
    [([6, 50], "1"), ([115, 50], "2"), ([60, 4], "1"), ([60, 97], "2"), ([-5, 50], "12")],
)
def test_part_over_each_edge_of_its_board(at, over):
    assert only(with_part(at_mm=at)) == (
        "parts.U1.at_mm",
        f"reaches {over} mm over the edge of 'main'",
    )


def test_part_over_the_edge_of_its_wall():
    document = with_part(place="back", side=None, at_mm=[195, 50])
    assert only(document) == ("parts.U1.at_mm", "reaches 2 mm over the edge of 'back'")


def test_part_on_a_board_through_the_wall_it_faces():
    # The front side of the board is 49.2 mm off the front wall.
    assert errors_of(with_part(height_mm=49.2)) == {}
    assert only(with_part(height_mm=49.3)) == (
        "parts.U1.place",
        "its top reaches 0.1 mm into the front wall",
    )


@pytest.mark.parametrize(
    ("place", "room", "opposite"),
    [("back", 100, "front"), ("left", 200, "right"), ("bottom", 150, "top")],
)
def test_part_on_a_wall_through_the_opposite_wall(place, room, opposite):
    fits = {"place": place, "side": None, "at_mm": [50, 50]}
    assert errors_of(with_part(**fits, height_mm=room)) == {}
    assert only(with_part(**fits, height_mm=room + 1)) == (
        "parts.U1.place",
        f"its top reaches 1 mm into the {opposite} wall",
    )


def test_part_on_a_wall_is_lifted_by_its_pad():
    pad = {"thickness_mm": 0.5, "conductivity_w_per_mk": 1}
    on_wall = {"place": "back", "side": None, "pad": pad}
    assert errors_of(with_part(**on_wall, height_mm=99.5)) == {}
    assert only(with_part(**on_wall, height_mm=99.6))[0] == "parts.U1.place"


def test_body_in_the_air_larger_than_the_box():
    document = with_part(place="air", side=None, at_mm=None, height_mm=151)
    path, message = only(document)
    assert path == "parts.U1"
    assert message == "reaches outside the box: 151 mm bottom to top, the inside has 150 mm"


def test_body_in_the_air_pushed_through_a_wall():
    air = {"place": "air", "side": None, "at_mm": None}
    assert only(with_part(**air, from_walls_mm={"top": 149})) == (
        "parts.U1.from_walls_mm.top",
        "reaches outside the box: at most 148 mm fits",
    )


# Pads ---------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("to", "given"), [(None, "missing"), ("back", "given 'back'"), ("top", "given 'top'")]
)
def test_pad_to_a_wall_it_cannot_reach(to, given):
    path, message = only(with_part(pad={**PAD, "to": to}))
    assert path == "parts.U1.pad.to"
    assert message == f"{given}; this part can only have a pad to the front wall"


def test_pad_of_a_part_on_a_wall_is_under_it():
    on_wall = {"place": "left", "side": None, "at_mm": [50, 50]}
    assert errors_of(with_part(**on_wall, pad={**PAD, "to": "left"})) == {}
    path, message = only(with_part(**on_wall, pad={**PAD, "to": "right"}))
    assert path == "parts.U1.pad.to"
    assert message == "given 'right'; this part can only have a pad to the left wall"


def test_part_in_the_air_has_no_pad():
    document = with_part(place="air", side=None, at_mm=None, pad=PAD)
    assert only(document) == (
        "parts.U1.pad",
        "a part in the air cannot have a pad; set it on the wall",
    )


@pytest.mark.parametrize(("key", "most"), [("length_mm", "14"), ("width_mm", "10")])
def test_pad_larger_than_its_part(key, most):
    assert errors_of(with_part(pad={**PAD, key: float(most)})) == {}
    path, message = only(with_part(pad={**PAD, key: float(most) + 0.5}))
    assert path == f"parts.U1.pad.{key}"
    assert message.endswith(f"the pad is larger than the {most} mm of the part")


@pytest.mark.parametrize(("height", "room"), [(49.2, "0"), (50.2, "-1")])
def test_no_room_for_a_pad(height, room):
    path, message = only(with_part(height_mm=height, pad=PAD))
    assert path == "parts.U1.pad"
    assert message.endswith("mm to the front wall")
    assert message.startswith("no room for a pad: ")
    distance = float(message.split()[5])
    assert distance == pytest.approx(float(room), abs=1e-9)


def test_pad_too_thin_is_told_where_it_is_written():
    own = with_part(pad={**PAD, "thickness_mm": 40})
    path, message = only(own)
    assert path == "parts.U1.pad.thickness_mm"
    assert "thinner than the 47.2 mm between" in message
    kind = {"part_types": {"kind": {"pad": {**PAD, "thickness_mm": 40}}}}
    assert only(patched(with_part(type="kind"), kind))[0] == "part_types.kind.pad.thickness_mm"


# Limits -------------------------------------------------------------------------------------


def limited(**limit):
    return with_part(limits={"case": limit})


def test_limit_that_limits_nothing():
    path, message = only(limited())
    assert (path, message) == ("parts.U1.limits.case", "missing; needs max_c, min_c or derating")


@pytest.mark.parametrize("lowest", [80, 90])
def test_limits_that_cross(lowest):
    path, message = only(limited(max_c=80, min_c=lowest))
    assert path == "parts.U1.limits.case.min_c"
    assert message == f"given {lowest}; not below the highest allowed"


@pytest.mark.parametrize("place", ["air", "back"])
def test_board_limit_needs_a_board(place):
    at = None if place == "air" else [50, 50]
    off = {"place": place, "side": None, "at_mm": at}
    limit = {"limits": {"board": {"max_c": 80}}}
    assert only(with_part(**off, **limit)) == (
        "parts.U1.limits.board",
        "a board limit needs a part on a board",
    )
    of_type = patched(with_part(type="kind", **off), {"part_types": {"kind": limit}})
    assert only(of_type)[0] == "part_types.kind.limits.board"


def derated(allowed, load=50, **limit):
    return limited(derating={"load_pct": load, "allowed_pct": allowed}, **limit)


@pytest.mark.parametrize("text", ["warm", "inf", "nan", "1_0", "true", "-151", "501"])
def test_derating_over_something_that_is_no_temperature(text):
    path, _ = only(derated({"20": 100, text: 0}))
    assert path == f"parts.U1.limits.case.derating.allowed_pct.{text}"


@pytest.mark.parametrize(
    "curve",
    [{"85": 100, "70": 50}, {"70": 100, "70.0": 50}, {"70": 50, "85": 60}],
    ids=["falling temperature", "same temperature", "rising load"],
)
def test_derating_curve_that_does_not_fall(curve):
    path, message = only(derated(curve))
    assert path == "parts.U1.limits.case.derating.allowed_pct"
    assert message == "temperatures must rise and the allowed load must not rise with them"
