"""Reading YAML into nodes: values, positions, and everything that is refused."""

import math

import pytest
import yaml
from support.hanging import ends

from enclosure_check.description import yaml_nodes
from enclosure_check.description.problems import DocumentError, Problem
from enclosure_check.description.yaml_nodes import (
    MappingNode,
    ScalarNode,
    locate,
    plain_value,
    read_yaml,
    to_data,
)

LOADERS = [yaml.SafeLoader]
if hasattr(yaml, "CSafeLoader"):
    LOADERS.append(yaml.CSafeLoader)


@pytest.fixture(params=LOADERS, ids=lambda loader: loader.__name__, autouse=True)
def loader(request, monkeypatch):
    """Every test runs with the parser written in Python and with the one in C."""
    monkeypatch.setattr(yaml_nodes, "_LOADER", request.param)


def read(text: str) -> MappingNode:
    return read_yaml(text.encode(), "box.yaml")


def refused(data: str | bytes) -> list[Problem]:
    with pytest.raises(DocumentError) as caught:
        read_yaml(data.encode() if isinstance(data, str) else data, "box.yaml")
    return list(caught.value.problems)


def only(data: str | bytes) -> Problem:
    (problem,) = refused(data)
    return problem


# Values -----------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("text", "value"),
    [
        ("5", 5),
        ("-3", -3),
        ("+3", 3),
        ("010", 10),
        ("100000", 100000),
        ("123456789012345", 123456789012345),
        ("1234567890123456", 1234567890123456.0),
        ("0", 0),
        ("1e-3", 1e-3),
        ("1E3", 1000.0),
        ("2.5e+2", 250.0),
        (".5", 0.5),
        ("5.", 5.0),
        ("-.5", -0.5),
        ("1.50", 1.5),
        (".inf", math.inf),
        ("-.inf", -math.inf),
        ("+.Inf", math.inf),
        ("1e999", math.inf),
        ("true", True),
        ("false", False),
        ("null", None),
        ("~", None),
        ("", None),
    ],
)
def test_unquoted_scalars_with_a_meaning(text, value):
    node = read(f"key: {text}\n").entries["key"]
    assert isinstance(node, ScalarNode)
    assert node.value == value
    assert type(node.value) is type(value)
    assert node.text == text


@pytest.mark.parametrize("text", [".nan", ".NaN", ".NAN"])
def test_not_a_number(text):
    value = to_data(read(f"key: {text}\n"))["key"]
    assert math.isnan(value)


@pytest.mark.parametrize(
    "text",
    [
        *("on", "off", "yes", "no", "On", "NO", "True", "False", "TRUE", "Null", "NULL"),
        *("12:30", "190:20:30", "0x1F", "0o17", "1_000", "2024-06-11", "2024-06-11T10:00:00Z"),
        *("1e", "e3", ".", "-", "+", "1.2.3", "--5", "1 000", "1,5", "5 mm", "inf", "nan", "٣"),
    ],
)
def test_unquoted_scalars_that_stay_text(text):
    assert plain_value(text) == text
    if text != "-":
        assert to_data(read(f"key: {text}\n"))["key"] == text


@pytest.mark.parametrize("text", ["5", "true", "null", "~", "", "1e-3"])
def test_quoted_scalars_are_text(text):
    assert to_data(read(f"a: '{text}'\nb: \"{text}\"\n")) == {"a": text, "b": text}


def test_block_scalars_are_text():
    assert to_data(read("a: |\n  5\nb: >-\n  true\n  x\n")) == {"a": "5\n", "b": "true x"}


def test_a_long_row_of_digits_is_a_number():
    data = to_data(read("a: " + "1" * 20 + "\nb: " + "9" * 300_000 + "\nc: 0." + "3" * 300_000))
    assert data["a"] == float("1" * 20)
    assert data["b"] == math.inf
    assert data["c"] == 1 / 3


@pytest.mark.parametrize("tail", ["x", ".x", "e", "e+"])
def test_a_megabyte_that_is_nearly_a_number_is_read_at_once(tail):
    with ends():
        assert isinstance(plain_value("1" * 1_000_000 + tail), str)


@pytest.mark.parametrize("key", ["40", "12:30", "true", "1e-3", "on", "~", "-40", "85.5", "null"])
def test_keys_keep_their_text(key):
    assert list(read(f"{key}: 1\n").entries) == [key]
    assert list(read(f"'{key}': 1\n").entries) == [key]


def test_null_entries_are_left_out_of_data_and_null_items_are_kept():
    node = read("a: null\nb: {c: ~, d: 1}\ne: [1, null]\nf:\n")
    assert to_data(node) == {"b": {"d": 1}, "e": [1, None]}
    assert list(node.entries) == ["a", "b", "e", "f"]


def test_aliases_stand_for_what_they_name():
    node = read("a: &one {x: 1}\nb: *one\nc: [&two 2, *two]\n? *two\n: d\n")
    assert to_data(node) == {"a": {"x": 1}, "b": {"x": 1}, "c": [2, 2], "2": "d"}


def test_byte_order_mark_of_utf8_is_accepted():
    node = read_yaml(b"\xef\xbb\xbfa: 1\n", "box.yaml")
    assert to_data(node) == {"a": 1}
    assert node.marks["a"] == (1, 1)


def test_windows_line_ends():
    node = read("a: 1\r\nb:\r\n  c: 2\r\n")
    assert to_data(node) == {"a": 1, "b": {"c": 2}}
    assert locate(node, ("b", "c")) == (3, 6)


# Positions --------------------------------------------------------------------------------

PLACES = """\
# a comment
title: 'größe'   # é
box:
  width_mm: 100
  "tilt": {lean: 5, roll: 6}
list:
  - 7
  - {x: 8}
größe: 9
"""


@pytest.mark.parametrize(
    ("path", "value_at", "key_at"),
    [
        (("title",), (2, 8), (2, 1)),
        (("box",), (3, 1), (3, 1)),
        (("box", "width_mm"), (4, 13), (4, 3)),
        (("box", "tilt"), (5, 3), (5, 3)),
        (("box", "tilt", "roll"), (5, 27), (5, 21)),
        (("list", 0), (7, 5), (7, 5)),
        (("list", 1, "x"), (8, 9), (8, 6)),
        (("größe",), (9, 8), (9, 1)),
        # What does not exist is at its nearest ancestor.
        ((), (2, 1), (2, 1)),
        (("height_mm",), (2, 1), (2, 1)),
        (("box", "height_mm"), (3, 1), (3, 1)),
        (("box", "tilt", "yaw", "more"), (5, 3), (5, 3)),
        (("list", 5), (6, 1), (6, 1)),
        (("list", "x"), (6, 1), (6, 1)),
        (("title", "x"), (2, 1), (2, 1)),
    ],
)
def test_positions_count_from_one(path, value_at, key_at):
    node = read(PLACES)
    assert locate(node, path) == value_at
    assert locate(node, path, at_key=True) == key_at


def test_a_removed_key_is_where_it_was_removed():
    node = MappingNode({}, {}, 1, 1, {"width_mm": (40, 5)})
    assert locate(node, ("width_mm",)) == (40, 5)
    assert locate(node, ("width_mm", "x")) == (40, 5)


# Refusals ---------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("text", "line", "column", "field", "message"),
    [
        ("a: 1\nb: 2\na: 3\n", 3, 1, "a", "given twice, first in line 1, again in line 3"),
        ("x: {a: 1, a: 1}\n", 1, 11, "x.a", "given twice, first in line 1, again in line 1"),
        ("40: 1\n'40': 2\n", 2, 1, "40", "given twice, first in line 1, again in line 2"),
        ("a: !!str 5\n", 1, 4, "a", "tag '!!str' is not allowed"),
        ("a: !!python/name:os.system\n", 1, 4, "a", "tag '!!python/name:os.system' is not"),
        ("a: !mine {b: 1}\n", 1, 4, "a", "tag '!mine' is not allowed"),
        ("a: [1, ! 2]\n", 1, 8, "a.1", "tag '!' is not allowed"),
        ("!!map\na: 1\n", 1, 1, "", "tag '!!map' is not allowed"),
        ("!x a: 1\n", 1, 1, "", "tag '!x' is not allowed"),
        ("a: {<<: {b: 1}}\n", 1, 5, "a.<<", "merge keys are not allowed"),
        ("a: *b\n", 1, 4, "a", "alias 'b' stands for nothing"),
        ("a: &b [1, *b]\n", 1, 11, "a.1", "alias 'b' stands for what it is itself part of"),
        ("a: &b {c: *b}\n", 1, 11, "a.c", "alias 'b' stands for what it is itself part of"),
        ("? [a]\n: 1\n", 1, 3, "", "given a list as a key"),
        ("x:\n  ? {a: 1}\n  : 1\n", 2, 5, "x", "given a mapping as a key"),
        ("a: &m {b: 1}\n*m : 2\n", 2, 1, "", "given a mapping or list as a key"),
        ("", 1, 1, "", "the document is empty"),
        ("# nothing\n", 1, 1, "", "the document is empty"),
        ("---\n...\n", 1, 1, "", "the document is empty"),
        ("- 1\n", 1, 1, "", "given a list, allowed: a mapping"),
        ("text\n", 1, 1, "", "given a single value, allowed: a mapping"),
        ("a: 1\n---\nb: 2\n", 2, 1, "", "a second document starts here"),
        ("a: 'b\n", 2, 1, "", "not valid YAML: while scanning a quoted scalar"),
        ("a: b: c\n", 1, 5, "", "not valid YAML: mapping values are not allowed"),
        ("a:\n\tb: 1\n", 2, 1, "", "not valid YAML: while scanning for the next token"),
        ("a: \x07\n", 1, 4, "", "character U+0007 is not allowed"),
        ("é: 1\nb: 'x\x85'\n", 2, 6, "", "character U+0085 is not allowed"),
        ("a: 1\u2028b: 2\n", 1, 5, "", "character U+2028 is not allowed"),
        ("a: x\ufeff\n", 1, 5, "", "character U+FEFF is not allowed"),
        ('a: "\\e[31m"\n', 1, 4, "a", "character U+001B is not allowed in a text"),
        ('a: "\\0"\n', 1, 4, "a", "character U+0000 is not allowed in a text"),
        (
            "\u00a0\u00a0a: 1\n",
            1,
            1,
            "'\\xa0\\xa0a'",
            "this key has characters that cannot be seen",
        ),
        ('"a\\nb": 1\n', 1, 1, "'a\\nb'", "this key has characters that cannot be seen"),
    ],
)
def test_refused_at_its_place(text, line, column, field, message):
    problem = only(text)
    assert (problem.line, problem.column, problem.field) == (line, column, field)
    assert message in problem.message


def test_a_surrogate_from_an_escape_is_refused_on_one_printable_line():
    problem = only('a: "\\ud800"\n')
    assert problem.line == 1
    assert str(problem).isprintable()


@pytest.mark.parametrize("escape", ["\\UFFFFFFFF", "\\U00110000"])
def test_an_escape_beyond_unicode_is_refused(escape):
    assert "not valid YAML" in only(f'a: "{escape}"\n').message


@pytest.mark.parametrize(
    ("data", "line", "column", "message"),
    [
        (b"a: 1\nb: \xe9\n", 2, 4, "not UTF-8: byte 0xE9 at offset 8 of the file"),
        ("é: 1\r\nß: ".encode() + b"\xff", 2, 4, "not UTF-8: byte 0xFF at offset 11 of the file"),
        (b"\xef\xbb\xbfa: \xff", 1, 4, "not UTF-8: byte 0xFF at offset 6 of the file"),
        ("a: 1".encode("utf-16"), 1, 1, "encoded in UTF-16; save the file in UTF-8"),
        ("\ufeffa: 1".encode("utf-16-be"), 1, 1, "encoded in UTF-16; save the file in UTF-8"),
        ("a: 1".encode("utf-32"), 1, 1, "encoded in UTF-32; save the file in UTF-8"),
        (b"a: " + b"1" * (1 << 20), 1, 1, "larger than 1048576 bytes (1 MiB)"),
    ],
)
def test_bytes_that_are_no_text(data, line, column, message):
    assert only(data) == Problem("box.yaml", line, column, "", message)


def test_a_file_of_exactly_one_mebibyte_is_read():
    data = b"a: 1\n#".ljust(1 << 20, b"x")
    assert to_data(read_yaml(data, "box.yaml")) == {"a": 1}


def test_everything_wrong_is_told_at_once():
    problems = refused("a: 1\na: !x 2\nb: *c\nd: {<<: 1}\n? [e]\n: 1\nf: 'g\n")
    assert [(each.line, each.message.partition(" ")[0]) for each in problems] == [
        (2, "given"),
        (2, "tag"),
        (3, "alias"),
        (4, "merge"),
        (5, "given"),
        (8, "not"),
    ]


def test_characters_not_allowed_do_not_hide_other_problems():
    problems = refused("a: 1\na: \x01\n")
    assert [(each.line, each.column) for each in problems] == [(2, 1), (2, 4)]


def test_many_characters_not_allowed_are_counted():
    problems = refused("a: " + "\x00" * 30)
    assert len(problems) == 6
    assert "and 25 more such characters" in {each.message for each in problems}


def test_many_problems_end_reading():
    problems = refused("a: 1\n" * 5000)
    assert len(problems) == yaml_nodes.MAX_PROBLEMS + 1
    assert "too many problems; stopped here" in {each.message for each in problems}


# Depth and aliases ------------------------------------------------------------------------


def nested(depth: int) -> str:
    """A document nested ``depth`` deep, its top mapping counted."""
    return "a: " + "[" * (depth - 1) + "]" * (depth - 1) + "\n"


def test_depth_up_to_the_limit():
    read(nested(32))
    assert only(nested(33)).message == "nested more than 32 deep"


def test_deep_nesting_does_not_hide_other_problems():
    problems = refused(nested(50) + nested(40).replace("a", "b") + "c: !x 1\nc: 2\n")
    assert [each.message.partition(" ")[0] for each in problems] == ["nested", "tag", "given"]


@pytest.mark.parametrize("opening", ["[", "{", "- ", "? "])
def test_hopeless_nesting_ends_reading(opening):
    text = opening * 100_000
    assert all("nest" in each.message or "as a key" in each.message for each in refused(text))


def test_depth_counts_through_aliases():
    text = "a0: &a0 []\n" + "".join(f"a{i}: &a{i} [*a{i - 1}]\n" for i in range(1, 31))
    read(text)
    problem = only(text + "a31: &a31 [*a30]\n")
    assert (problem.line, problem.message) == (32, "nested more than 32 deep")


def test_aliases_that_multiply():
    tens = "a0: &a0 [x, x, x, x, x, x, x, x, x, x]\n"
    for level in range(1, 9):
        items = ", ".join([f"*a{level - 1}"] * 10)
        tens += f"a{level}: &a{level} [{items}]\n"
    problem = only(tens)
    assert problem.message == "aliases repeat more than 20000 values"
    assert problem.line == 5


def test_aliases_up_to_the_limit():
    # A list of 99 words is 100 values; 200 aliases of it repeat 20,000.
    words = ", ".join(["x"] * 99)
    text = f"a: &a [{words}]\nb: [{', '.join(['*a'] * 200)}]\n"
    assert len(to_data(read(text))["b"]) == 200
    assert "more than 20000" in only(text + "c: *a\n").message


def test_a_large_document_without_aliases_is_no_multiplication():
    text = "".join(f"k{i}: {{a: 1}}\n" for i in range(15_000))
    assert len(read(text).entries) == 15_000
