"""Where parts and walls stand, as findings point there."""

import yaml
from support.reports import SMALL

from enclosure_check.description.load import load_document

TEXT = """\
title: Small box
box:
  width_mm: 100
  height_mm: 120
  depth_mm: 60
defaults:
  wall: {material: pc_abs, thickness_mm: 2, finish_outside: white_plastic}
walls:
  top: {thickness_mm: 3}
parts:
  X1: &body {place: air, length_mm: 20, width_mm: 20, height_mm: 10}
  X2: *body
surroundings: {air_c: 25}
conditions:
  bare: {}
  more:
    parts:
      X1: {power_w: 2}
      X3: {place: air, length_mm: 20, width_mm: 20, height_mm: 10}
    walls: {left: {thickness_mm: 4}}
options:
  swap: {parts: {X2: {power_w: 1}, X4: {place: air, length_mm: 9, width_mm: 9, height_mm: 9}}}
"""


def cases(tmp_path, text: str = TEXT, option: str | None = None):
    path = tmp_path / "box.yaml"
    path.write_text(text, "utf-8")
    return {
        case.condition: case.positions for case in load_document(str(path)).cases(option=option)
    }


def line(key: str) -> int:
    return next(n for n, each in enumerate(TEXT.splitlines(), 1) if each.strip().startswith(key))


def test_a_part_stands_at_its_key(tmp_path):
    found = cases(tmp_path)
    assert found["bare"].parts == {"X1": (line("X1"), 3), "X2": (line("X2"), 3)}


def test_a_patch_that_changes_a_part_does_not_move_it_and_one_that_adds_it_does(tmp_path):
    found = cases(tmp_path)["more"].parts
    assert found["X1"] == (line("X1"), 3)
    assert found["X3"] == (line("X3"), 7)
    swapped = cases(tmp_path, option="swap")["bare"].parts
    assert swapped["X2"] == (line("X2"), 3)
    assert swapped["X4"] == (line("swap"), TEXT.splitlines()[line("swap") - 1].index("X4") + 1)


def test_a_wall_stands_at_its_key_else_at_the_defaults(tmp_path):
    found = cases(tmp_path)
    assert found["bare"].walls["top"] == (line("top"), 3)
    assert found["bare"].walls["left"] == (line("wall:"), 3)
    assert found["more"].walls["left"] == (line("walls: {left"), 13)


def test_a_wall_without_either_stands_at_the_box(tmp_path):
    document = {key: value for key, value in SMALL.items() if key not in ("defaults", "walls")}
    document["walls"] = {
        name: {"material": "pc_abs", "thickness_mm": 2, "finish_outside": "white_plastic"}
        for name in ("left", "right", "front", "back", "bottom", "top")
    }
    document["conditions"] = {"moved": {"walls": {"top": None}, "defaults": SMALL["defaults"]}}
    text = yaml.safe_dump(document, sort_keys=False)
    row = text.splitlines().index("    defaults:") + 1
    found = cases(tmp_path, text)["moved"].walls
    assert found["top"] == (row + 1, 7)
