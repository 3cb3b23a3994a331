"""Lines, tables and numbers of a text report; knows nothing of what they are about."""

from collections.abc import Callable, Iterable, Sequence
from typing import Generic, NamedTuple, TypeVar

from enclosure_check.report.options import WriterOptions

GAP = 2
INDENT = 2
# A column that yields keeps this many cells while gaps can yield in its place, then so many, and
# these few where even the gaps have gone.
LEGIBLE = 12
NARROWEST = 6
LAST_RESORT = 2
ELLIPSIS = "..."
# Heat below this is shown as none, and below the other to one digit only. [W]
LEAST_W = 1e-6
SMALL_W = 1e-3

# SGR parameters of ECMA-48 ("ANSI escape codes"). Colours by number, of the cube that no theme
# changes, about as far from black as from white: they read on both.
STYLES = {"bold": "1", "pass": "38;5;28", "marginal": "38;5;130;1", "fail": "38;5;160;1"}


class Column(NamedTuple):
    """A column of a table."""

    title: str
    right: bool = False
    """Whether it lines up at its right edge, as numbers do."""
    yields: bool = False
    """Whether it is cut when the table is too wide."""


class Cell(NamedTuple):
    """A cell with a style of its own."""

    text: str
    style: str


Record = TypeVar("Record")


class Shown(NamedTuple, Generic[Record]):
    """A column of a table of records, and what it says of each."""

    column: Column
    cell: Callable[[Record], str | Cell]
    wanted: Callable[[Record], bool] = lambda _: True
    """Whether a record gives reason to show the column."""


def right(title: str) -> Column:
    """Give a column of numbers."""
    return Column(title, right=True)


class Page:
    """Lines of a report as they are put together."""

    def __init__(self, options: WriterOptions) -> None:
        self.options = options
        self.lines: list[str] = []

    def text(self) -> str:
        """Give all lines, the last one ended."""
        return "\n".join(self.lines) + "\n"

    def clean(self, text: str) -> str:
        """Give a user's text as it can be shown here."""
        return clean(text, self.options.encoding)

    def painted(self, text: str, style: str) -> str:
        """Give a text in a style where colour is on."""
        if not self.options.colour or not style or not text.strip():
            return text
        return f"\x1b[{STYLES[style]}m{text}\x1b[0m"

    def gap(self) -> None:
        """Put in an empty line, never two."""
        if self.lines and self.lines[-1]:
            self.lines.append("")

    def heading(self, text: str, style: str = "bold") -> None:
        """Put in a heading, cut to one line."""
        self.lines.append(self.painted(cut(text, self.options.width), style))

    def paragraph(self, text: str, *, first: str = "", rest: str = "", style: str = "") -> None:
        """Put in a text, broken at spaces; ``first`` and ``rest`` lead the lines."""
        for line in wrapped(text, self.options.width, first, rest):
            self.lines.append(self.painted(line, style))

    def line(self, text: str) -> None:
        """Put in a line as it is, but for what would not fit."""
        self.lines.append(cut(text, self.options.width).rstrip())

    def bullets(self, texts: Iterable[str]) -> None:
        """Put in one bullet per text."""
        for text in texts:
            self.paragraph(text, first="  - ", rest="    ")

    def table(self, columns: Sequence[Column], rows: Iterable[Sequence[str | Cell]]) -> None:
        """Put in a table; columns that yield are cut until it fits."""
        cells = [[self._cell(value) for value in row] for row in rows]
        widths = [
            max(cells_of(text) for text in (column.title, *(row[place].text for row in cells)))
            for place, column in enumerate(columns)
        ]
        indent, gap = _fitted(widths, columns, self.options.width)
        titles = [Cell(column.title, "bold") for column in columns]
        for row in (titles, *cells):
            self.lines.append(self._row(columns, widths, row, " " * indent, " " * gap))

    def records(self, shown: Sequence[Shown[Record]], records: Sequence[Record]) -> None:
        """Put in a table of records, without the columns no record gives reason to show."""
        kept = _wanted(shown, records)
        self.table(
            [each.column for each in kept],
            ([each.cell(record) for each in kept] for record in records),
        )

    def holds(self, shown: Sequence[Shown[Record]], records: Sequence[Record]) -> bool:
        """Tell whether `records` would have to cut nothing short."""
        return self.room_beside(_wanted(shown, records), records) + GAP >= 0

    def room_beside(self, shown: Sequence[Shown[Record]], records: Sequence[Record]) -> int:
        """Give the cells that are left for one column more, negative where there are none."""
        used = INDENT
        for each in shown:
            texts = (self._cell(each.cell(record)).text for record in records)
            used += max(cells_of(text) for text in (each.column.title, *texts)) + GAP
        return self.options.width - used

    def _cell(self, value: str | Cell) -> Cell:
        text, style = value if isinstance(value, Cell) else (value, "")
        return Cell(self.clean(text), style)

    def _row(
        self,
        columns: Sequence[Column],
        widths: Sequence[int],
        row: Sequence[Cell],
        indent: str,
        gap: str,
    ) -> str:
        parts, pending = [], indent
        for column, width, (text, style) in zip(columns, widths, row, strict=True):
            shown = cut(text, width)
            space = " " * (width - cells_of(shown))
            before, after = (space, "") if column.right else ("", space)
            parts.append(pending + before + self.painted(shown, style))
            pending = after + gap
        return "".join(parts).rstrip()


def _wanted(shown: Sequence[Shown[Record]], records: Sequence[Record]) -> list[Shown[Record]]:
    return [each for each in shown if any(each.wanted(record) for record in records)]


def _fitted(widths: list[int], columns: Sequence[Column], room: int) -> tuple[int, int]:
    """Narrow columns until they fit; give the indent and the gap that go with them."""
    for indent, gap, narrowest in (
        (INDENT, GAP, LEGIBLE),
        (INDENT, 1, LEGIBLE),
        (INDENT, GAP, NARROWEST),
        (INDENT, 1, NARROWEST),
        (0, 1, LAST_RESORT),
    ):
        spaces = indent + gap * (len(widths) - 1)
        _narrow(widths, columns, room - spaces, narrowest)
        if sum(widths) + spaces <= room:
            break
    return indent, gap


def _narrow(widths: list[int], columns: Sequence[Column], room: int, narrowest: int) -> None:
    """Take cells off the widest of the columns that yield until all fits in ``room``."""
    for _ in range(sum(widths) - room):
        giving = [
            place
            for place, column in enumerate(columns)
            if column.yields and widths[place] > narrowest
        ]
        if not giving:
            return
        widths[max(giving, key=widths.__getitem__)] -= 1


# Text -------------------------------------------------------------------------------------


def clean(text: str, encoding: str) -> str:
    """Give a text without control characters, and without any the encoding lacks."""
    if text.isascii() and text.isprintable():
        return text
    return "".join(
        char if char.isprintable() and _encodable(char, encoding) else _escaped(char)
        for char in text
    )


def _encodable(char: str, encoding: str) -> bool:
    try:
        char.encode(encoding)
    except (UnicodeEncodeError, LookupError):
        return False
    return True


def _escaped(char: str) -> str:
    return char.encode("unicode_escape").decode("ascii")


def cells_of(text: str) -> int:
    """Count the character cells of a text: two for wide characters, none for combining ones."""
    if text.isascii():
        return len(text)
    from unicodedata import combining, east_asian_width

    return sum(
        0 if combining(char) else 2 if east_asian_width(char) in ("W", "F") else 1 for char in text
    )


def cut(text: str, width: int) -> str:
    """Cut a text to a width, an ellipsis showing that it was."""
    if cells_of(text) <= width:
        return text
    mark = ELLIPSIS[: max(width, 0)]
    return _head(text, width - len(mark)) + mark


def tail(text: str, width: int) -> str:
    """Cut a path to a width at its beginning: its end tells more."""
    if cells_of(text) <= width:
        return text
    while text and cells_of(text) > width - len(ELLIPSIS):
        text = text[1:]
    return ELLIPSIS + text


def _head(text: str, width: int) -> str:
    """Give the beginning of a text that fits in a width."""
    if text.isascii():
        return text[: max(width, 0)]
    used = 0
    for place, char in enumerate(text):
        used += cells_of(char)
        if used > width:
            return text[:place]
    return text


def wrapped(text: str, width: int, first: str = "", rest: str = "") -> list[str]:
    """Break a text at spaces into lines no wider than ``width``; a longer word is split."""
    lines: list[str] = []
    line, empty = first, True
    for word in text.split():
        while word:
            candidate = line + ("" if empty else " ") + word
            if cells_of(candidate) <= width:
                line, empty, word = candidate, False, ""
            elif not empty:
                lines.append(line)
                line, empty = rest, True
            else:
                head = _head(word, width - cells_of(line)) or word[0]
                lines.append(line + head)
                line, word = rest, word[len(head) :]
    if not empty or not lines:
        lines.append(line)
    return lines


# Numbers ----------------------------------------------------------------------------------


def tenths(value: float) -> str:
    """Give a temperature or a difference to 0.1 K, without a minus before zero."""
    return f"{round(value, 1) + 0.0:.1f}"


def digits(value: float) -> str:
    """Give a number to three digits, whole above a hundred."""
    return f"{value:.0f}" if abs(value) >= 99.95 else f"{value:#.3g}"


def watts(value: float) -> str:
    """Give heat in W: to three digits, to one below a milliwatt, none below a microwatt."""
    if abs(value) < LEAST_W:
        return "0"
    return digits(value) if abs(value) >= SMALL_W else f"{value:.0e}"


def counted(number: int, word: str) -> str:
    """Give a number with its word, in the plural where it is one."""
    return f"{number} {word}" if number == 1 else f"{number} {word}s"


def listed(words: Sequence[str], most: int = 6) -> str:
    """Give words with commas, the rest of a long list as a number."""
    more = f" and {len(words) - most} more" if len(words) > most else ""
    return ", ".join(words[:most]) + more
