"""Parts from part lists: joined, placed, patched, folded, and told of."""

from pathlib import Path

import pytest
from support.part_lists import PLACE, POWER


def case_of(document, **which):
    return document.cases(**which)[0]


# Joining and placing ----------------------------------------------------------------------


def test_lists_are_joined_by_reference(listed):
    case = case_of(listed())
    assert list(case.parts) == ["U1", "U2"]
    first, second = case.parts["U1"], case.parts["U2"]
    assert (first.host, first.side, first.power_w) == ("main", "front", 1.5)
    assert [each.max_c for each in first.limits] == [100]
    assert (second.side, second.power_w) == ("back", 0.5)


def test_positions_are_seen_from_one_side_for_parts_on_the_other_too(listed):
    case = case_of(listed())
    board = case.boards["main"]
    for name, x, y in (("U1", 50, 40), ("U2", 100, 60)):
        right, up = case.parts[name].centre_mm[0], case.parts[name].centre_mm[2]
        assert right - board.low_mm[0] == pytest.approx(x)
        assert up - board.low_mm[2] == pytest.approx(y)


def test_positions_seen_from_the_rear(listed):
    case = case_of(listed(PLACE, POWER, ("seen_from: front", "seen_from: back")))
    board = case.boards["main"]
    for name, x in (("U1", 50), ("U2", 100)):
        from_right = board.high_mm[0] - case.parts[name].centre_mm[0]
        assert from_right == pytest.approx(x)


def test_positions_seen_from_each_own_side(listed):
    case = case_of(listed(PLACE, POWER, ("seen_from: front", "seen_from: own_side")))
    board = case.boards["main"]
    assert case.parts["U1"].centre_mm[0] - board.low_mm[0] == pytest.approx(50)
    assert board.high_mm[0] - case.parts["U2"].centre_mm[0] == pytest.approx(100)


@pytest.mark.parametrize(
    ("turn", "centre"),
    [(0, (15, 23)), (90, (85 - 13, 20 + 5)), (180, (85 - 10, 43)), (270, (18, 30))],
)
def test_origin_and_turn_of_the_board(listed, turn, centre):
    # A point of the drawing, chosen so that it stays on the board, turned by hand.
    x, y, origin = {
        0: (10, 20, (5, 3)),
        90: (5, 13, (85, 20)),
        180: (10, 20, (85, 63)),
        270: (20, 13, (5, 50)),
    }[turn]
    edit = (
        "seen_from: front",
        f"seen_from: front\n    origin_mm: {list(origin)}\n    turned_deg: {turn}",
    )
    place = f"Ref,X,Y,Rot,Side,Type\nU1,{x},{y},0,T,QFP\nU2,100,60,0,T,plain\n"
    extra = ("{reference: Name, power: P}", "{reference: Name, power: P}")
    if turn:  # the second part would leave the board
        place = place.replace("U2,100,60", f"U2,{x},{y}")
    case = case_of(listed(place, POWER, edit, extra))
    part, board = case.parts["U1"], case.boards["main"]
    found = (part.centre_mm[0] - board.low_mm[0], part.centre_mm[2] - board.low_mm[2])
    assert found == pytest.approx(centre)
    sizes = (8, 6) if turn % 180 == 0 else (6, 8)
    assert (part.size_mm[0], part.size_mm[2]) == pytest.approx(sizes)


@pytest.mark.parametrize(("unit", "factor"), [("mm", 1.0), ("mil", 0.0254), ("inch", 25.4)])
def test_units_of_lengths(listed, unit, factor):
    place = PLACE.replace("50,40", f"{50 / factor:.9f},{40 / factor:.9f}")
    place = place.replace("100,60", f"{100 / factor:.9f},{60 / factor:.9f}")
    place = place.replace("20,20", "0,0")
    case = case_of(listed(place, POWER, ("unit: mm", f"unit: {unit}")))
    assert case.parts["U1"].centre_mm[0] - case.boards["main"].low_mm[0] == pytest.approx(50)


def test_units_of_power(listed):
    power = "Name,P\nU1,1500\nU2,500 mW\n"
    case = case_of(listed(PLACE, power, ("file: power.csv", "file: power.csv\n    power_unit: mW")))
    assert [part.power_w for part in case.parts.values()] == pytest.approx([1.5, 0.5])


def test_semicolons_decimal_commas_quotes_marks_and_titles(listed):
    place = '\ufeff"Placement, rev. B"\r\nsep=;\r\n' + PLACE.replace(",", ";").replace("\n", "\r\n")
    place = place.replace("50;40", '"50,5";40,25')
    edit = ("file: place.csv", "file: place.csv\n    delimiter: semicolon\n    decimal: comma")
    case = case_of(listed(place, POWER, edit))
    part, board = case.parts["U1"], case.boards["main"]
    assert part.centre_mm[0] - board.low_mm[0] == pytest.approx(50.5)
    assert part.centre_mm[2] - board.low_mm[2] == pytest.approx(40.25)


def test_tabs_and_headings_in_other_capitals(listed):
    place = PLACE.replace(",", "\t").replace("Ref", " REF ")
    edit = ("file: place.csv", "file: place.csv\n    delimiter: tab")
    assert list(case_of(listed(place, POWER, edit)).parts) == ["U1", "U2"]


def test_power_by_mode_sizes_resistances_and_limits_from_columns(listed):
    power = "Name,Full,Low,L,W,H,Top,Base,J,C\nU1,2,0.25,9,7,2,11,12,90,80\nU2,1,,4,4,1,,,,\n"
    columns = (
        "{reference: Name, power: P}",
        "{reference: Name, power_by_mode: {full: Full, low: Low}, length: L, width: W, height: H, "
        "theta_jc_top: Top, theta_jb: Base, junction_max: J, case_max: C}\n    unit: mm",
    )
    document = listed(PLACE, power, columns, more="conditions: {a: {mode: full}, b: {mode: low}}\n")
    full, low = document.cases()
    part = full.parts["U1"]
    assert (part.power_w, low.parts["U1"].power_w) == (2, 0.25)
    assert (part.size_mm[0], part.size_mm[2], part.size_mm[1]) == (9, 7, 2)
    assert (part.theta_jc_top_k_per_w, part.theta_jb_k_per_w) == (11, 12)
    assert {limit.kind: limit.max_c for limit in part.limits} == {"junction": 90, "case": 80}


def test_prefixes_keep_boards_with_equal_references_apart(listed):
    edits = (
        ("file: place.csv", "file: place.csv\n    prefix: A_"),
        ("file: power.csv", "file: power.csv\n    prefix: A_"),
    )
    assert list(case_of(listed(PLACE, POWER, *edits)).parts) == ["A_U1", "A_U2"]


def test_rows_passed_over(listed):
    place = PLACE + "FID1,-5,-5,0,T,mark\n# a note\n,,,,,\n"
    edit = ("seen_from: front", "seen_from: front\n    leave_out: [FID*]")
    assert list(case_of(listed(place, POWER, edit)).parts) == ["U1", "U2"]


def test_boards_from_a_column(listed):
    place = PLACE.replace("Type\n", "Type,Board\n").replace("QFP\n", "QFP,P1\n")
    place = place.replace("plain\n", "plain,main\n").replace("0603\n", "0603,\n")
    edits = (("type: Type}", "type: Type, board: Board}"), ("board: main", "boards: {P1: main}"))
    assert [part.host for part in case_of(listed(place, POWER, *edits)).parts.values()] == [
        "main"
    ] * 2


# Patches ----------------------------------------------------------------------------------


def test_the_document_overrules_the_lists(listed):
    more = "parts:\n  U1: {power_w: 2.5}\n  U2: null\n  X1: {type: plain, place: main, side: front, at_mm: [150, 100]}\n"
    case = case_of(listed(PLACE, POWER, more=more))
    assert list(case.parts) == ["U1", "X1"]
    assert case.parts["U1"].power_w == 2.5


def test_options_and_conditions_patch_listed_parts(listed):
    more = (
        "options: {swap: {parts: {U1: {power_w: 3}}}}\n"
        "conditions: {a: {parts: {U2: {power_w: 4}, R1: null}}, b: {parts: {U1: null}}}\n"
    )
    document = listed(PLACE, POWER, more=more)
    powers = [
        {name: part.power_w for name, part in case.parts.items()}
        for case in document.cases(option="swap")
    ]
    assert powers == [{"U1": 3, "U2": 4}, {"U2": 0.5}]


def test_an_option_may_bring_another_list(listed, tmp_path):
    (tmp_path / "new.csv").write_text("Name,P\nU1,9\nU2,0.5\n")
    more = (
        "options: {next: {part_lists: {power: {file: new.csv}}}}\n"
        "conditions: {a: {parts: {U2: {power_w: 1}}}}\n"
    )
    document = listed(PLACE, POWER, more=more)
    assert case_of(document).parts["U1"].power_w == 1.5
    assert case_of(document, option="next").parts["U1"].power_w == 9
    files = [Path(each.file).name for each in document.part_lists("next")]
    assert files == ["place.csv", "new.csv"]
    assert document.inputs("next")["parts.U1.power_w"] == 9


def test_a_number_is_varied_with_the_lists_of_its_case(listed, tmp_path):
    (tmp_path / "new.csv").write_text("Name,P\nU1,9\nR1,0.5\n")
    document = listed(
        PLACE, POWER, more="options: {next: {part_lists: {power: {file: new.csv}}}}\n"
    )
    case = case_of(document, option="next")
    varied = document.variation(case).case_with(("parts", "R1", "power_w"), 0.7)
    assert varied is not None
    assert list(varied.parts) == list(case.parts) == ["U1"]
    assert case.boards["main"].other_power_w == pytest.approx(1.5)
    assert varied.boards["main"].other_power_w == pytest.approx(1.7)


def test_a_condition_that_removes_a_part_that_is_in_no_list(problems):
    (problem,) = problems(PLACE, POWER, more="conditions: {a: {parts: {U9: null}}}\n")
    assert problem.startswith("box.yaml:23:26: conditions.a.parts.U9: removes nothing")


# What is folded and left out --------------------------------------------------------------


def test_parts_with_nothing_to_compute_are_left_out_and_named(listed):
    case = case_of(listed(PLACE + "R2,20,30,0,T,0603\n", POWER))
    assert "listed without power or limit: left out (R1, R2)" in case.assumptions
    assert case.boards["main"].other_power_w == 1


def test_a_part_with_a_limit_is_kept_without_power(listed):
    assert "U1" in case_of(listed(PLACE, "Name,P\nU2,1\n")).parts


def test_power_without_size_goes_to_the_board(listed):
    case = case_of(listed(PLACE, POWER + "R1,0.1\n"))
    assert list(case.parts) == ["U1", "U2"]
    assert case.boards["main"].other_power_w == pytest.approx(1.1)
    line = "listed without size or place: 0.1 W in all, to the other power of board main (R1)"
    assert line in case.assumptions
    assert "types of a part list that are no part type here (0603)" in case.assumptions
    assert case.warnings == ()


def test_power_without_a_place_goes_to_the_board_of_its_list(listed):
    edit = ("file: power.csv", "file: power.csv\n    board: main")
    case = case_of(listed(PLACE, POWER + "L1,0.2\n", edit))
    assert case.boards["main"].other_power_w == pytest.approx(1.2)


def test_folded_power_follows_the_mode_and_is_never_lost(listed):
    edit = ("file: power.csv", "file: power.csv\n    board: main")
    more = "conditions: {a: {mode: full}, b: {mode: low}}\n"
    full, low = listed(PLACE, POWER + "L1,0.2\nR1,0.3\n", edit, more=more).cases()

    def all_power(case):
        boards = sum(board.other_power_w for board in case.boards.values())
        return boards + sum(part.power_w for part in case.parts.values())

    assert all_power(full) == pytest.approx(1 + 1.5 + 0.5 + 0.2 + 0.3)
    assert all_power(low) == pytest.approx(all_power(full) / 2)


def test_much_power_without_size_is_a_warning(listed):
    (note,) = case_of(listed(PLACE, POWER + "R1,3\n")).warnings
    assert note.path == ("parts", "R1")
    assert note.message.startswith("its 3 W are 50 % of the power of board 'main'")


def test_small_parts_are_folded_below_a_power(listed):
    edit = ("seen_from: front", "seen_from: front\n    fold_below_w: 0.6")
    case = case_of(listed(PLACE, POWER, edit))
    assert list(case.parts) == ["U1"]
    assert case.boards["main"].other_power_w == pytest.approx(1.5)
    line = "listed below `fold_below_w`: 0.5 W in all, to the other power of board main (U2)"
    assert line in case.assumptions


def test_a_limit_keeps_a_small_part(listed):
    edit = ("seen_from: front", "seen_from: front\n    fold_below_w: 50")
    assert list(case_of(listed(PLACE, POWER, edit)).parts) == ["U1"]


def test_a_limit_without_a_size_is_a_warning(listed):
    power = "Name,P,J\nU1,1.5,\nU2,0.5,\nR1,0.01,90\n"
    edit = ("{reference: Name, power: P}", "{reference: Name, power: P, junction_max: J}")
    (note,) = case_of(listed(PLACE, power, edit)).warnings
    assert (note.path, note.message) == (
        ("parts", "R1"),
        "has a limit but no size or place, so it is not judged",
    )


# What is told of the lists ----------------------------------------------------------------


def test_positions_of_parts_tell_their_file(listed, tmp_path):
    document = listed(PLACE, POWER, more="parts: {U1: {power_w: 1}}\n")
    positions = case_of(document).positions
    assert positions.parts == {"U1": (2, 1), "U2": (3, 1)}
    assert positions.files == {"U1": f"{tmp_path}/place.csv", "U2": f"{tmp_path}/place.csv"}
    assert document.place(("parts", "U2", "power_w")) == (f"{tmp_path}/power.csv", 3, 1) or (
        document.place(("parts", "U2", "power_w")) == (f"{tmp_path}/power.csv", 3, 4)
    )
    assert document.place(("title",)) == (f"{tmp_path}/box.yaml", 1, 1)


def test_lists_read_are_told_with_their_digest(listed):
    import hashlib

    files = listed().part_lists()
    assert [(each.name, each.parts) for each in files] == [("placement", 3), ("power", 2)]
    assert files[1].digest == hashlib.sha256(POWER.encode()).hexdigest()


def test_too_many_rows(problems):
    place = "Ref,X,Y,Rot,Side,Type\n" + "".join(f"R{i},1,1,0,T,x\n" for i in range(20_001))
    assert problems(place, POWER)[0].startswith("place.csv:20002:1: more rows")
