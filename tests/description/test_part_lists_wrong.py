"""Part lists that are refused: what is wrong, at its place in the document or the list."""

import pytest
from support.part_lists import PLACE, POWER


@pytest.mark.parametrize(
    ("place", "power", "problem"),
    [
        (
            PLACE.replace("50,40", "50,4O"),
            POWER,
            "place.csv:2:7: U1.Y: given '4O', allowed: a number in mm",
        ),
        (
            PLACE.replace("50,40", "n/a,40"),
            POWER,
            "place.csv:2:4: U1.X: given 'n/a', allowed: a number like 12.5",
        ),
        (
            PLACE.replace("50,40", '"50,5",40'),
            POWER,
            "place.csv:2:4: U1.X: given '50,5', allowed: a number like 12.5; is `decimal: comma` "
            "meant?",
        ),
        (
            PLACE.replace("50,40", "50 mil,40"),
            POWER,
            "place.csv:2:4: U1.X: given '50 mil', allowed: a number in mm",
        ),
        (
            PLACE.replace("50,40", "1e999,40"),
            POWER,
            "place.csv:2:4: U1.X: given '1e999', allowed: a finite number",
        ),
        (
            PLACE.replace("40,0,T", "40,0,F"),
            POWER,
            "place.csv:2:12: U1.Side: given 'F', allowed: 'T', 'B'",
        ),
        (PLACE + "U1,5,5,0,T,QFP\n", POWER, "place.csv:5:1: U1: listed twice, first in line 2"),
        (
            PLACE + "U3,5\n",
            POWER,
            "place.csv:5:5: 'U3': 2 fields, the headings need 6",
        ),
        (
            PLACE + ",5,5,0,T,QFP\n",
            POWER,
            "place.csv:5:1: Ref: missing; every row needs a reference",
        ),
        (
            PLACE.replace("Side", "Sides"),
            POWER,
            "place.csv:1:1: no column has the heading 'Side'; did you mean 'Sides'?",
        ),
        (
            PLACE.replace(",", ";"),
            POWER,
            "place.csv:1:1: no row has the headings 'Ref', 'X', 'Y', 'Rot', 'Side', 'Type'; is "
            "`delimiter: semicolon` meant?",
        ),
        (
            "",
            POWER,
            "place.csv:1:1: no row has the headings 'Ref', 'X', 'Y', 'Rot', 'Side', 'Type'",
        ),
        (
            PLACE.replace("Rot", "X"),
            POWER.replace("P", "P"),
            "place.csv:1:1: no column has the heading 'Rot'",
        ),
        (
            PLACE.replace("Type\n", "Type,X\n").replace("QFP\n", "QFP,1\n"),
            POWER,
            "place.csv:1:23: X: heading given twice",
        ),
        (PLACE + '"U5\n', POWER, "place.csv:5:1: this quote is not closed"),
        (
            PLACE,
            POWER + "U9,1\n",
            "power.csv:4:1: parts.U9.place: missing; needs text of 1 to 80 characters",
        ),
        (
            PLACE.replace("50,40", "50,128"),
            POWER,
            "place.csv:2:4: parts.U1.at_mm: reaches 1 mm over the edge of 'main'",
        ),
        (
            PLACE,
            POWER.replace("1.5", "-1.5"),
            "power.csv:2:4: parts.U1.power_w: given -1.5, allowed: a number from 0 to 100000 W",
        ),
        (
            PLACE.replace("50,40", "99999,40"),
            POWER,
            "place.csv:2:4: parts.U1.at_mm.0: given 99999, allowed: a number from -10000 to 10000 mm",
        ),
    ],
)
def test_wrong_lists(problems, place, power, problem):
    assert problems(place, power) == [problem]


@pytest.mark.parametrize(
    ("old", "new", "problem"),
    [
        ("    unit: mm\n", "", "12:3: part_lists.placement.unit: missing; needs mm, mil or inch, as there are columns of lengths"),
        ("    seen_from: front\n", "", "12:3: part_lists.placement.seen_from: missing; needs the side of the board that x and y are drawn from, or own_side"),
        (", y: Y", "", "15:31: part_lists.placement.columns.x: given without a column for y"),
        (", type: Type", "", "18:5: part_lists.placement.types: given without a column for type"),
        (", side: Side", "", "17:5: part_lists.placement.sides: given without a column for side"),
        ("{QFP: chip}", "{QFP: chap}", "18:18: part_lists.placement.types.QFP: given 'chap', which is no part type; did you mean 'chip'?"),
        ("board: main", "board: mian", "16:12: part_lists.placement.board: given 'mian', which is no board; did you mean 'main'?"),
        ("file: place.csv", "file: ../place.csv", "13:5: part_lists.placement.file: given '../place.csv'; it leads out of the document's folder; if you trust the document, allow the folder with --allow-folder"),
        ("file: place.csv", "file: none.csv", "13:5: part_lists.placement.file: given 'none.csv'; cannot be read: No such file or directory"),
        ("unit: mm", "unit: cm", "14:11: part_lists.placement.unit: given 'cm' (text), allowed: mm, mil or inch"),
        ("unit: mm", "units: mm", "14:5: part_lists.placement.units: unknown key 'units'; did you mean 'unit'?"),
        ("power: P}", "power_by_mode: {ful: P}}", "22:53: part_lists.power.columns.power_by_mode.ful: given 'ful', which is no mode; did you mean 'full'?"),
    ],
)  # fmt: skip
def test_wrong_descriptions_of_lists(problems, old, new, problem):
    assert problems(PLACE, POWER, (old, new)) == [f"box.yaml:{problem}"]


def test_a_wrong_list_hides_neither_another_nor_the_document(problems):
    found = problems(
        PLACE.replace("50", "x"), POWER.replace("1.5", "y"), ("air_c: 30", "air_c: 300"),
        more="parts: {U1: {power_w: 3}}\n",
    )  # fmt: skip
    assert [each.split(": ")[0] for each in found] == [
        "box.yaml:10:23",
        "place.csv:2:4",
        "power.csv:2:4",
    ]


def test_the_same_said_by_two_lists(problems):
    found = problems(
        PLACE.replace("Type\n", "Type,P\n").replace("QFP\n", "QFP,1\n").replace("n\n", "n,\n").replace("3\n", "3,\n"),
        POWER,
        ("type: Type}", "type: Type, power: P}"),
    )  # fmt: skip
    assert [each.replace(each[each.index("in /") : each.rindex("place")], "in ") if "in /" in each else each for each in found] == [
        "power.csv:2:4: U1: `power_w` is given before, in place.csv, line 2"
    ]  # fmt: skip


def test_two_boards_for_one_part(problems):
    (problem,) = problems(
        PLACE, "Name,P\nU1,1\n", ("file: power.csv", "file: power.csv\n    board: other")
    )
    assert "`place` is given before" in problem


def test_problems_of_a_condition_lie_in_the_list(problems):
    more = "conditions: {a: {boards: {main: {length_mm: 60}}}}\n"
    found = problems(PLACE, POWER, more=more)
    assert any(
        each.startswith("place.csv:3:4: parts.U2.at_mm: reaches") and "under condition 'a'" in each
        for each in found
    ), found


def test_a_type_of_the_document_must_exist(problems):
    (problem,) = problems(PLACE, POWER, more="parts: {U1: {type: chap}}\n")
    assert problem.startswith("box.yaml:23:20: parts.U1.type: given 'chap', which is no part type")


def test_a_reading_of_a_part_that_is_not_computed(problems):
    (problem,) = problems(PLACE, POWER, more="measured: {run: {parts: {R1: {case: 50}}}}\n")
    assert "which is listed but not computed by itself" in problem
