"""Every error of the models, worded for the user and at its place."""

import pytest
from pydantic import BaseModel
from support.mutations import FULL

from enclosure_check.description import shapes
from enclosure_check.description import validate as module
from enclosure_check.description.base import Strict
from enclosure_check.description.document import Document
from enclosure_check.description.merge import merge_patch
from enclosure_check.description.names import WALL_NAMES
from enclosure_check.description.problems import DocumentError, Problem
from enclosure_check.description.validate import validate
from enclosure_check.description.yaml_nodes import MappingNode, read_yaml

TOP = """\
title: A box
box: {width_mm: 100, height_mm: 80, depth_mm: 60}
surroundings: {air_c: 25}
"""


def node_of(text: str) -> MappingNode:
    return read_yaml(text.encode(), "box.yaml")


def refused(text: str | MappingNode) -> list[Problem]:
    with pytest.raises(DocumentError) as caught:
        validate(node_of(text) if isinstance(text, str) else text, "box.yaml")
    return list(caught.value.problems)


def only(text: str | MappingNode) -> Problem:
    (problem,) = refused(text)
    return problem


def message(extra: str) -> str:
    """The message for one thing added to a valid document."""
    return only(TOP + extra).message


def test_a_valid_document():
    document = validate(node_of(TOP), "box.yaml")
    assert document.box.width_mm == 100
    assert document == Document.model_validate(
        {
            "title": "A box",
            "box": {"width_mm": 100, "height_mm": 80, "depth_mm": 60},
            "surroundings": {"air_c": 25},
        }
    )


def test_null_is_the_default():
    assert validate(node_of(TOP + "mode: null\nparts: ~\ndefaults: {wall: }\n"), "x") == validate(
        node_of(TOP), "x"
    )


# Wrong values -----------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("given", "told"),
    [
        ("lots", "given 'lots' (text)"),
        ("'5'", "given '5' (text, because it is quoted)"),
        ("true", "given true (true or false)"),
        ("-1", "given -1"),
        ("1e6", "given 1e6"),
        (".nan", "given .nan (not a finite number)"),
        ("1e999", "given 1e999 (not a finite number)"),
        ("[1]", "given a list of 1"),
        ("{a: 1}", "given a mapping"),
        ("12:30", "given '12:30' (text)"),
        ("off", "given 'off' (text)"),
        (
            "'" + "x" * 90 + "'",
            f"given '{'x' * 60}'... (text)",
        ),
        ("1" * 500, f"given {'1' * 40}... (not a finite number)"),
    ],
)
def test_what_was_given(given, told):
    assert message(
        f"boards: {{b: {{parallel_to: back, length_mm: 50, width_mm: 40, "
        f"other_power_w: {given}}}}}\n"
    ) == (f"{told}, allowed: a number from 0 to 100000 W")


def test_the_whole_line():
    text = TOP + "parts:\n  U1:\n    place: main\n    power_w: lots\n"
    assert str(only(text)) == (
        "box.yaml:7:14: parts.U1.power_w: given 'lots' (text), allowed: a number from 0 to 100000 W"
    )


@pytest.mark.parametrize(
    ("extra", "allowed"),
    [
        ("format: 2\n", "given 2 (a number), allowed: 1"),
        ("format: true\n", "given true (true or false), allowed: 1"),
        ("description: 5\n", "given 5 (a number), allowed: text of 0 to 2000 characters"),
        ("mode: ''\n", "given '' (text), allowed: text of 1 to 80 characters"),
        (
            "walls: [left]\n",
            "given a list of 1, allowed: a mapping with keys out of left, right, "
            "front, back, bottom or top",
        ),
        ("parts: 5\n", "given 5 (a number), allowed: a mapping by name of 0 to 5000 entries"),
        (
            "requirements: x\n",
            "given 'x' (text), allowed: a mapping with keys out of margin_k, "
            "confidence_pct or touch_max_c",
        ),
        (
            "requirements: {confidence_pct: 100}\n",
            "given 100, allowed: a number from 50 to below 100 %",
        ),
        (
            "defaults: {wall: {thickness_mm: 0}}\n",
            "given 0, allowed: a number greater than 0, up to 10000 mm",
        ),
        ("finishes: {f: {emissivity: 2}}\n", "given 2, allowed: a number from 0 to 1"),
        (
            "walls: {top: {mounting: {kind: bolted}}}\n",
            "given 'bolted' (text), allowed: open_air, against_surface, neighbour, standing_on, "
            "bolted_to or insulated; did you mean 'bolted_to'?",
        ),
        (
            "parts: {U1: {place: b, rotation_deg: 400}}\n",
            "given 400, allowed: a number from -360 to 360 deg",
        ),
        (
            "parts: {U1: {place: b, rotation_deg: false}}\n",
            "given false (true or false), allowed: a number from -360 to 360 deg",
        ),
        (
            "part_lists: {a: {file: a.csv, columns: {reference: R}, turned_deg: 45}}\n",
            "given 45 (a number), allowed: 0, 90, 180 or 270",
        ),
        (
            "part_lists: {a: {file: a.csv, columns: {reference: R}, turned_deg: false}}\n",
            "given false (true or false), allowed: 0, 90, 180 or 270",
        ),
        (
            "parts: {U1: {place: b, at_mm: [1]}}\n",
            "given a list of 1, allowed: a list of 2 items, each a number from -10000 to 10000 mm",
        ),
        (
            "parts: {U1: {place: b, at_mm: [1, null]}}\n",
            "given nothing, allowed: a number from -10000 to 10000 mm",
        ),
        (
            "parts: {U1: {place: b, limits: {case: {derating: {load_pct: 5, allowed_pct: {40: 1}}}}}}"
            "\n",
            "given a mapping, allowed: a mapping by name of 2 to 50 entries",
        ),
        (
            "boards: {b: {parallel_to: back, length_mm: 5, width_mm: 5, from_walls_mm: {top: -1}}}\n",
            "given -1, allowed: a number from 0 to 10000 mm",
        ),
    ],
)
def test_what_is_allowed(extra, allowed):
    assert message(extra) == allowed


# Missing values ---------------------------------------------------------------------------


def test_missing_is_told_at_the_mapping_that_lacks_it():
    problems = refused("title: x\nbox:\n  width_mm: 1\n  height_mm: 2\n")
    assert problems == [
        Problem(
            "box.yaml",
            1,
            1,
            "surroundings",
            "missing; needs a mapping with keys out of air_c, radiant_c, altitude_m, sky, sky_c, "
            "wind_m_per_s, wind_from or sun_w_per_m2",
        ),
        Problem(
            "box.yaml",
            2,
            1,
            "box.depth_mm",
            "missing; needs a number greater than 0, up to 10000 mm",
        ),
    ]


def test_missing_as_it_was_removed_by_a_patch():
    patch = node_of("\n\nbox:\n  width_mm: null\n")
    problem = only(merge_patch(node_of(TOP), patch))
    assert (problem.line, problem.column, problem.field) == (4, 3, "box.width_mm")


def test_missing_as_it_is_null():
    problem = only(TOP.replace("25", "null"))
    assert (problem.line, problem.column, problem.field) == (3, 16, "surroundings.air_c")


# Unknown keys -----------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("extra", "place", "field", "told"),
    [
        ("bords: {}\n", (4, 1), "bords", "unknown key 'bords'; did you mean 'boards'?"),
        (
            "requirements: {margin: 5}\n",
            (4, 16),
            "requirements.margin",
            "unknown key 'margin'; did you mean 'margin_k' in K?",
        ),
        (
            "requirements: {zz: 5}\n",
            (4, 16),
            "requirements.zz",
            "unknown key 'zz', allowed: margin_k, confidence_pct or touch_max_c",
        ),
        (
            "requirements: {zz: null}\n",
            (4, 16),
            "requirements.zz",
            "unknown key 'zz', allowed: margin_k, confidence_pct or touch_max_c",
        ),
        (
            "walls: {lft: {}}\n",
            (4, 9),
            "walls.lft",
            "unknown key 'lft', allowed: left, right, front, back, bottom or top; did you mean "
            "'left'?",
        ),
        (
            "walls: {lft: null}\n",
            (4, 9),
            "walls.lft",
            "unknown key 'lft', allowed: left, right, front, back, bottom or top; did you mean "
            "'left'?",
        ),
        (
            "surroundings: {air_c: 2, sun_w_per_m2: {roof: 5}}\n",
            (4, 41),
            "surroundings.sun_w_per_m2.roof",
            "unknown key 'roof', allowed: left, right, front, back, bottom or top",
        ),
        (
            "materials: {'': {conductivity_w_per_mk: 1}}\n",
            (4, 13),
            "materials.''",
            "given '' as a name, allowed: text of 1 to 80 characters",
        ),
        (
            "modes: {" + "m" * 81 + ": {}}\n",
            (4, 9),
            f"modes.'{'m' * 60}'...",
            f"given '{'m' * 60}'... as a name, allowed: text of 1 to 80 characters",
        ),
        (
            "part_types: {t: {theta_jc: 5}}\n",
            (4, 18),
            "part_types.t.theta_jc",
            "unknown key 'theta_jc'; did you mean 'theta_jc_top_k_per_w' or "
            "'theta_jc_bottom_k_per_w'?",
        ),
        ("part_types: {t: {'[key]': 5}}\n", (4, 18), "part_types.t.[key]", None),
        ("modes: {a: {}, '[key]': {x: 1}}\n", (4, 26), "modes.[key].x", None),
    ],
)
def test_unknown_keys(extra, place, field, told):
    base = TOP if not extra.startswith("surroundings") else TOP.replace("surroundings", "#")
    problem = only(base + extra)
    assert (problem.line, problem.column) == place
    assert problem.field == field
    assert told is None or problem.message == told


@pytest.mark.parametrize(
    ("where", "key", "meant"),
    [
        ("box: {}", "width_cm", "'width_mm' in mm"),
        ("box: {}", "width", "'width_mm' in mm"),
        ("box: {}", "height_in", "'height_mm' in mm"),
        ("box: {}", "depth_m", "'depth_mm' in mm"),
        ("part_types: {t: {}}", "power_mw", "'power_w' in W"),
        ("part_types: {t: {}}", "power", "'power_w' in W"),
        ("part_types: {t: {}}", "theta_jb_c_per_w", "'theta_jb_k_per_w' in K/W"),
        ("part_types: {t: {}}", "power_at_k", "'power_at_c' in C"),
        ("part_types: {t: {}}", "length_inch", "'length_mm' in mm"),
        ("surroundings: {}", "air_k", "'air_c' in C"),
        ("surroundings: {}", "air_deg_c", "'air_c' in C"),
        ("surroundings: {}", "altitude_ft", "'altitude_m' in m"),
        ("surroundings: {}", "sun_kw_per_m2", "'sun_w_per_m2'"),
        ("materials: {t: {}}", "conductivity_w_per_m_k", "'conductivity_w_per_mk' in W/mK"),
        ("materials: {t: {}}", "conductivity", "'conductivity_w_per_mk' in W/mK"),
        ("materials: {t: {}}", "density_g_per_cm3", "'density_kg_per_m3'"),
        ("walls: {top: {}}", "touch_max_f", "'touch_max_c' in C"),
        ("walls: {top: {mounting: {}}}", "contact_w_per_m2_k", "'contact_w_per_m2k' in W/m2K"),
        ("walls: {top: {mounting: {}}}", "gap_um", "'gap_mm' in mm"),
    ],
)
def test_the_same_quantity_in_another_unit(where, key, meant):
    text = where.replace("{}", f"{{{key}: 1}}")
    found = [each for each in refused(text + "\n") if each.field.endswith(key)]
    assert [each.message for each in found] == [f"unknown key '{key}'; did you mean {meant}?"]


def models(model: type[BaseModel]) -> set[type[BaseModel]]:
    """The models a model is built from, itself included."""
    found = {model}
    for info in model.model_fields.values():
        shape = shapes.field_shape(info)
        while shape.core in (dict, list):
            shape = shape.item
        if shape.is_model:
            found |= models(shape.core)
    return found


def not_yet() -> list[tuple[type[BaseModel], str]]:
    return [
        (model, key)
        for model in sorted(models(Document), key=lambda each: each.__name__)
        if issubclass(model, Strict)
        for key in model.NOT_YET
    ]


@pytest.mark.parametrize(("model", "key"), not_yet(), ids=lambda value: str(value))
def test_what_is_not_computed_yet_has_its_own_answer(model, key):
    assert module._unknown_key(model, key) == model.NOT_YET[key]
    near = module._unknown_key(model, f"{key}x")
    assert f"did you mean {key!r}? But {model.NOT_YET[key]}" in near


def test_not_yet_in_a_document():
    problem = only(TOP + "walls:\n  top:\n    fins: {count: 8}\n")
    assert str(problem) == "box.yaml:6:5: walls.top.fins: fins are not computed in this version"


# All at once, and the worst ---------------------------------------------------------------


def test_all_problems_at_once():
    text = (
        "title: 5\nbox: {width_mm: x, heigth_mm: 1}\nwalls: {lft: {}, top: {thickness_mm: -1}}\n"
        "zz:\n"
    )
    fields = [each.field for each in refused(text)]
    assert fields == [
        "surroundings",
        "title",
        "box.depth_mm",
        "box.height_mm",
        "box.width_mm",
        "box.heigth_mm",
        "walls.lft",
        "walls.top.thickness_mm",
        "zz",
    ]


def test_very_many_problems_are_counted():
    text = TOP + "parts:\n" + "".join(f"  R{number}: 5\n" for number in range(700))
    problems = refused(text)
    assert len(problems) == module.MAX_PROBLEMS + 1
    assert "and 200 more problems not shown" in {each.message for each in problems}


@pytest.mark.parametrize(
    ("loc", "kind"),
    [
        ((), "model_type"),
        (("nowhere",), "value_error"),
        (("box", "function-after[x()]", "width_mm"), "some_new_error"),
        (("box", "union_tag", "width_mm", "float"), "float_parsing"),
        (("parts", 3, "x"), "assertion_error"),
        (("title", "[key]"), "string_too_short"),
        (("[key]",), "string_too_short"),
    ],
)
def test_errors_not_foreseen_still_make_a_sane_line(loc, kind):
    problem = module._problem(kind, loc, "Input is odd\x07", node_of(TOP), "box.yaml")
    assert problem.line >= 1
    assert problem.message.startswith("given ")
    assert str(problem).isprintable()
    if "width_mm" in loc:
        assert (problem.field, problem.line, problem.column) == ("box.width_mm", 2, 17)


def test_every_field_of_every_model_says_what_it_allows():
    for model in models(Document):
        for name, info in model.model_fields.items():
            shape = shapes.field_shape(info)
            assert shapes.allowed(shape), (model, name)
            if shape.core in (float, dict) and name.endswith(("_mm", "_w", "_c", "_pct", "_k")):
                assert shape.unit, (model, name)


def test_walls_are_the_keys_of_the_walls():
    shape = shapes.shape_at(("walls",))
    assert shape is not None
    assert shape.key.words() == WALL_NAMES
    assert shapes.shape_at(("walls", "top", "mounting", "gap_mm", "x")) is None
    assert shapes.shape_at(("nowhere",)) is None


def test_the_full_document_is_valid():
    node = read_yaml(FULL.read_bytes(), "full.yaml")
    assert validate(node, "full.yaml").parts["U1"].type == "processor"
