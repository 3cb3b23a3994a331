"""The page about the document has every key once, and says of each what the models say."""

import re
import subprocess
import sys

import pytest

from enclosure_check.description import page as page_module
from enclosure_check.description.base import Strict
from enclosure_check.description.document import Document, Measured
from enclosure_check.description.page import UNITS, document_page
from enclosure_check.description.shapes import Shape, field_shape


def models(shape=None):
    """Every model of the document, found without the page's own walk."""
    shape = shape or Shape(Document)
    if shape.is_model:
        yield shape.core
        for info in shape.core.model_fields.values():
            yield from models(field_shape(info))
    elif shape.core in (dict, list):
        yield from models(shape.item)


def sections(read_page):
    """Keys, links and text of each section of the page by its path."""
    found = {}
    for part in re.split(r"^### ", read_page("docs/document.md").text, flags=re.MULTILINE)[1:]:
        head, _, body = part.partition("\n")
        found[head.strip("`")] = body.partition("\n## ")[0]
    return found


def test_the_command_writes_the_page(root):
    run = subprocess.run(
        [sys.executable, "-m", page_module.__name__],
        cwd=root,
        capture_output=True,
        check=True,
        encoding="utf-8",
    )
    assert run.stdout == document_page()
    assert run.stderr == ""


def test_every_key_is_there_with_its_meaning(read_page):
    text = read_page("docs/document.md").text
    for model in set(models()):
        for name, info in model.model_fields.items():
            meaning = info.description.rpartition(" [")[0] or info.description
            assert any(
                line.startswith(f"| `{name}` | ") and meaning in line for line in text.splitlines()
            ), f"{model.__name__}.{name}"


def test_a_section_has_the_keys_of_its_model(read_page):
    found = sections(read_page)
    assert len(found) == len(set(models()))
    by_keys = {
        frozenset(re.findall(r"^\| `(\w+)` \|", body, re.MULTILINE)): path
        for path, body in found.items()
    }
    for model in set(models()):
        inherited = {
            name
            for base in model.__bases__
            if issubclass(base, Strict)
            for name in base.model_fields
        }
        own = frozenset(set(model.model_fields) - inherited)
        assert own in by_keys, model.__name__
        if inherited:
            assert "Takes every key of [" in found[by_keys[own]]


def test_keys_not_computed_yet_are_told_with_what_to_do(read_page):
    told = set(re.findall(r"^- `(\w+)`: (.+)$", read_page("docs/document.md").text, re.MULTILINE))
    expected = {item for model in set(models()) for item in model.NOT_YET.items()}
    assert expected
    assert told >= expected


def test_required_and_defaults(read_page):
    rows = {
        (path, row[0]): row
        for path, body in sections(read_page).items()
        for row in re.findall(r"^\| `(\w+)` \| (.*) \| (.*) \| (.*?) ?\|$", body, re.MULTILINE)
    }
    assert rows["The document", "surroundings"][3] == "**required**"
    assert rows["surroundings", "altitude_m"][2:] == ("a number from -500 to 9000 m", "`0`")
    assert rows["walls.WALL.mounting", "kind"][3] == "`open_air`"
    assert rows["parts.NAME", "at_from"][3] == "`lower_left`"
    assert rows["defaults.wall", "material"][3] == ""


def test_keys_end_in_the_unit_they_are_told_to_have():
    endings = {unit: ending for ending, unit, _ in UNITS}
    used = set()
    for model in set(models()):
        for name, info in model.model_fields.items():
            unit = field_shape(info).unit
            if (model, name) == (Measured, "parts"):
                assert unit == "C"  # the one exception: keyed by the point
            elif unit:
                assert f"_{name}".endswith(endings[unit]), name
                used.add(unit)
            else:
                longest = max((end for end, _, _ in UNITS if name.endswith(end)), default=None)
                assert longest is None or info.annotation is not float, name
    assert used == set(endings)


@pytest.mark.parametrize(
    ("written", "read"),
    [
        ("`1e-3`", "a number `0.001`"),
        ("`010`", "a number `10`"),
        ('`"5"`', "text `5`"),
        ("`off`", "text `off`"),
        ("`12:30`", "text `12:30`"),
        ("`true`", "true or false `true`"),
        ("`~`", "nothing (null)"),
    ],
)
def test_what_yaml_is_read_as(written, read, read_page):
    rows = {row[0]: row[1] for row in read_page("docs/document.md").table("written", "read as")}
    assert rows[written] == read
