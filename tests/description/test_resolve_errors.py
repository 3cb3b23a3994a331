"""Everything but parts that cannot fit together, each at the path of its field."""

import pytest
from support.cases import board, box, case_of, errors_of, part, patched

from enclosure_check.description.names import WALL_NAMES
from enclosure_check.description.problems import FieldErrors


def with_part(**changes):
    return box(boards={"main": board()}, parts={"U1": part(**changes)})


def only(document) -> tuple[str, str]:
    """The one thing wrong: its path and message."""
    ((path, message),) = errors_of(document).items()
    return path, message


def mounted(**mounting):
    return box(walls={"back": {"mounting": mounting}})


def test_the_documents_these_start_from_are_valid():
    assert errors_of(box()) == {}
    assert errors_of(with_part()) == {}


def test_every_error_is_found_at_once():
    document = patched(
        with_part(place="mian", power_by_mode_w={"no": 1}),
        {"mode": "none", "walls": {"left": {"material": "brick"}}, "surroundings": {"sky_c": 0}},
    )
    assert set(errors_of(document)) == {
        "mode",
        "walls.left.material",
        "surroundings.sky_c",
        "parts.U1.place",
        "parts.U1.power_by_mode_w.no",
    }


# Walls --------------------------------------------------------------------------------------


@pytest.mark.parametrize("key", ["material", "thickness_mm", "finish_outside"])
def test_wall_lacks_something(key):
    path, message = only(box(defaults={"wall": {key: None}}))
    assert path == f"defaults.wall.{key}"
    assert message == f"missing; give `{key}` for this wall or for all under `defaults.wall`"


def test_wall_of_its_own_lacks_something():
    document = box(defaults={"wall": {"material": None}}, walls={"top": {"thickness_mm": 3}})
    assert set(errors_of(document)) == {"walls.top.material", "defaults.wall.material"}


@pytest.mark.parametrize(
    ("key", "given", "what"),
    [
        ("material", "aluminum_5052", "material; did you mean 'aluminium_5052'?"),
        ("finish_outside", "gray_paint", "finish; did you mean 'grey_paint'?"),
        ("finish_inside", "white_pain", "finish; did you mean 'white_paint'?"),
    ],
)
@pytest.mark.parametrize("where", ["walls.top", "defaults.wall"])
def test_unknown_row(where, key, given, what):
    first, second = where.split(".")
    path, message = only(box(**{first: {second: {key: given}}}))
    assert path == f"{where}.{key}"
    assert message == f"given {given!r}, which is no {what}"


def test_walls_leave_no_room():
    document = box(box={"dimensions": "outside"}, walls={"left": {"thickness_mm": 198}})
    path, message = only(document)
    assert path == "box.width_mm"
    assert message == "given outside sizes leave no room inside the walls"


def test_no_wall_in_open_air():
    kinds = {name: {"mounting": {"kind": "insulated"}} for name in WALL_NAMES}
    assert only(box(walls=kinds)) == ("walls", "no wall is in open air; at least one must be")
    assert errors_of(box(walls={**kinds, "top": {}})) == {}


# Mounting -----------------------------------------------------------------------------------

_VALUES = {
    "gap_mm": 2,
    "edges": "closed",
    "contact_w_per_m2k": 300,
    "surface_c": 20,
    "surface_emissivity": 0.5,
}
_TAKES = {
    "open_air": (),
    "against_surface": ("gap_mm", "edges", "surface_c", "surface_emissivity"),
    "neighbour": ("gap_mm", "edges", "surface_c", "surface_emissivity"),
    "standing_on": ("contact_w_per_m2k", "surface_c"),
    "bolted_to": ("contact_w_per_m2k", "surface_c"),
    "insulated": (),
}


@pytest.mark.parametrize("key", _VALUES)
@pytest.mark.parametrize("kind", _TAKES)
def test_key_that_does_not_apply_to_a_mounting(kind, key):
    needed = {"contact_w_per_m2k": 300} if kind == "bolted_to" else {}
    errors = errors_of(mounted(kind=kind, **{**needed, key: _VALUES[key]}))
    if key in _TAKES[kind]:
        assert errors == {}
    else:
        allowed = ", ".join(_TAKES[kind]) or "nothing else"
        assert errors == {
            f"walls.back.mounting.{key}": f"does not apply to kind {kind}, which takes {allowed}"
        }


def test_bolted_to_needs_its_contact():
    path, message = only(mounted(kind="bolted_to"))
    assert path == "walls.back.mounting.contact_w_per_m2k"
    assert message == "missing; kind bolted_to needs it"


# Surroundings and modes ---------------------------------------------------------------------


def test_sky_given_needs_its_temperature():
    document = box(surroundings={"sky": "given"})
    assert only(document) == ("surroundings.sky_c", "missing; sky: given needs it")


@pytest.mark.parametrize("sky", ["none", "clear", "overcast"])
def test_sky_temperature_applies_to_a_given_sky_only(sky):
    path, message = only(box(surroundings={"sky": sky, "sky_c": 5}))
    assert path == "surroundings.sky_c"
    assert message == f"applies to sky: given only, here the sky is {sky}"


def test_unknown_mode():
    document = box(mode="bussy", modes={"busy": {}})
    assert only(document) == ("mode", "given 'bussy', which is no mode; did you mean 'busy'?")


def test_power_by_unknown_mode_of_a_board():
    document = box(boards={"main": board(other_power_by_mode_w={"busy": 1})})
    path, message = only(document)
    assert (path, message) == (
        "boards.main.other_power_by_mode_w.busy",
        "given 'busy', which is no mode",
    )


def test_power_by_unknown_mode_is_told_where_it_is_written():
    modes = {"busy": {}}
    own = patched(with_part(power_by_mode_w={"bsy": 1}), {"modes": modes})
    assert only(own)[0] == "parts.U1.power_by_mode_w.bsy"
    kind = {"part_types": {"kind": {"power_by_mode_w": {"bsy": 1}}}, "modes": modes}
    of_type = patched(with_part(type="kind"), kind)
    assert only(of_type)[0] == "part_types.kind.power_by_mode_w.bsy"


# Boards -------------------------------------------------------------------------------------


@pytest.mark.parametrize("name", ["left", "right", "front", "back", "bottom", "top", "air"])
def test_board_named_as_a_wall_or_the_air(name):
    path, message = only(box(boards={name: board()}))
    assert path == f"boards.{name}"
    assert message == f"the name {name!r} stands for a wall or the air; choose another"


@pytest.mark.parametrize(
    ("changes", "axis", "size", "room"),
    [
        ({"length_mm": 201}, "left to right", "201", "200"),
        ({"width_mm": 151}, "bottom to top", "151", "150"),
        ({"thickness_mm": 101}, "front to back", "101", "100"),
        ({"parallel_to": "left"}, "front to back", "120", "100"),
        ({"parallel_to": "top", "width_mm": 101}, "front to back", "101", "100"),
    ],
)
def test_board_larger_than_the_box(changes, axis, size, room):
    path, message = only(box(boards={"main": board(**changes)}))
    assert path == "boards.main"
    assert message == f"reaches outside the box: {size} mm {axis}, the inside has {room} mm"


@pytest.mark.parametrize(
    ("wall", "most"), [("back", "98.4"), ("left", "80"), ("top", "50"), ("front", "98.4")]
)
def test_board_pushed_through_the_far_wall(wall, most):
    most_mm = float(most)
    assert errors_of(box(boards={"main": board(from_walls_mm={wall: most_mm})})) == {}
    path, message = only(box(boards={"main": board(from_walls_mm={wall: most_mm + 0.1})}))
    assert path == f"boards.main.from_walls_mm.{wall}"
    assert message == f"reaches outside the box: at most {most} mm fits"


@pytest.mark.parametrize(
    ("first", "second"), [("left", "right"), ("front", "back"), ("bottom", "top")]
)
def test_board_off_two_opposite_walls(first, second):
    path, message = only(box(boards={"main": board(from_walls_mm={second: 5, first: 5})}))
    assert path == f"boards.main.from_walls_mm.{second}"
    assert message == f"given together with {first}; give one of them"


@pytest.mark.parametrize(
    ("key", "given", "what"), [("material", "fr5", "material"), ("finish", "mask", "finish")]
)
@pytest.mark.parametrize("where", ["boards.main", "defaults.board"])
def test_board_of_an_unknown_row(where, key, given, what):
    first, second = where.split(".")
    path, message = only(patched(with_part(), {first: {second: {key: given}}}))
    assert path == f"{where}.{key}"
    assert message.startswith(f"given {given!r}, which is no {what}")


def test_more_copper_than_board():
    thick = {f"layer {index}": {"thickness_um": 400, "coverage_pct": 50} for index in range(3)}
    document = box(boards={"main": board(copper={"one": None, **thick}, thickness_mm=1.2)})
    path, message = only(document)
    assert path == "boards.main.copper"
    assert message == "1.2 mm of copper in a 1.2 mm board"


def test_copper_and_a_conductivity():
    path, message = only(box(boards={"main": board(conductivity_in_plane_w_per_mk=20)}))
    assert path == "boards.main.conductivity_in_plane_w_per_mk"
    assert message == "given together with `copper`; give one of them"


# Readings -----------------------------------------------------------------------------------


def measured(**parts):
    return patched(with_part(), {"measured": {"run": {"parts": parts}}})


def test_reading_of_an_unknown_part():
    assert only(measured(U2={"case": 50})) == (
        "measured.run.parts.U2",
        "given 'U2', which is no part",
    )


@pytest.mark.parametrize("place", ["air", "back"])
def test_board_reading_needs_a_board(place):
    assert errors_of(measured(U1={"board": 50})) == {}
    where = {"from_walls_mm": {"left": 9}, "at_mm": None} if place == "air" else {"at_mm": [50, 50]}
    moved = {"parts": {"U1": {"place": place, "side": None, **where}}}
    assert only(patched(measured(U1={"board": 50, "case": 40}), moved)) == (
        "measured.run.parts.U1.board",
        "a board reading needs a part on a board",
    )


def test_errors_carry_paths_as_written():
    with pytest.raises(FieldErrors) as caught:
        case_of(with_part(side="top"))
    assert [problem.path for problem in caught.value.problems] == [("parts", "U1", "side")]


@pytest.mark.parametrize("given", [{}, {"pct": 5, "plus_minus": 1}])
def test_a_tolerance_is_in_percent_or_in_its_own_unit(given):
    path, message = only(box(tolerances={"surroundings.air_c": given}))
    assert path == "tolerances.surroundings.air_c"
    assert message == "needs exactly one of pct and plus_minus"
    for one in ({"pct": 5}, {"plus_minus": 1}):
        assert errors_of(box(tolerances={"surroundings.air_c": one})) == {}
