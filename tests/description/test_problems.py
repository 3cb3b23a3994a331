"""How problems are worded, ordered and made safe to print."""

import pytest

from enclosure_check.description.problems import (
    DocumentError,
    FieldErrors,
    FieldProblem,
    Problem,
    dotted,
    nearest,
    nearest_name,
    quoted,
)


def test_a_problem_is_one_line_with_its_place():
    assert str(Problem("box.yaml", 3, 7, "box.width_mm", "missing")) == (
        "box.yaml:3:7: box.width_mm: missing"
    )
    assert str(Problem("box.yaml", 1, 1, "", "empty")) == "box.yaml:1:1: empty"


def test_nothing_that_cannot_be_printed_is_printed():
    problem = Problem("a\x1b[31m\udcff.yaml", 1, 1, "a\nb", "x\x07y\u2028z\ud800")
    assert str(problem) == "a\\x1b[31m\\udcff.yaml:1:1: a\\nb: x\\x07y\\u2028z\\ud800"
    assert problem.message == "x\\x07y\\u2028z\\ud800"
    assert problem.file == "a\x1b[31m\udcff.yaml"


def test_an_error_holds_each_problem_once_and_in_order():
    late, early = Problem("a", 10, 1, "", "x"), Problem("a", 9, 30, "", "x")
    error = DocumentError([late, early, late])
    assert error.problems == (early, late)
    assert str(error) == "a:9:30: x\na:10:1: x"


def test_field_errors_keep_their_order():
    problems = [FieldProblem(("b", 1), "x"), FieldProblem(("a",), "y")]
    error = FieldErrors(problems)
    assert error.problems == problems
    assert str(error) == "b.1: x; a: y"


@pytest.mark.parametrize(
    ("path", "text"),
    [
        ((), ""),
        (("parts", "U1", "at_mm", 0), "parts.U1.at_mm.0"),
        (("parts", "U 1"), "parts.U 1"),
        (("parts", ""), "parts.''"),
        (("parts", "a\tb"), "parts.'a\\tb'"),
        (("parts", "x" * 61, "on"), f"parts.'{'x' * 60}'....on"),
    ],
)
def test_dotted_paths(path, text):
    assert dotted(path) == text


def test_quotes_are_escaped_and_cut():
    assert quoted("it's\n") == '"it\'s\\n"'
    assert quoted("x" * 60) == f"'{'x' * 60}'"
    assert quoted("x" * 61) == f"'{'x' * 60}'..."


@pytest.mark.parametrize(
    ("word", "name"),
    [("widht_mm", "width_mm"), ("WIDTH_MM", "width_mm"), ("heigth", "height_mm"), ("colour", None)],
)
def test_nearest_spelling(word, name):
    assert nearest_name(word, ["width_mm", "height_mm", "depth_mm"]) == name


def test_nearest_ends_a_sentence():
    assert nearest("lft", ["left", "right"]) == "; did you mean 'left'?"
    assert nearest("zzz", ["left", "right"]) == ""
    assert nearest("zzz", []) == ""


def test_nearest_among_very_many():
    names = [f"R{number}" for number in range(5000)] + ["microcontroller"]
    assert nearest_name("microcontroler", names) == "microcontroller"
