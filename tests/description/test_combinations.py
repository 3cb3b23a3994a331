"""Options and conditions: which patch a problem needs, and patches that cannot be used."""

import pytest

from enclosure_check.description.load import MAX_COMBINATIONS
from enclosure_check.description.problems import Problem

TOP = """\
title: A box
defaults: {wall: {material: abs, thickness_mm: 2, finish_outside: black_paint}}
box: {width_mm: 100, height_mm: 80, depth_mm: 60}
surroundings: {air_c: 25}
"""
BOARD = """\
boards:
  main: {parallel_to: bottom, length_mm: 50, width_mm: 40, from_walls_mm: {bottom: 10}}
"""


def told(problems: list[Problem]) -> list[tuple[int, str, str]]:
    return [(each.line, each.field, each.message) for each in problems]


# Problems and the patch they need ---------------------------------------------------------


def test_an_error_in_a_patch_is_told_at_the_patch(refused):
    problems = refused(TOP + "conditions:\n  hot:\n    surroundings: {air_c: lots}\n  cold: {}\n")
    assert told(problems) == [
        (
            7,
            "surroundings.air_c",
            "given 'lots' (text), allowed: a number from -90 to 150 C (under condition 'hot')",
        )
    ]


def test_a_key_removed_by_a_patch_is_told_where_it_is_removed(refused):
    problems = refused(TOP + "conditions:\n  hot:\n    box:\n      depth_mm: null\n  cold: {}\n")
    assert told(problems) == [
        (
            8,
            "box.depth_mm",
            "missing; needs a number greater than 0, up to 10000 mm (under condition 'hot')",
        )
    ]


def test_an_error_of_the_base_is_told_once_and_of_no_patch(refused):
    problems = refused(
        TOP.replace("25", "lots") + "options: {a: {}, b: {}}\nconditions: {x: {}, y: {}, z: {}}\n"
    )
    assert told(problems) == [
        (4, "surroundings.air_c", "given 'lots' (text), allowed: a number from -90 to 150 C")
    ]


def test_an_error_of_the_base_that_an_option_mends(refused):
    problems = refused(
        TOP.replace("25", "lots")
        + "options: {a: {surroundings: {air_c: 5}}}\nconditions: {x: {}}\n"
    )
    assert told(problems) == [
        (4, "surroundings.air_c", "given 'lots' (text), allowed: a number from -90 to 150 C")
    ]


def test_an_error_of_the_base_that_one_condition_mends(refused):
    problems = refused(
        TOP.replace("air_c: 25", "") + "conditions: {x: {surroundings: {air_c: 5}}, y: {}, z: {}}\n"
    )
    assert told(problems) == [
        (
            4,
            "surroundings.air_c",
            "missing; needs a number from -90 to 150 C (under conditions 'y' and 'z')",
        )
    ]


@pytest.mark.parametrize(
    ("patches", "suffix"),
    [
        ("conditions: {hot: {box: {width_mm: 20}}}\n", " (under condition 'hot')"),
        ("conditions: {hot: {box: {width_mm: 20}}, x: {}}\n", " (under condition 'hot')"),
        ("options: {slim: {box: {width_mm: 20}}}\n", " (under option 'slim')"),
        (
            "options: {slim: {box: {width_mm: 20}}}\nconditions: {x: {}, y: {}}\n",
            " (under option 'slim')",
        ),
        (
            "options: {slim: {box: {width_mm: 20}}}\nconditions: {x: {}, y: {box: {width_mm: 90}}}\n",
            " (under option 'slim' and condition 'x')",
        ),
        (
            "options: {slim: {box: {width_mm: 20}}}\n"
            "conditions: {x: {}, y: {}, z: {box: {width_mm: 90}}}\n",
            " (under option 'slim' and condition 'x' and 1 more combinations)",
        ),
        (
            "conditions: {a: {box: {width_mm: 20}}, b: {box: {width_mm: 20}}, "
            "c: {box: {width_mm: 20}}, d: {box: {width_mm: 20}}, e: {}}\n",
            " (under conditions 'a', 'b', 'c' and 1 more)",
        ),
        ("options: {a: {}}\nconditions: {x: {}}\nmode: null\n", None),
    ],
)
def test_what_does_not_fit_under_a_patch(load, refused, patches, suffix):
    """The board of 50 mm does not fit a box of 20 mm: told at the board, naming the patch."""
    text = TOP + BOARD + patches
    if suffix is None:
        load(text)
        return
    (problem,) = refused(text)
    assert (problem.line, problem.field) == (6, "boards.main")
    assert problem.message.endswith(f"the inside has 20 mm{suffix}")


def test_what_does_not_fit_anywhere_names_no_patch(refused):
    text = TOP.replace("width_mm: 100", "width_mm: 20") + BOARD
    for patches in ("", "conditions: {x: {}}\n", "options: {a: {}}\nconditions: {x: {}, y: {}}\n"):
        (problem,) = refused(text + patches)
        assert problem.message.endswith("the inside has 20 mm")


def test_what_does_not_fit_where_the_base_alone_is_incomplete(refused):
    """Under every condition, and the base cannot be resolved for another reason."""
    text = TOP.replace("width_mm: 100", "width_mm: 20").replace("air_c: 25", "") + BOARD
    air = "{surroundings: {air_c: 5}}"
    (problem,) = refused(text + f"conditions: {{x: {air}, y: {air}}}\n")
    assert problem.message.endswith("the inside has 20 mm")


def test_what_does_not_fit_is_told_of_the_conditions_that_got_so_far(refused):
    """Condition y is refused for itself, so the misfit arises wherever it can: no suffix."""
    text = TOP.replace("width_mm: 100", "width_mm: 20") + BOARD
    misfit, unknown = refused(text + "conditions:\n  x: {}\n  y: {zz: 1}\n")
    assert misfit.message.endswith("the inside has 20 mm")
    assert unknown.message.endswith("(under condition 'y')")


def test_problems_of_both_stages_from_different_conditions(refused):
    problems = refused(
        TOP + BOARD + "conditions:\n  slim: {box: {width_mm: 20}}\n  odd: {zz: 1}\n  fine: {}\n"
    )
    assert [(each.line, each.field) for each in problems] == [(6, "boards.main"), (9, "zz")]
    assert problems[0].message.endswith("(under condition 'slim')")
    assert problems[1].message.endswith("(under condition 'odd')")


# Patches as such --------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("extra", "expected"),
    [
        ("options: [a]\n", (5, "options", "given a list, allowed: a mapping of patches by name")),
        (
            "conditions: hot\n",
            (5, "conditions", "given 'hot', allowed: a mapping of patches by name"),
        ),
        (
            "conditions:\n  hot: 5\n",
            (6, "conditions.hot", "given '5', allowed: a mapping of what changes"),
        ),
        (
            "options:\n  a: [1]\n",
            (6, "options.a", "given a list, allowed: a mapping of what changes"),
        ),
        (
            "options:\n  a:\n    conditions: {x: {}}\n",
            (7, "options.a.conditions", "a patch cannot have options or conditions of its own"),
        ),
        (
            "conditions:\n  a:\n    options: null\n",
            (7, "conditions.a.options", "a patch cannot have options or conditions of its own"),
        ),
        (
            "conditions:\n  '': {}\n",
            (6, "conditions.''", "given a name of 0 characters, allowed: 1 to 80"),
        ),
        (
            "boards: {main: {parallel_to: top, length_mm: 9, width_mm: 9}}\n"
            "conditions:\n  a:\n    boards: {mian: null}\n",
            (
                8,
                "conditions.a.boards.mian",
                "removes nothing, there is no 'mian'; did you mean 'main'?",
            ),
        ),
        (
            "options:\n  a:\n    parts: {U9: null}\n",
            (7, "options.a.parts.U9", "removes nothing, there is no 'U9'"),
        ),
        (
            "conditions:\n  a:\n    box: {tlit: null}\n",
            (7, "box.tlit", "unknown key 'tlit'; did you mean 'tilt'? (under condition 'a')"),
        ),
    ],
)
def test_patches_that_cannot_be_used(refused, extra, expected):
    assert told(refused(TOP + extra)) == [expected]


def test_a_condition_may_remove_what_only_an_option_adds(load):
    board = "{parallel_to: top, length_mm: 9, width_mm: 9}"
    document = load(
        TOP
        + f"options: {{a: {{boards: {{b: {board}}}}}}}\nconditions: {{x: {{boards: {{b: null}}}}, y: {{}}}}\n"
    )
    assert [len(case.boards) for case in document.cases(option="a")] == [0, 1]


def test_the_base_is_not_checked_in_the_place_of_conditions_that_cannot_be_used(refused):
    (problem,) = refused(TOP.replace("air_c: 25", "") + "conditions:\n  hot: 5\n")
    assert problem.field == "conditions.hot"


def test_usable_patches_are_checked_beside_the_others(refused):
    problems = refused(TOP + "conditions:\n  a: 5\n  b: {zz: 1}\n")
    assert [(each.line, each.field) for each in problems] == [(6, "conditions.a"), (7, "zz")]


def test_too_many_combinations(load, refused):
    many = "".join(f"  c{number}: {{}}\n" for number in range(MAX_COMBINATIONS))
    assert len(load(TOP + "conditions:\n" + many).cases()) == MAX_COMBINATIONS
    (problem,) = refused(TOP + "options: {a: {}}\nconditions:\n" + many)
    assert (problem.line, problem.field) == (5, "options")
    assert "2 options (counting none) times 200 conditions are more than 200" in problem.message
