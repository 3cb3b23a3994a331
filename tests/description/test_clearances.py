"""Boards that share space, and bodies that reach into boards."""

import pytest
from support.cases import board, box, case_of, errors_of, part, patched

from enclosure_check.description.clearances import shared_space
from enclosure_check.description.remarks import MOST_WARNINGS

BOARD = {"parallel_to": "front", "length_mm": 80, "width_mm": 60, "thickness_mm": 1.6}


def with_boards(**boards):
    return patched(box(), {"boards": boards})


def test_two_boards_left_in_the_middle_are_refused():
    """The slip behind it: both without `from_walls_mm`."""
    errors = errors_of(with_boards(main=BOARD, second=BOARD))
    assert list(errors) == ["boards.second"]
    assert errors["boards.second"].startswith("shares 80 x 1.6 x 60 mm with board main")


def test_boards_that_cross_are_refused_and_those_side_by_side_are_not():
    across = {**BOARD, "parallel_to": "left", "length_mm": 40}
    assert list(errors_of(with_boards(main=BOARD, across=across))) == ["boards.across"]
    apart = {**BOARD, "from_walls_mm": {"front": 5}}
    assert not errors_of(with_boards(main=BOARD, apart=apart))


def test_boards_that_touch_share_nothing():
    document = with_boards(
        one={**BOARD, "from_walls_mm": {"front": 10}},
        two={**BOARD, "from_walls_mm": {"front": 11.6}},
    )
    assert not errors_of(document)
    nearer = patched(document, {"boards": {"two": {"from_walls_mm": {"front": 11.5}}}})
    assert "0.1 x" in errors_of(nearer)["boards.two.from_walls_mm.front"]


def test_each_pair_is_told():
    errors = errors_of(with_boards(a=BOARD, b=BOARD, c=BOARD))
    assert list(errors) == ["boards.b", "boards.c"]


def test_a_body_in_the_air_may_not_reach_into_a_board():
    document = patched(
        with_boards(main=BOARD),
        {"parts": {"T1": {**part(), "place": "air", "length_mm": 30, "width_mm": 30}}},
    )
    for key in ("at_mm", "side"):
        document["parts"]["T1"].pop(key, None)
    document["parts"]["T1"]["height_mm"] = 20
    errors = errors_of(document)
    assert errors["parts.T1"].startswith("shares 30 x 1.6 x 20 mm with board main")


def reaching(count=1):
    """Parts on a board, taller than the gap to the next one."""
    near = {"from_walls_mm": {"front": 10}}
    document = with_boards(main=board(from_walls_mm={"front": 20}), next=board(**near))
    parts = {
        f"C{index}": {**part(), "place": "main", "side": "front", "height_mm": 12}
        for index in range(count)
    }
    return patched(document, {"parts": parts})


def test_a_part_that_reaches_into_another_board_is_warned_of():
    warnings = [note for note in case_of(reaching()).warnings if note.path == ("parts", "C0")]
    assert len(warnings) == 1
    assert "reaches into board next" in warnings[0].message
    assert "1.6" in warnings[0].message
    lower = patched(reaching(), {"parts": {"C0": {"height_mm": 8}}})
    assert not [note for note in case_of(lower).warnings if "reaches" in note.message]


def test_warnings_are_bounded():
    case = case_of(reaching(MOST_WARNINGS + 20))
    assert len(case.warnings) == MOST_WARNINGS


@pytest.mark.parametrize("shift", [(10, 0, 0), (0, -5, 0), (0, 0, 30)])
def test_boxes_that_touch_or_stand_apart_share_nothing(shift):
    assert shared_space((0, 0, 0), (10, 5, 30), shift, (10, 5, 30)) is None


def test_what_two_boxes_share():
    assert shared_space((0, 0, 0), (10, 5, 30), (8, -1, 10), (4, 10, 4)) == (2, 5, 4)
