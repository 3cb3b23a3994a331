"""What can be wrong with a document: problems with their position, and how they are worded."""

from collections.abc import Iterable
from typing import NamedTuple

from enclosure_check.records import dataclass

LONGEST_QUOTE = 60
# Most names compared when looking for the nearest spelling: keeps a huge document quick.
_MOST_CANDIDATES = 500

Path = tuple[str | int, ...]


def printable(text: str) -> str:
    """Give a text with every character that cannot be printed as its escape, on one line."""
    if text.isprintable():
        return text
    return "".join(char if char.isprintable() else repr(char)[1:-1] for char in text)


def quoted(text: str, limit: int = LONGEST_QUOTE) -> str:
    """Give a user's text in quotes, escaped and cut to ``limit`` characters."""
    return repr(text) if len(text) <= limit else f"{text[:limit]!r}..."


def dotted(path: Path) -> str:
    """Give a path as the dotted text shown to the user; unprintable or long names in quotes."""
    return ".".join(
        step if step.isprintable() and 0 < len(step) <= LONGEST_QUOTE else quoted(step)
        for step in map(str, path)
    )


@dataclass(frozen=True, order=True)
class Problem:
    """One thing wrong with a document.

    ``line`` and ``column`` count from 1; ``field`` is the dotted path, empty where there is
    none. ``field`` and ``message`` never hold a control character.
    """

    file: str
    line: int
    column: int
    field: str
    message: str

    def __post_init__(self) -> None:
        object.__setattr__(self, "field", printable(self.field))
        object.__setattr__(self, "message", printable(self.message))

    def __str__(self) -> str:
        field = f"{self.field}: " if self.field else ""
        return f"{printable(self.file)}:{self.line}:{self.column}: {field}{self.message}"


class DocumentError(Exception):
    """A document that cannot be used; ``problems`` is sorted and holds each problem once."""

    problems: tuple[Problem, ...]

    def __init__(self, problems: Iterable[Problem]) -> None:
        self.problems = tuple(sorted(set(problems)))
        super().__init__("\n".join(map(str, self.problems)))


class FieldProblem(NamedTuple):
    """One thing wrong with a field of a validated document, its position not yet looked up."""

    path: Path
    message: str


class FieldErrors(Exception):  # noqa: N818 - it carries many
    """What does not fit together in a validated document."""

    problems: list[FieldProblem]

    def __init__(self, problems: Iterable[FieldProblem]) -> None:
        self.problems = list(problems)
        super().__init__("; ".join(f"{dotted(path)}: {text}" for path, text in self.problems))


def nearest_name(word: str, candidates: Iterable[str]) -> str | None:
    """Give the candidate spelt most like ``word``, or None when none is near."""
    from difflib import get_close_matches

    folded = word[:100].casefold()
    by_folded: dict[str, str] = {}
    for candidate in candidates:
        by_folded.setdefault(candidate.casefold(), candidate)
    tried = list(by_folded)
    if len(tried) > _MOST_CANDIDATES:
        tried = [each for each in tried if each[:1] == folded[:1]][:_MOST_CANDIDATES]
    found = get_close_matches(folded, tried, n=1, cutoff=0.6)
    return by_folded[found[0]] if found else None


def nearest(word: str, candidates: Iterable[str]) -> str:
    """Give the end of a sentence naming the nearest spelling, empty when none is near."""
    name = nearest_name(word, candidates)
    return "" if name is None else f"; did you mean {quoted(name)}?"
