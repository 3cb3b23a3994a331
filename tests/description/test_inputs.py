"""What a document states, by path: what results carry to be compared with later ones."""

import pytest
from support.mutations import FULL

from enclosure_check.description.inputs import document_inputs
from enclosure_check.description.load import load_document
from enclosure_check.description.yaml_nodes import read_yaml

SOURCE = """
title: A box
box: {width_mm: 100, on: true}
parts:
  U1.2: {at_mm: [1, 2.5], power_w: 1e-3}
  "it's": {power_w: ~}
options:
  big: {box: {width_mm: 200}, parts: {U1.2: null}}
  small: {box: {width_mm: 50}}
conditions:
  noon: {surroundings: {air_c: 40}, mode: null}
  quiet: {}
"""


def inputs(source: str, option: str | None = None):
    return document_inputs(read_yaml(source.encode(), "box.yaml"), option)


def test_every_value_by_its_path():
    assert inputs(SOURCE) == {
        "title": "A box",
        "box.width_mm": 100.0,
        "box.on": True,
        "parts.'U1.2'.at_mm.0": 1.0,
        "parts.'U1.2'.at_mm.1": 2.5,
        "parts.'U1.2'.power_w": 0.001,
        "conditions.noon.surroundings.air_c": 40.0,
        "conditions.noon.mode": None,
    }


def test_numbers_are_floats_and_truth_is_kept():
    types = {path: type(value) for path, value in inputs(SOURCE).items()}
    assert types["box.width_mm"] is float
    assert types["box.on"] is bool


def test_an_option_is_applied():
    found = inputs(SOURCE, "big")
    assert found["box.width_mm"] == 200.0
    assert not [path for path in found if path.startswith(("parts", "options"))]


def test_names_cannot_be_taken_for_paths():
    found = inputs("a.b: {c: 1}\na: {b.c: 2, b: {c: 3}}\n'': 4\n")
    assert found == {"'a.b'.c": 1.0, "a.'b.c'": 2.0, "a.b.c": 3.0, "''": 4.0}


@pytest.mark.parametrize("text", [".nan", ".inf", "-.INF"])
def test_a_number_that_is_none_is_kept_as_written(text):
    assert inputs(f"box: {{width_mm: {text}}}") == {"box.width_mm": text}


def test_of_a_whole_document():
    document = load_document(str(FULL))
    found = document.inputs()
    assert len(found) > 100
    assert all(isinstance(value, float | bool | str | None) for value in found.values())
    option = document.option_names()[0]
    assert document.inputs(option) != found
