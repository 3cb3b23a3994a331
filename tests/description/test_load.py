"""Loading: combinations of options and conditions, what is told of them, and cross-checks."""

import errno
import hashlib
import os
import subprocess
import sys

import pytest
from support.mutations import FULL

from enclosure_check.description import combinations
from enclosure_check.description.load import load_document
from enclosure_check.description.problems import DocumentError

TOP = """\
title: A box
defaults: {wall: {material: abs, thickness_mm: 2, finish_outside: black_paint}}
box: {width_mm: 100, height_mm: 80, depth_mm: 60}
surroundings: {air_c: 25}
"""


# Cases ------------------------------------------------------------------------------------


def test_the_base_is_the_case_when_there_are_no_conditions(load):
    document = load(TOP)
    (case,) = document.cases()
    assert (case.condition, case.option, case.surroundings.air_c) == ("base", None, 25)
    assert document.condition_names() == document.option_names() == ()
    assert document.cases(conditions=["base"]) == (case,)
    assert document.digest == hashlib.sha256(TOP.encode()).hexdigest()
    assert document.file.endswith("box.yaml")


def test_option_first_then_condition(load):
    document = load(
        TOP + "options:\n  warm: {surroundings: {air_c: 30, altitude_m: 500}}\n  other: {}\n"
        "conditions:\n  hot: {surroundings: {air_c: 60}}\n  as_is: {}\n"
    )
    assert document.option_names() == ("warm", "other")
    assert document.condition_names() == ("hot", "as_is")

    def air(**given):
        return [
            (case.option, case.condition, case.surroundings.air_c, case.surroundings.altitude_m)
            for case in document.cases(**given)
        ]

    assert air() == [(None, "hot", 60, 0), (None, "as_is", 25, 0)]
    assert air(option="warm") == [("warm", "hot", 60, 500), ("warm", "as_is", 30, 500)]
    assert air(option="warm", conditions=["as_is"]) == [("warm", "as_is", 30, 500)]
    assert air(conditions=["as_is", "hot"]) == [(None, "as_is", 25, 0), (None, "hot", 60, 0)]
    assert air(conditions=[]) == []


def test_options_without_conditions(load):
    document = load(TOP + "options: {warm: {surroundings: {air_c: 30}}}\n")
    assert [case.surroundings.air_c for case in document.cases()] == [25]
    (case,) = document.cases(option="warm")
    assert (case.condition, case.option, case.surroundings.air_c) == ("base", "warm", 30)


def test_null_in_a_patch_is_back_to_the_default(load):
    text = TOP.replace("air_c: 25", "air_c: 25, altitude_m: 2000")
    document = load(text + "conditions: {low: {surroundings: {altitude_m: null}}, high: {}}\n")
    assert [case.surroundings.altitude_m for case in document.cases()] == [0, 2000]


def test_a_null_option_or_condition_is_none(load):
    document = load(TOP + "options: {old: null}\nconditions: {old: null, hot: {}}\n")
    assert (document.option_names(), document.condition_names()) == ((), ("hot",))
    assert load(TOP + "conditions: null\noptions:\n").condition_names() == ()


def test_the_base_alone_need_not_be_complete_when_there_are_conditions(load):
    text = TOP.replace("surroundings: {air_c: 25}\n", "")
    document = load(text + "conditions: {hot: {surroundings: {air_c: 60}}}\n")
    assert [case.surroundings.air_c for case in document.cases()] == [60]


def test_every_combination_is_resolved_once(load, monkeypatch):
    calls = []
    resolve = combinations.resolve

    def counted(document, condition, option, listed):
        calls.append((option, condition))
        return resolve(document, condition, option)

    monkeypatch.setattr(combinations, "resolve", counted)
    document = load(TOP + "options: {a: {}, b: {}}\nconditions: {x: {}, y: {}}\n")
    document.cases()
    document.cases(option="b")
    expected = [(option, condition) for option in (None, "a", "b") for condition in ("x", "y")]
    assert calls == expected


@pytest.mark.parametrize(
    ("given", "messages"),
    [
        (
            {"conditions": ["hto", "cold", "mars"]},
            [
                "given 'hto', which is no condition here; did you mean 'hot'?",
                "given 'mars', which is no condition here; there is 'hot', 'cold'",
            ],
        ),
        (
            {"option": "withe", "conditions": ["hto"]},
            [
                "given 'withe', which is no option here; did you mean 'white'?",
                "given 'hto', which is no condition here; did you mean 'hot'?",
            ],
        ),
        (
            {"conditions": ["base"]},
            ["given 'base', which is no condition here; there is 'hot', 'cold'"],
        ),
    ],
)
def test_unknown_names_are_told_with_the_nearest(load, given, messages):
    document = load(TOP + "options: {white: {}}\nconditions:\n  hot: {}\n  cold: {}\n")
    with pytest.raises(DocumentError) as caught:
        document.cases(**given)
    assert [each.message for each in caught.value.problems] == messages
    assert {each.line for each in caught.value.problems} <= {5, 6}


def test_an_option_where_there_is_none(load):
    with pytest.raises(DocumentError, match="given 'x', which is no option here; there is no"):
        load(TOP).cases(option="x")


# Files ------------------------------------------------------------------------------------


def test_a_file_that_is_not_there(tmp_path):
    path = str(tmp_path / "none.yaml")
    with pytest.raises(DocumentError) as caught:
        load_document(path)
    assert str(caught.value) == f"{path}:1:1: cannot be read: No such file or directory"


def test_a_directory(tmp_path):
    with pytest.raises(DocumentError, match="cannot be read: Is a directory"):
        load_document(str(tmp_path))


def test_a_name_no_file_can_have():
    with pytest.raises(DocumentError, match="cannot be read: embedded null byte") as caught:
        load_document("a\x00b")
    assert str(caught.value).isprintable()


def test_a_file_that_may_not_be_read(monkeypatch):
    def refuse(*args, **kwargs):
        raise PermissionError(errno.EACCES, os.strerror(errno.EACCES))

    monkeypatch.setattr("builtins.open", refuse)
    with pytest.raises(DocumentError, match="cannot be read: Permission denied"):
        load_document("box.yaml")


def test_nothing_slow_is_imported_when_all_is_well():
    code = (
        "import sys\n"
        "from enclosure_check.description.load import load_document\n"
        f"load_document({str(FULL)!r})\n"
        "print([name for name in ('difflib', 'scipy', 'rich') if name in sys.modules])\n"
    )
    root = FULL.parents[3]
    run = subprocess.run(
        [sys.executable, "-c", code], capture_output=True, text=True, check=True, cwd=root
    )
    assert run.stdout.strip() == "[]"


def test_the_full_document(load):
    document = load_document(str(FULL))
    assert document.condition_names() == ("noon", "night", "high_site")
    assert document.option_names() == ("white_paint", "no_heater")
    noon, night, high = document.cases()
    assert (noon.surroundings.sky_c, night.surroundings.sky_c) == (15, None)
    assert (night.mode, high.surroundings.altitude_m) == ("sleep", 3000)
    assert [len(case.parts) for case in document.cases(option="no_heater")] == [4, 4, 4]
    assert len(noon.parts) == 5
    assert len(noon.readings) == 5
