"""Read delimited text (RFC 4180) into rows whose fields know their line and column.

Fields may be in quotes, a quote inside doubled, line breaks included. Rows end in any kind of
line break. Nothing here knows what the columns mean.

References
----------
Y. Shafranovich, "Common Format and MIME Type for Comma-Separated Values (CSV) Files", RFC 4180
(2005), section 2.
"""

import re
from collections.abc import Iterator

from enclosure_check.records import dataclass

MOST_FIELDS = 256
LONGEST_FIELD = 2000
# Lines a field in quotes may run over: more is a quote that was never closed.
MOST_LINES = 50

_FORBIDDEN = re.compile(
    "[\x00-\x08\x0b\x0c\x0e-\x1f\x7f-\x9f\u2028\u2029\ud800-\udfff\ufffe\uffff]"
)
# Encodings without a byte order mark, by their names here.
_CODECS = {"utf_8": "utf-8", "windows_1252": "cp1252"}
_MARKS = ((b"\xef\xbb\xbf", "utf-8"), (b"\xff\xfe", "utf-16-le"), (b"\xfe\xff", "utf-16-be"))


class DelimitedError(Exception):
    """Text that cannot be read on: line and column from 1, and what is wrong there."""

    def __init__(self, line: int, column: int, message: str) -> None:
        super().__init__(message)
        self.line, self.column, self.message = line, column, message


@dataclass(frozen=True)
class Row:
    """The fields of a row, without their quotes.

    ``places`` holds line and column of every field, counted in characters from 1; None where the
    row has no quotes, so that places follow from the lengths.
    """

    line: int
    texts: list[str]
    places: list[tuple[int, int]] | None

    def place(self, index: int) -> tuple[int, int]:
        """Give line and column of a field; of the row's end where there is no such field."""
        if self.places is not None:
            return self.places[min(index, len(self.places) - 1)]
        before = self.texts[:index]
        return self.line, 1 + sum(map(len, before)) + min(index, len(self.texts) - 1)


def decode(data: bytes, encoding: str) -> str:
    """Give the text of a file, by its byte order mark if it has one.

    Raises
    ------
    DelimitedError
        When the bytes are no such text, or hold control characters.
    """
    start, codec = 0, _CODECS[encoding]
    for mark, name in _MARKS:
        if data.startswith(mark):
            start, codec = len(mark), name
            break
    try:
        text = data[start:].decode(codec)
    except UnicodeDecodeError as error:
        before = data[start : start + error.start].decode(codec, "replace")
        line, column = _place(before, len(before))
        way_out = "; is `encoding: windows_1252` meant?" if codec == "utf-8" else ""
        raise DelimitedError(line, column, f"not {codec.upper()} text{way_out}") from None
    if found := _FORBIDDEN.search(text):
        what = f"character U+{ord(found.group()):04X} is not allowed in a list"
        raise DelimitedError(*_place(text, found.start()), what)
    return text


def _place(text: str, index: int) -> tuple[int, int]:
    lines = _lines(text[:index])
    return len(lines), len(lines[-1]) + 1


def _lines(text: str) -> list[str]:
    return text.replace("\r\n", "\n").replace("\r", "\n").split("\n")


def read_rows(text: str, delimiter: str) -> Iterator[Row]:
    """Give the rows that are not blank.

    Parameters
    ----------
    text
        All of the file.
    delimiter
        One character.

    Raises
    ------
    DelimitedError
        At the first row that cannot be read.
    """
    lines = _lines(text)
    index = 0
    while index < len(lines):
        line = lines[index]
        if not line.strip():
            index += 1
            continue
        if '"' in line:
            row, index = _quoted_row(lines, index, delimiter)
        else:
            row, index = Row(index + 1, line.split(delimiter), None), index + 1
            _check_count(row)
        # Only a line longer than a field may be can hold one that is too long.
        if row.places is not None or len(line) > LONGEST_FIELD:
            _check_lengths(row)
        yield row


def _check_count(row: Row) -> None:
    if len(row.texts) > MOST_FIELDS:
        message = f"a row of more than {MOST_FIELDS} fields"
        raise DelimitedError(*row.place(MOST_FIELDS), message)


def _check_lengths(row: Row) -> None:
    for index, text in enumerate(row.texts):
        if len(text) > LONGEST_FIELD:
            message = f"a field of {len(text)} characters, allowed: up to {LONGEST_FIELD}"
            raise DelimitedError(*row.place(index), message)


def _quoted_row(lines: list[str], first: int, delimiter: str) -> tuple[Row, int]:
    """Read a row that has quotes; give it and the index of the line after it."""
    texts: list[str] = []
    places: list[tuple[int, int]] = []
    index, at = first, 0
    while True:
        line = lines[index]
        start = at
        while start < len(line) and line[start] == " ":
            start += 1
        if start < len(line) and line[start] == '"':
            places.append((index + 1, start + 1))
            text, index, at = _quoted_field(lines, index, start)
            line = lines[index]
            while at < len(line) and line[at] == " ":
                at += 1
            if at < len(line) and line[at] != delimiter:
                message = "text after a closing quote; a quote inside a field is written twice"
                raise DelimitedError(index + 1, at + 1, message)
        else:
            places.append((index + 1, at + 1))
            end = line.find(delimiter, at)
            end = len(line) if end < 0 else end
            text, at = line[at:end], end
        texts.append(text)
        row = Row(first + 1, texts, places)
        _check_count(row)
        if at >= len(line):
            return row, index + 1
        at += 1


def _quoted_field(lines: list[str], first: int, start: int) -> tuple[str, int, int]:
    """Read a field from its opening quote; give its text, and line index and place after it."""
    pieces: list[str] = []
    index, at = first, start + 1
    while True:
        end = lines[index].find('"', at)
        if end < 0:
            pieces.append(lines[index][at:] + "\n")
            index, at = index + 1, 0
            if index == len(lines) or index - first > MOST_LINES:
                raise DelimitedError(first + 1, start + 1, "this quote is not closed")
        elif lines[index].startswith('""', end):
            pieces.append(lines[index][at : end + 1])
            at = end + 2
        else:
            pieces.append(lines[index][at:end])
            return "".join(pieces), index, end + 1
