"""How the tests of the documentation read a page."""

import re
from collections.abc import Callable
from pathlib import Path

import pytest

ROOT = Path(__file__).parents[2]
PAGES = sorted(
    page.relative_to(ROOT).as_posix() for page in (*ROOT.glob("*.md"), *ROOT.glob("docs/*.md"))
)

_FENCED = re.compile(r"^```(\w*)\n(.*?)^```$", re.MULTILINE | re.DOTALL)
_CELL_END = re.compile(r"\s*(?<!\\)\|\s*")


class Page:
    """A Markdown page and what can be read off it."""

    def __init__(self, name: str) -> None:
        self.name = name
        self.path = ROOT / name
        self.text = self.path.read_text(encoding="utf-8")

    def blocks(self, language: str) -> list[str]:
        """The fenced blocks of one language, without their fences."""
        return [body for found, body in _FENCED.findall(self.text) if found == language]

    def prose(self) -> str:
        """The page without its fenced blocks."""
        return _FENCED.sub("", self.text)

    def tables(self) -> list[list[list[str]]]:
        """The tables, each a list of rows of cells, head first, the dashes left out."""
        tables, rows = [], []
        for line in [*self.prose().splitlines(), ""]:
            if line.startswith("|"):
                rows.append(_CELL_END.split(line)[1:-1])
            elif rows:
                tables.append([rows[0], *rows[2:]])
                rows = []
        return tables

    def table(self, *head: str) -> list[list[str]]:
        """The rows of the one table whose head starts with these cells."""
        found = [table for table in self.tables() if tuple(table[0][: len(head)]) == head]
        assert len(found) == 1, f"{self.name} has {len(found)} tables that start with {head}"
        assert all(len(row) == len(found[0][0]) for row in found[0])
        return found[0][1:]

    def anchors(self) -> set[str]:
        """The anchors of the headings, as they are made on repository pages."""
        heads = re.findall(r"^#+ (.+)$", self.prose(), re.MULTILINE)
        return {re.sub(r"[^\w\- ]", "", head.lower()).replace(" ", "-") for head in heads}

    def links(self) -> list[str]:
        """The targets of all links and pictures."""
        return re.findall(r"\]\(([^)\s]+)\)", self.prose())


@pytest.fixture(scope="session")
def read_page() -> Callable[[str], Page]:
    """Give a page by its path from the root of the repository."""
    return Page


@pytest.fixture(params=PAGES)
def page(request) -> Page:
    """Every page in turn."""
    return Page(request.param)


@pytest.fixture(scope="session")
def root() -> Path:
    """The root of the repository."""
    return ROOT
