"""What is filled in where the document says nothing, and that every such choice is listed."""

import pytest
from support.cases import board, box, case_of, part, patched

from enclosure_check.description.names import WALL_NAMES
from enclosure_check.library.rows import load_finishes, load_materials


def assumptions(document) -> tuple[str, ...]:
    return case_of(document).assumptions


def with_part(**changes):
    return box(boards={"main": board()}, parts={"U1": part(**changes)})


# Walls --------------------------------------------------------------------------------------


def test_walls_take_the_defaults():
    walls = case_of(box()).walls
    assert tuple(walls) == WALL_NAMES
    for name, wall in walls.items():
        assert wall.name == name
        assert (wall.material.name, wall.thickness_mm) == ("aluminium_5052", 2)
        assert wall.finish_outside.name == wall.finish_inside.name == "grey_paint"
        assert wall.mounting.kind == "open_air"
        assert (wall.touch_max_c, wall.sun_w_per_m2) == (None, 0)


def test_a_wall_overrides_the_defaults_one_by_one():
    own = {
        "material": "pc_abs",
        "thickness_mm": 3,
        "finish_outside": "white_plastic",
        "finish_inside": "bare_steel",
    }
    for key, value in own.items():
        walls = case_of(box(walls={"left": {key: value}})).walls
        found = getattr(walls["left"], key)
        assert getattr(found, "name", found) == value
        right = getattr(walls["right"], key)
        assert getattr(right, "name", right) != value


def test_inside_finish_is_that_of_the_outside_unless_given():
    walls = case_of(box(walls={"left": {"finish_outside": "white_paint"}})).walls
    assert walls["left"].finish_inside.name == "white_paint"
    given = {"defaults": {"wall": {"finish_inside": "bare_steel"}}}
    walls = case_of(patched(box(walls={"left": {"finish_outside": "white_paint"}}), given)).walls
    assert walls["left"].finish_inside.name == "bare_steel"


def test_rows_of_the_document_come_before_those_of_the_library():
    own = box(
        materials={"aluminium_5052": {"conductivity_w_per_mk": 1.25}},
        finishes={"grey_paint": {"emissivity": 0.5, "solar_absorptivity": 0.25}},
    )
    wall = case_of(own).walls["top"]
    assert wall.material.conductivity_w_per_mk == 1.25
    assert wall.material.in_plane_conductivity_w_per_mk == 1.25
    assert (wall.finish_outside.emissivity, wall.finish_outside.solar_absorptivity) == (0.5, 0.25)


def test_rows_of_the_library():
    wall = case_of(box()).walls["top"]
    row, finish = load_materials()["aluminium_5052"], load_finishes()["grey_paint"]
    assert wall.material.conductivity_w_per_mk == row.conductivity_w_per_mk
    assert wall.material.density_kg_per_m3 == row.density_kg_per_m3
    assert wall.finish_outside.emissivity == finish.emissivity
    assert wall.finish_outside.solar_absorptivity == finish.solar_absorptivity


def test_laminate_conducts_better_along_than_through():
    made = case_of(box(boards={"main": board()})).boards["main"]
    row = load_materials()["fr4"]
    assert made.laminate.conductivity_w_per_mk == row.conductivity_w_per_mk
    assert made.laminate.in_plane_conductivity_w_per_mk == row.in_plane_conductivity_w_per_mk
    assert row.in_plane_conductivity_w_per_mk > row.conductivity_w_per_mk


# Mounting -----------------------------------------------------------------------------------


def mounted(**mounting):
    return box(walls={"back": {"mounting": mounting}})


def test_a_surface_lying_flush():
    case = case_of(mounted(kind="against_surface"))
    made = case.walls["back"].mounting
    assert (made.kind, made.gap_mm, made.contact_w_per_m2k) == ("against_surface", 0.1, 0)
    assert (made.surface_c, made.surface_emissivity) == (25, 0.9)
    for line in (
        "a surface lying flush leaves 0.1 mm of air (back)",
        "surface behind a wall: emissivity 0.9 (back)",
        "mounting surface is as warm as the surrounding air (back)",
    ):
        assert line in case.assumptions


def test_edges_of_a_gap():
    case = case_of(mounted(kind="against_surface", gap_mm=4))
    assert not case.walls["back"].mounting.closed
    line = "air passes by the edges of the gap to what is behind a wall (back)"
    assert line in case.assumptions
    for edges in ("open", "closed"):
        case = case_of(mounted(kind="against_surface", gap_mm=4, edges=edges))
        assert case.walls["back"].mounting.closed is (edges == "closed")
        assert line not in case.assumptions


def test_a_neighbour_is_as_warm_as_the_wall_unless_said_otherwise():
    case = case_of(mounted(kind="neighbour", gap_mm=10))
    assert case.walls["back"].mounting.surface_c is None
    assert "neighbouring box is as warm as this one (back)" in case.assumptions
    case = case_of(mounted(kind="neighbour", gap_mm=10, surface_c=50))
    assert case.walls["back"].mounting.surface_c == 50


def test_no_gap_is_smaller_than_one_lying_flush():
    assert case_of(mounted(kind="against_surface", gap_mm=0)).walls["back"].mounting.gap_mm == 0.1
    assert case_of(mounted(kind="against_surface", gap_mm=0.1)).walls["back"].mounting.gap_mm == 0.1


def test_what_is_stated_of_a_surface_is_not_assumed():
    given = mounted(kind="against_surface", gap_mm=2, surface_c=30, surface_emissivity=0.5)
    made = case_of(given).walls["back"].mounting
    assert (made.gap_mm, made.surface_c, made.surface_emissivity) == (2, 30, 0.5)
    text = " ".join(assumptions(given))
    assert "flush" not in text
    assert "emissivity 0.9" not in text
    assert "as warm as the surrounding" not in text


def test_standing_on_something_without_a_contact_passes_no_heat():
    made = mounted(kind="standing_on")
    assert case_of(made).walls["back"].mounting.contact_w_per_m2k == 0
    line = "no heat passes to what the box stands on: no contact given (back)"
    assert line in assumptions(made)
    assert "mounting surface is as warm" not in " ".join(assumptions(made))


@pytest.mark.parametrize("kind", ["standing_on", "bolted_to"])
def test_a_joint_to_a_surface(kind):
    given = mounted(kind=kind, contact_w_per_m2k=300)
    made = case_of(given).walls["back"].mounting
    assert (made.kind, made.contact_w_per_m2k, made.surface_c) == (kind, 300, 25)
    assert "mounting surface is as warm as the surrounding air (back)" in assumptions(given)
    cool = case_of(mounted(kind=kind, contact_w_per_m2k=300, surface_c=-5))
    assert cool.walls["back"].mounting.surface_c == -5


# Touch and sun ------------------------------------------------------------------------------


def test_touch_limit_holds_for_walls_in_open_air_unless_they_have_their_own():
    document = box(
        requirements={"touch_max_c": 60},
        walls={
            "back": {"mounting": {"kind": "insulated"}},
            "left": {"touch_max_c": 48},
            "bottom": {"mounting": {"kind": "insulated"}, "touch_max_c": 70},
        },
    )
    found = {name: wall.touch_max_c for name, wall in case_of(document).walls.items()}
    assert found == {"left": 48, "right": 60, "front": 60, "back": None, "bottom": 70, "top": 60}


def test_sun_falls_on_walls_in_open_air_and_warns_on_others():
    document = box(
        surroundings={"sun_w_per_m2": {"top": 800, "back": 300}},
        walls={"back": {"mounting": {"kind": "insulated"}}},
    )
    case = case_of(document)
    assert (case.walls["top"].sun_w_per_m2, case.walls["back"].sun_w_per_m2) == (800, 0)
    (note,) = case.warnings
    assert note.path == ("surroundings", "sun_w_per_m2", "back")
    dark = patched(document, {"surroundings": {"sun_w_per_m2": {"back": 0}}})
    assert case_of(dark).warnings == ()


# Surroundings -------------------------------------------------------------------------------


def test_radiant_surroundings_are_as_warm_as_the_air_unless_given():
    case = case_of(box(surroundings={"air_c": 31}))
    around = case.surroundings
    assert (around.air_c, around.radiant_c, around.altitude_m) == (31, 31, 0)
    assert (around.sky, around.sky_c) == ("none", None)
    assert "radiant surroundings are as warm as the air" in case.assumptions
    given = case_of(box(surroundings={"air_c": 31, "radiant_c": 20}))
    assert given.surroundings.radiant_c == 20
    assert "radiant surroundings are as warm as the air" not in given.assumptions


def test_sky_given():
    given = case_of(box(surroundings={"sky": "given", "sky_c": -10})).surroundings
    assert (given.sky, given.sky_c) == ("given", -10)


# Boards -------------------------------------------------------------------------------------


def test_board_defaults_and_their_assumptions():
    document = box(boards={"main": board(copper=None)})
    case = case_of(document)
    made = case.boards["main"]
    assert made.size_mm[made.axis] == 1.6
    assert (made.laminate.name, made.finish.name) == ("fr4", "solder_mask")
    assert (made.copper, made.conductivity_in_plane_w_per_mk, made.other_power_w) == ((), None, 0)
    for line in (
        "board thickness 1.6 mm (main)",
        "board finish solder_mask (main)",
        "no copper layers given: the board is bare laminate (main)",
    ):
        assert line in case.assumptions


def test_board_takes_the_defaults_of_the_document_and_overrides_them():
    defaults = {"board": {"thickness_mm": 1, "material": "alumina", "finish": "ceramic"}}
    own = {"thickness_mm": 2, "material": "fr4", "finish": "bare_fr4", "from_walls_mm": {"back": 9}}
    rows = {"main": board(), "own": board(**own)}
    case = case_of(box(defaults=defaults, boards=rows))
    main, own = case.boards["main"], case.boards["own"]
    assert (main.size_mm[1], main.laminate.name, main.finish.name) == (1, "alumina", "ceramic")
    assert (own.size_mm[1], own.laminate.name, own.finish.name) == (2, "fr4", "bare_fr4")
    assert "board" not in " ".join(line for line in case.assumptions if "thickness" in line)


def test_copper_keeps_its_order():
    layers = {
        "top": {"thickness_um": 35, "coverage_pct": 40},
        "inner": {"thickness_um": 18, "coverage_pct": 90},
    }
    made = case_of(box(boards={"main": board(copper=layers)})).boards["main"]
    assert [(row.name, row.thickness_um, row.coverage_pct) for row in made.copper[-2:]] == [
        ("top", 35, 40),
        ("inner", 18, 90),
    ]


# Parts --------------------------------------------------------------------------------------


def test_part_defaults_and_their_assumptions():
    case = case_of(with_part())
    made = case.parts["U1"]
    assert (made.power_w, made.power_at_c) == (0, 25)
    assert (made.power_slope_pct_per_k, made.power_doubling_k) == (0, None)
    assert made.finish.name == "epoxy_package"
    assert (made.pad, made.limits) == (None, ())
    for line in (
        "part finish epoxy_package (U1)",
        "no power stated: taken as none (U1)",
        "no theta_jc_top: the case top is as warm as the junction (U1)",
        "no path to the board given: 0.1 mm of air under the body (U1)",
    ):
        assert line in case.assumptions


@pytest.mark.parametrize(
    ("changes", "gone"),
    [
        ({"finish": "ceramic"}, "part finish"),
        ({"power_w": 0}, "no power stated"),
        ({"theta_jc_top_k_per_w": 0}, "no theta_jc_top"),
        ({"theta_jb_k_per_w": 5}, "no path to the board"),
        ({"theta_jc_bottom_k_per_w": 5}, "no path to the board"),
        ({"bottom_contact_k_per_w": 5}, "no path to the board"),
    ],
)
def test_what_is_stated_of_a_part_is_not_assumed(changes, gone):
    assert gone in " ".join(assumptions(with_part()))
    assert gone not in " ".join(assumptions(with_part(**changes)))


def test_two_paths_to_the_board_are_one():
    line = "theta_jb given: it is the whole path to the board, theta_jc_bottom left out (U1)"
    both = with_part(theta_jb_k_per_w=5, theta_jc_bottom_k_per_w=3)
    assert line in assumptions(both)
    assert line not in assumptions(with_part(theta_jb_k_per_w=5))


@pytest.mark.parametrize(
    ("place", "given", "line"),
    [
        (
            "main",
            {"theta_jb_k_per_w": 5, "bottom_contact_k_per_w": 3},
            "theta_jb given: it is the whole path to the board, bottom_contact left out (U1)",
        ),
        (
            "back",
            {"pad": {"thickness_mm": 1, "conductivity_w_per_mk": 2}, "bottom_contact_k_per_w": 3},
            "pad given: it is the joint to the wall, bottom_contact left out (U1)",
        ),
        ("back", {"theta_jb_k_per_w": 5}, "not on a board: theta_jb left out (U1)"),
        ("air", {"theta_jb_k_per_w": 5}, "not on a board: theta_jb left out (U1)"),
        (
            "air",
            {"theta_jc_bottom_k_per_w": 5},
            "air all round: theta_jc_bottom and bottom_contact left out (U1)",
        ),
        (
            "air",
            {"bottom_contact_k_per_w": 5},
            "air all round: theta_jc_bottom and bottom_contact left out (U1)",
        ),
    ],
)
def test_what_is_stated_and_has_no_effect_is_told(place, given, line):
    on = {
        "main": {},
        "back": {"side": None},
        "air": {"side": None, "at_mm": None, "from_walls_mm": {"left": 10}},
    }[place]
    assert line in assumptions(with_part(place=place, **on, **given))
    for key in given:
        if len(given) > 1:
            alone = {other: value for other, value in given.items() if other != key}
            assert line not in assumptions(with_part(place=place, **on, **alone))
    assert line not in assumptions(with_part(place=place, **on))


def test_part_on_a_wall_without_a_joint_has_air_under_it():
    on_wall = {"place": "bottom", "side": None}
    line = "no joint to the wall given: 0.1 mm of air (U1)"
    assert line in assumptions(with_part(**on_wall))
    assert line not in assumptions(with_part(**on_wall, bottom_contact_k_per_w=1))
    pad = {"thickness_mm": 0.5, "conductivity_w_per_mk": 1}
    assert line not in assumptions(with_part(**on_wall, pad=pad))


def test_assumptions_name_six_things_and_count_the_rest():
    rows = {f"U{index}": part(at_mm=[10 + 15 * index, 50]) for index in range(7)}
    lines = assumptions(box(boards={"main": board()}, parts=rows))
    assert "part finish epoxy_package (U0, U1, U2, U3, U4, U5 and 1 more)" in lines


# Part types ---------------------------------------------------------------------------------

TYPE = {
    "length_mm": 5,
    "width_mm": 4,
    "height_mm": 1,
    "power_w": 2,
    "power_at_c": 85,
    "power_slope_pct_per_k": 0.4,
    "theta_jc_top_k_per_w": 11,
    "theta_jc_bottom_k_per_w": 12,
    "theta_jb_k_per_w": 13,
    "bottom_contact_k_per_w": 14,
    "finish": "ceramic",
    "limits": {"junction": {"max_c": 100}, "case": {"max_c": 90}},
}
TYPED = {"type": "kind", "place": "main", "side": "front", "at_mm": [60, 50]}


def typed(**changes):
    return case_of(
        box(
            boards={"main": board()},
            part_types={"kind": TYPE},
            parts={"U1": patched(TYPED, changes)},
        )
    ).parts["U1"]


def test_part_takes_everything_from_its_type():
    made = typed()
    assert made.size_mm == (5, 1, 4)
    for key in TYPE:
        if key.endswith(("_w", "_c", "_k")):
            assert getattr(made, key) == TYPE[key], key
    assert made.finish.name == "ceramic"
    assert {limit.kind: limit.max_c for limit in made.limits} == {"junction": 100, "case": 90}


@pytest.mark.parametrize(
    ("key", "value"),
    [
        ("power_w", 0.5),
        ("power_at_c", 60),
        ("power_slope_pct_per_k", 0.1),
        ("theta_jc_top_k_per_w", 0),
        ("theta_jc_bottom_k_per_w", 0),
        ("theta_jb_k_per_w", 0),
        ("bottom_contact_k_per_w", 0),
        ("power_w", 0),
    ],
)
def test_part_overrides_its_type(key, value):
    assert getattr(typed(**{key: value}), key) == value


def test_limits_of_part_and_type_come_together_by_point():
    made = typed(limits={"case": {"max_c": 70}, "board": {"max_c": 95}})
    found = {limit.kind: limit.max_c for limit in made.limits}
    assert found == {"junction": 100, "case": 70, "board": 95}
