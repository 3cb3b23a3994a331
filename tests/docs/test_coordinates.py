"""The page and the drawing of the coordinate convention say what the code does."""

import re
import xml.etree.ElementTree as ET

import pytest

from enclosure_check.description.box import Tilt
from enclosure_check.description.frames import AXIS, OPPOSITE, SIGN, face_frame, wall_pair
from enclosure_check.description.load import load_document
from enclosure_check.description.names import WALL_NAMES
from enclosure_check.description.resolve_box import up_vector

PAGE, DRAWING = "docs/coordinates.md", "docs/coordinates.svg"
SVG = "{http://www.w3.org/2000/svg}"


def face(side):
    """What the convention says of the face that looks at ``side``: right, up, edges."""
    frame = face_frame(AXIS[side], SIGN[side])
    left, right = wall_pair(frame.right_axis)[:: frame.right_sign]
    return [
        f"{'+' if frame.right_sign > 0 else '-'}{'xyz'[frame.right_axis]}",
        f"+{'xyz'[frame.up_axis]}",
        left,
        right,
    ]


@pytest.fixture(scope="module")
def case(read_page, tmp_path_factory):
    """The worked example."""
    (block,) = read_page(PAGE).blocks("yaml")
    path = tmp_path_factory.mktemp("example") / "example.yaml"
    path.write_text(block, encoding="utf-8")
    return load_document(str(path)).cases()[0]


def test_table_of_faces(read_page):
    rows = read_page(PAGE).table("inside of the wall", "side of a board")
    assert {row[0] for row in rows} == set(WALL_NAMES)
    for wall, side, *told in rows:
        assert side == OPPOSITE[wall]
        assert told == face(side), wall


def test_table_of_tilts(read_page):
    rows = read_page(PAGE).table("lean", "roll")
    assert len(rows) > 3
    for lean, roll, *told, looks_up in rows:
        up = up_vector(Tilt(lean_back_deg=float(lean), roll_right_deg=float(roll)))
        assert [f"{value + 0.0:.3f}".replace("-0.000", "0.000") for value in up] == told
        assert looks_up == max(WALL_NAMES, key=lambda wall: SIGN[wall] * up[AXIS[wall]])


def test_worked_example(read_page, case):
    rows = read_page(PAGE).table("name", "x from", "x to")
    bodies = {**case.boards, **case.parts}
    assert [row[0] for row in rows] == list(bodies)
    for name, *told in rows:
        body = bodies[name]
        ends = [
            value
            for low, size in zip(body.low_mm, body.size_mm, strict=True)
            for value in (low, low + size)
        ]
        assert [float(cell) for cell in told[:6]] == pytest.approx(ends)
        centre = [low + size / 2 for low, size in zip(body.low_mm, body.size_mm, strict=True)]
        assert [float(cell) for cell in told[6].split(", ")] == pytest.approx(centre)


def groups(root):
    """The drawing's panels: their texts by class, their rectangles by class."""
    for group in ET.parse(root / DRAWING).getroot().findall(f"{SVG}g"):
        texts, shapes = {}, {}
        for text in group.iter(f"{SVG}text"):
            texts.setdefault(text.get("class").split()[0], []).append("".join(text.itertext()))
        for shape in group.iter(f"{SVG}rect"):
            numbers = [float(shape.get(key, 0)) for key in ("x", "y", "width", "height")]
            shapes.setdefault(shape.get("class"), []).append(numbers)
        yield texts, shapes


def test_walls_in_the_drawing(root, case):
    drawn = {
        texts["name"][0]: (texts, shapes)
        for texts, shapes in groups(root)
        if texts.get("name", [""])[0] in WALL_NAMES
    }
    assert set(drawn) == set(WALL_NAMES)
    for wall, (texts, shapes) in drawn.items():
        right, up, left_edge, right_edge = face(OPPOSITE[wall])
        assert [text.replace("\N{MINUS SIGN}", "-") for text in texts["axisname"]] == [right, up]
        up_axis = "xyz".index(up[1])
        bottom_edge, top_edge = wall_pair(up_axis)
        assert texts["near"] == [top_edge, bottom_edge, left_edge, right_edge]
        ((_, _, width, height),) = shapes["wall"]
        assert width == case.inside_mm["xyz".index(right[1])]
        assert height == case.inside_mm[up_axis]


def test_parts_on_walls_in_the_drawing(root, case):
    found = 0
    for texts, shapes in groups(root):
        for name, (x, y, width, height) in zip(
            texts.get("small", []), shapes.get("part", []), strict=False
        ):
            part = case.parts.get(name)
            if part is None or part.place != "wall":
                continue
            frame = face_frame(AXIS[part.side], SIGN[part.side])
            ((_, _, _, wall_height),) = shapes["wall"]
            assert frame.right_sign == 1  # else x would count from the other edge
            assert x == pytest.approx(part.low_mm[frame.right_axis])
            assert width == pytest.approx(part.size_mm[frame.right_axis])
            assert wall_height - y == pytest.approx(
                part.low_mm[frame.up_axis] + part.size_mm[frame.up_axis]
            )
            assert height == pytest.approx(part.size_mm[frame.up_axis])
            found += 1
    assert found == 2


def test_both_sides_of_the_board_in_the_drawing(root, case):
    board, scale, found = case.boards["main"], 2.0, 0
    for texts, shapes in groups(root):
        if "board" not in shapes:
            continue
        side = texts["name"][0].removeprefix("side: ")
        front = side == "front"
        ((_, _, width, height),) = shapes["board"]
        assert (width, height) == (scale * board.size_mm[0], scale * board.size_mm[2])
        own, behind = ("U1", "U2") if front else ("U2", "U1")
        assert case.parts[own].side == side
        for name, kind in ((own, "part"), (behind, "ghost")):
            part, ((x, y, wide, high),) = case.parts[name], shapes[kind]
            from_left = part.low_mm[0] - board.low_mm[0]
            if not front:
                from_left = board.size_mm[0] - from_left - part.size_mm[0]
            assert (x, wide) == (scale * from_left, scale * part.size_mm[0])
            assert height - y - high == scale * (part.low_mm[2] - board.low_mm[2])
        assert texts["dimtext"] == ["40", "30"]
        found += 1
    assert found == 2


def test_angles_in_the_drawing(root):
    text = (root / DRAWING).read_text(encoding="utf-8")
    for key in Tilt.model_fields:
        (angle,) = re.findall(rf"{key}: (\d+)", text)
        assert f'<g transform="rotate({angle})">' in text
