"""From one part list to what its rows say of parts, as nodes that know their place in the file."""

import math
import re
from collections.abc import Iterator, Mapping
from typing import TYPE_CHECKING, NamedTuple

from enclosure_check.description.delimited import DelimitedError, Row, decode, read_rows
from enclosure_check.description.names import WALL_NAMES
from enclosure_check.description.problems import Problem, dotted, nearest, quoted
from enclosure_check.description.yaml_nodes import (
    MappingNode,
    Mark,
    Node,
    Scalar,
    ScalarNode,
    SequenceNode,
)
from enclosure_check.records import dataclass, field

if TYPE_CHECKING:
    from enclosure_check.description.part_list import ListColumns, PartList

MOST_PROBLEMS = 100
# Rows that may stand before the headings: titles, dates, notes.
MOST_ROWS_BEFORE = 100
MM_PER_UNIT = {"mm": 1.0, "mil": 0.0254, "inch": 25.4}
W_PER_UNIT = {"W": 1.0, "mW": 1e-3}
DELIMITERS = {"comma": ",", "semicolon": ";", "tab": "\t"}

_NUMBER = re.compile(r"([-+]?(?:[0-9]+(?:\.[0-9]*)?|\.[0-9]+)(?:[eE][-+]?[0-9]+)?) *([A-Za-z]*)\Z")
_LONGEST_NUMBER = 40
# Units that may follow a number, where they are those stated.
_SUFFIXES = {"mm": "mm", "mil": "mil", "mils": "mil", "in": "inch", "inch": "inch"}
_SUFFIXES |= {"W": "W", "w": "W", "mW": "mW", "mw": "mW", "deg": "deg"}
# Columns of plain numbers, by key of the part.
_RESISTANCES = {
    "theta_jc_top": "theta_jc_top_k_per_w",
    "theta_jc_bottom": "theta_jc_bottom_k_per_w",
    "theta_jb": "theta_jb_k_per_w",
}
_LENGTHS = {"length": "length_mm", "width": "width_mm", "height": "height_mm"}


class Value(NamedTuple):
    """What a row says of one key of a part: the value and the place of its column."""

    node: Node
    mark: Mark
    of_list: bool = False
    """Whether it holds for the whole list, and yields to what a row says."""


@dataclass
class Entry:
    """What a list says of one part. Lines count from the list's first, offset and all."""

    reference: str
    mark: Mark
    values: dict[str, Value] = field(default_factory=dict)
    type_word: str | None = None
    """Type as the list writes it, where it stands for itself."""


class ListReader:
    """Reads the file of one list.

    Parameters
    ----------
    spec
        What the document says of the list.
    file
        The list's file, as it is shown.
    first_line
        What line numbers in nodes are counted from, so that they tell the file: 0 for its own.
    """

    def __init__(self, spec: "PartList", file: str, first_line: int) -> None:
        self.spec, self.file, self.first_line = spec, file, first_line
        self.problems: list[Problem] = []
        self.columns: dict[str, int] = {}
        self.headings: dict[int, str] = {}

    def read(self, data: bytes, most_rows: int) -> dict[str, Entry]:
        """Give the parts by reference; what is wrong is in ``problems``."""
        entries: dict[str, Entry] = {}
        try:
            rows = read_rows(decode(data, self.spec.encoding), DELIMITERS[self.spec.delimiter])
            if not self._find_headings(rows):
                return entries
            for count, row in enumerate(rows):
                if count >= most_rows:
                    self._problem(row, 0, "", "more rows than a document may list, 20,000 in all")
                    break
                self._take(row, entries)
                if len(self.problems) >= MOST_PROBLEMS:
                    self._problem(row, 0, "", "too many problems; stopped here")
                    break
        except DelimitedError as error:
            self.problems.append(Problem(self.file, error.line, error.column, "", error.message))
        return entries

    def _problem(self, row: Row, column: int, name: str, message: str) -> None:
        self.problems.append(Problem(self.file, *row.place(column), name, message))

    # Headings -----------------------------------------------------------------------------

    def _find_headings(self, rows: Iterator[Row]) -> bool:
        """Find the row that has all the headings wanted."""
        wanted = dict(_columns(self.spec.columns))
        best: tuple[int, Row] | None = None
        for count, row in enumerate(rows):
            if count > MOST_ROWS_BEFORE:
                break
            texts = [_folded(text) for text in row.texts]
            found = sum(_folded(heading) in texts for heading in wanted.values())
            if found == len(wanted):
                return self._take_headings(row, texts, wanted)
            if best is None or found > best[0]:
                best = (found, row)
        self._no_headings(best, wanted)
        return False

    def _take_headings(self, row: Row, texts: list[str], wanted: Mapping[str, str]) -> bool:
        for key, heading in wanted.items():
            folded = _folded(heading)
            self.columns[key] = texts.index(folded)
            self.headings[self.columns[key]] = heading
            if texts.count(folded) > 1:
                again = texts.index(folded, self.columns[key] + 1)
                self._problem(row, again, heading, "heading given twice")
        return not self.problems

    def _no_headings(self, best: tuple[int, Row] | None, wanted: Mapping[str, str]) -> None:
        if best is None or best[0] == 0:
            names = ", ".join(map(quoted, dict.fromkeys(wanted.values())))
            also = self._other_delimiter(best[1], wanted) if best is not None else ""
            message = f"no row has the headings {names}{also}"
            self.problems.append(Problem(self.file, 1, 1, "", message))
            return
        row = best[1]
        texts = [_folded(text) for text in row.texts]
        for heading in dict.fromkeys(wanted.values()):
            if _folded(heading) not in texts:
                near = nearest(heading, [text.strip() for text in row.texts])
                self._problem(row, 0, "", f"no column has the heading {quoted(heading)}{near}")

    def _other_delimiter(self, row: Row, wanted: Mapping[str, str]) -> str:
        line = DELIMITERS[self.spec.delimiter].join(row.texts)
        for name, delimiter in DELIMITERS.items():
            texts = [_folded(text.strip('" ')) for text in line.split(delimiter)]
            if name != self.spec.delimiter and any(_folded(h) in texts for h in wanted.values()):
                return f"; is `delimiter: {name}` meant?"
        return ""

    # Rows ---------------------------------------------------------------------------------

    def _take(self, row: Row, entries: dict[str, Entry]) -> None:
        if row.texts[0].lstrip().startswith("#") or not any(map(str.strip, row.texts)):
            return
        at = self.columns["reference"]
        last = max(self.columns.values())
        if at >= len(row.texts) or not row.texts[at].strip():
            self._problem(row, at, self.headings[at], "missing; every row needs a reference")
            return
        own = row.texts[at].strip()
        if any(_matches(own, pattern) for pattern in self.spec.leave_out or ()):
            return
        if last >= len(row.texts):
            count = f"{len(row.texts)} fields, the headings need {last + 1}"
            self._problem(row, len(row.texts), quoted(own), count)
            return
        reference = self.spec.prefix + own
        line, column = row.place(at)
        if len(reference) > 80 or not reference.isprintable():
            self._problem(
                row,
                at,
                self.headings[at],
                f"given {quoted(own)}, allowed: text of up to 80 characters that can be seen",
            )
            return
        if reference in entries:
            first = entries[reference].mark[0] - self.first_line
            self._problem(row, at, reference, f"listed twice, first in line {first}")
            return
        entry = Entry(reference, (self.first_line + line, column))
        self._fill(row, entry)
        entries[reference] = entry

    def _fill(self, row: Row, entry: Entry) -> None:
        self._place(row, entry)
        self._type(row, entry)
        if (text := self._text(row, "description")) is not None:
            self._put(row, entry, "description", "description", text[:2000])
        for key, name in _LENGTHS.items():
            self._put(row, entry, key, name, self._number(row, entry, key, self.spec.unit))
        for key, name in _RESISTANCES.items():
            self._put(row, entry, key, name, self._number(row, entry, key, None))
        self._put(
            row, entry, "power", "power_w", self._number(row, entry, "power", self.spec.power_unit)
        )
        self._mapping(
            row,
            entry,
            "power_by_mode_w",
            {
                mode: (
                    f"power_by_mode.{mode}",
                    self._number(row, entry, f"power_by_mode.{mode}", self.spec.power_unit),
                )
                for mode in self.spec.columns.power_by_mode
            },
        )
        self._limits(row, entry)

    def _limits(self, row: Row, entry: Entry) -> None:
        limits: dict[str, Value] = {}
        for point in ("junction", "case"):
            column = f"{point}_max"
            value = self._number(row, entry, column, None)
            if value is not None:
                mark = self._mark(row, column)
                node = ScalarNode(value, *mark, f"{value:g}")
                limits[point] = Value(MappingNode({"max_c": node}, {"max_c": mark}, *mark), mark)
        if limits:
            entry.values["limits"] = _mapping_value(limits)

    def _mapping(
        self, row: Row, entry: Entry, name: str, given: Mapping[str, tuple[str, float | None]]
    ) -> None:
        values = {
            key: Value(ScalarNode(value, *mark, f"{value:g}"), mark)
            for key, (column, value) in given.items()
            if value is not None and (mark := self._mark(row, column))
        }
        if values:
            entry.values[name] = _mapping_value(values)

    # Place --------------------------------------------------------------------------------

    def _place(self, row: Row, entry: Entry) -> None:
        spec = self.spec
        board = self._text(row, "board")
        if board is not None:
            self._put(row, entry, "board", "place", spec.boards.get(board, board))
        elif spec.board is not None:
            self._put(row, entry, "reference", "place", spec.board)
        own_side = None if spec.seen_from == "own_side" else spec.seen_from
        side: str | None = self._side(row, entry) or spec.side or own_side
        given = "side" if self._text(row, "side") is not None else "reference"
        if side is not None:
            self._put(row, entry, given, "side", side)
        x = self._number(row, entry, "x", spec.unit)
        y = self._number(row, entry, "y", spec.unit)
        if x is not None and y is not None:
            self._centre(row, entry, x, y)
            mirrored = own_side is not None and side is not None and side != own_side
            corner = "lower_right" if mirrored else "lower_left"
            self._put(row, entry, "x", "at_from", corner)
        turn = self._number(row, entry, "rotation", "deg")
        if turn is not None or (spec.turned_deg and x is not None):
            column = "rotation" if turn is not None else "reference"
            # Seen from its own side a part on the other side turns the other way round; which
            # way makes no difference to a rectangle.
            self._put(
                row, entry, column, "rotation_deg", math.fmod((turn or 0) + spec.turned_deg, 360)
            )

    def _centre(self, row: Row, entry: Entry, x: float, y: float) -> None:
        quarter = self.spec.turned_deg // 90
        origin = self.spec.origin_mm or [0.0, 0.0]
        right, up = ((x, y), (-y, x), (-x, -y), (y, -x))[quarter]
        marks = self._mark(row, "x"), self._mark(row, "y")
        items = tuple(
            ScalarNode(value + start, *mark, f"{value + start:.6g}")
            for value, start, mark in zip((right, up), origin, marks, strict=True)
        )
        entry.values["at_mm"] = Value(SequenceNode(items, *marks[0]), marks[0])

    def _side(self, row: Row, entry: Entry) -> str | None:
        word = self._text(row, "side")
        if word is None:
            return None
        by_word = {_folded(each): side for each, side in self.spec.sides.items()}
        known = by_word or {name: name for name in WALL_NAMES}
        side = known.get(_folded(word))
        if side is None:
            words = self.spec.sides or known
            message = f"given {quoted(word)}, allowed: {', '.join(map(quoted, words))}"
            self._wrong(row, entry, "side", message + nearest(word, words))
        return side

    def _type(self, row: Row, entry: Entry) -> None:
        word = self._text(row, "type")
        if word is None:
            return
        named = self.spec.types.get(word)
        if named is None:
            entry.type_word = word = word[:80]
        self._put(row, entry, "type", "type", named or word)

    # Fields -------------------------------------------------------------------------------

    def _text(self, row: Row, key: str) -> str | None:
        at = self.columns.get(key)
        if at is None:
            return None
        return " ".join(row.texts[at].split()) or None

    def _mark(self, row: Row, key: str) -> Mark:
        line, column = row.place(self.columns[key])
        return self.first_line + line, column

    def _put(self, row: Row, entry: Entry, column: str, name: str, value: Scalar) -> None:
        if value is not None:
            mark = self._mark(row, column)
            text = f"{value:.6g}" if isinstance(value, float) else str(value)
            entry.values[name] = Value(ScalarNode(value, *mark, text), mark, column == "reference")

    def _wrong(self, row: Row, entry: Entry, key: str, message: str) -> None:
        at = self.columns[key]
        name = dotted((entry.reference, self.headings[at]))
        self._problem(row, at, name, message)

    def _number(self, row: Row, entry: Entry, key: str, unit: str | None) -> float | None:
        """Give a number in mm, W, degrees or as it stands; None where there is none."""
        text = self._text(row, key)
        if text is None:
            return None
        comma = self.spec.decimal == "comma"
        found, swapped = (
            _numeric(text, "," if comma else "."),
            _numeric(text, "." if comma else ","),
        )
        if found is None:
            other = "point" if comma else "comma"
            hint = f"; is `decimal: {other}` meant?" if swapped else ""
            like = "12,5" if comma else "12.5"
            self._wrong(
                row, entry, key, f"given {quoted(text)}, allowed: a number like {like}{hint}"
            )
            return None
        if found[2] and _SUFFIXES.get(found[2]) != unit:
            stated = f"in {unit}" if unit else "without a unit"
            self._wrong(row, entry, key, f"given {quoted(text)}, allowed: a number {stated}")
            return None
        value = float(found[1])
        if not math.isfinite(value):
            self._wrong(row, entry, key, f"given {quoted(text)}, allowed: a finite number")
            return None
        return value * {**MM_PER_UNIT, **W_PER_UNIT}.get(unit or "", 1.0)


def _numeric(text: str, decimal: str) -> re.Match[str] | None:
    """Match a number written with a decimal mark, and a unit after it if there is one."""
    if len(text) > _LONGEST_NUMBER or (decimal == "," and "." in text):
        return None
    return _NUMBER.match(text.replace(",", ".") if decimal == "," else text)


def _columns(columns: "ListColumns") -> Iterator[tuple[str, str]]:
    """Give the headings wanted, by key; those of modes by ``power_by_mode.MODE``."""
    for key, value in vars(columns).items():
        if isinstance(value, str):
            yield key, value
    for mode, heading in columns.power_by_mode.items():
        yield f"power_by_mode.{mode}", heading


def _mapping_value(values: Mapping[str, Value]) -> Value:
    mark = next(iter(values.values())).mark
    entries = {key: value.node for key, value in values.items()}
    marks = {key: value.mark for key, value in values.items()}
    return Value(MappingNode(entries, marks, *mark), mark)


def _folded(text: str) -> str:
    return " ".join(text.split()).casefold()


def _matches(reference: str, pattern: str) -> bool:
    if pattern.endswith("*"):
        return reference.startswith(pattern[:-1])
    return reference == pattern
