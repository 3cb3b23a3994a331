"""Delimited text into rows: quotes, line breaks, byte order marks, and everything refused."""

import contextlib
import csv
import io

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from support.hanging import ends

from enclosure_check.description.delimited import (
    LONGEST_FIELD,
    MOST_FIELDS,
    MOST_LINES,
    DelimitedError,
    decode,
    read_rows,
)


def rows(text: str, delimiter: str = ",") -> list[list[str]]:
    return [row.texts for row in read_rows(text, delimiter)]


def refused(text: str) -> DelimitedError:
    with pytest.raises(DelimitedError) as caught:
        list(read_rows(text, ","))
    return caught.value


@pytest.mark.parametrize(
    ("text", "found"),
    [
        ("a,b\nc,d\n", [["a", "b"], ["c", "d"]]),
        ("a,b\r\nc,d", [["a", "b"], ["c", "d"]]),
        ("a,b\rc,d\r", [["a", "b"], ["c", "d"]]),
        ("a,,\n", [["a", "", ""]]),
        ("\n  \na\n\n", [["a"]]),
        ('"a,b",c\n', [["a,b", "c"]]),
        ('"say ""no""",c\n', [['say "no"', "c"]]),
        ('"two\r\nlines",c\nd,e\n', [["two\nlines", "c"], ["d", "e"]]),
        ('a, "b" ,c\n', [["a", "b", "c"]]),
        ('0.5",1\n', [['0.5"', "1"]]),
        ('"",""\n', [["", ""]]),
        ('"a",\n', [["a", ""]]),
    ],
)
def test_rows(text, found):
    assert rows(text) == found


@pytest.mark.parametrize("delimiter", [";", "\t"])
def test_other_delimiters(delimiter):
    text = f'a{delimiter}"b{delimiter}c"\n1,5{delimiter}2\n'
    assert rows(text, delimiter) == [["a", f"b{delimiter}c"], ["1,5", "2"]]


@given(
    st.lists(
        st.lists(st.text(alphabet='ab ",;\n', max_size=6), min_size=2, max_size=4),
        min_size=1,
        max_size=5,
    )
)
@settings(deadline=None)
def test_reads_what_the_standard_library_writes(table):
    file = io.StringIO()
    csv.writer(file, quoting=csv.QUOTE_ALL, lineterminator="\r\n").writerows(table)
    assert rows(file.getvalue()) == table


@pytest.mark.parametrize(
    ("text", "places"),
    [
        ("ab,c,\n", [(1, 1), (1, 4), (1, 6)]),
        ('\nab,"c",d\n', [(2, 1), (2, 4), (2, 8)]),
        ('"a\nb",c\n', [(1, 1), (2, 4)]),
        ('a,  "b"\n', [(1, 1), (1, 5)]),
    ],
)
def test_places_are_those_an_editor_shows(text, places):
    (row,) = read_rows(text, ",")
    assert [row.place(index) for index in range(len(row.texts))] == places


def test_the_place_of_a_missing_field_is_the_end_of_its_row():
    plain, quoted = read_rows('ab,c\n"ab",c\n', ",")
    assert plain.place(5) == (1, 5)
    assert quoted.place(5) == (2, 6)


@pytest.mark.parametrize(
    ("text", "line", "column", "message"),
    [
        ('a\nb,"c\nd\n', 2, 3, "not closed"),
        ('"a"b,c\n', 1, 4, "after a closing quote"),
        ("a," * MOST_FIELDS + "b\n", 1, 2 * MOST_FIELDS + 1, f"more than {MOST_FIELDS} fields"),
        ('"a",' * MOST_FIELDS + "b\n", 1, 1, f"more than {MOST_FIELDS} fields"),
        ("b,a" + "a" * LONGEST_FIELD + "\n", 1, 3, "2001 characters"),
        ('b,"a' + "a" * LONGEST_FIELD + '"\n', 1, 3, "2001 characters"),
        ('"' + "a\n" * (MOST_LINES + 1) + '"\n', 1, 1, "not closed"),
    ],
)
def test_refused_at_its_place(text, line, column, message):
    error = refused(text)
    assert message in error.message
    assert error.line == line
    assert column == 1 or error.column == column


@pytest.mark.parametrize(
    ("data", "encoding", "text"),
    [
        (b"\xef\xbb\xbfa", "utf_8", "a"),
        ("ä".encode("utf-16"), "utf_8", "ä"),
        (b"\xfe\xff\x00a", "utf_8", "a"),
        ("µ".encode("cp1252"), "windows_1252", "µ"),
        ("µ".encode(), "utf_8", "µ"),
    ],
)
def test_encodings(data, encoding, text):
    assert decode(data, encoding) == text


@pytest.mark.parametrize(
    ("data", "encoding", "place", "message"),
    [
        (b"a\nb\xb5", "utf_8", (2, 2), "is `encoding: windows_1252` meant?"),
        (b"a\nb\x81", "windows_1252", (2, 2), "not CP1252 text"),
        (b"a\r\nb\x00", "utf_8", (2, 2), "U+0000"),
        (b"a\n\x1b[31m", "utf_8", (2, 1), "U+001B"),
        (b"\xff\xfea", "utf_8", (1, 1), "not UTF-16-LE text"),
        ("\u2028".encode(), "utf_8", (1, 1), "U+2028"),
    ],
)
def test_bytes_that_are_no_text(data, encoding, place, message):
    with pytest.raises(DelimitedError) as caught:
        decode(data, encoding)
    assert (caught.value.line, caught.value.column) == place
    assert message in caught.value.message


@pytest.mark.parametrize(
    "text",
    [
        "," * 4_000_000,
        '"",' * 1_000_000,
        '"' * 4_000_000,
        '"' + "a\n" * 2_000_000,
        '"a"b' * 1_000_000,
        " " * 4_000_000,
        "\n" * 4_000_000,
        'x"' * 2_000_000,
    ],
    ids=lambda text: repr(text[:8]),
)
def test_a_hostile_file_is_read_or_refused_at_once(text):
    with ends(), contextlib.suppress(DelimitedError):
        for _ in read_rows(text, ","):
            pass
