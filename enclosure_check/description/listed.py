"""Parts from part lists: read the files a document names and join their rows by reference.

The joined parts are put under `parts` of the document as written, below what stands there: an
entry of the document's own is a merge patch (RFC 7396) of the listed part, and options and
conditions patch both. What becomes of parts without power or size is decided when the document is
resolved, see `resolve_listed.py`.
"""

import hashlib
import os
from collections.abc import Iterator, Mapping, Sequence
from typing import TYPE_CHECKING

from enclosure_check.description.inside_folder import RefusedError, read_inside
from enclosure_check.description.list_rows import Entry, ListReader, Value
from enclosure_check.description.merge import merge_patch
from enclosure_check.description.positions import Positions
from enclosure_check.description.problems import DocumentError, Path, Problem, dotted, quoted
from enclosure_check.description.quick import valid_list
from enclosure_check.description.yaml_nodes import MappingNode, Node, ScalarNode, locate, to_data
from enclosure_check.records import dataclass, field, replace

if TYPE_CHECKING:
    from enclosure_check.description.part_list import PartList

MOST_LISTS = 20
MOST_LIST_BYTES = 4 << 20
MOST_ROWS = 20_000
# Nodes of lists number their lines on from here, each list from a multiple of its own: so that a
# line alone tells the file. No document or list has as many lines.
LINES_PER_FILE = 1 << 23
_LENGTH_COLUMNS = ("x", "y", "length", "width", "height")


@dataclass(frozen=True)
class ListFile:
    """A list that was read: its name in the document, file as shown, SHA-256 and parts."""

    name: str
    file: str
    digest: str
    parts: int


@dataclass(frozen=True)
class ListedPart:
    """What is known of a listed part besides its keys."""

    type_word: str | None = None
    """Type as a list writes it, where the document does not say what that means."""
    fold_below_w: float = 0.0


@dataclass(frozen=True)
class Listed:
    """What became of the rows of all lists."""

    parts: Mapping[str, ListedPart] = field(default_factory=dict)
    """Those put into the document, by reference."""
    left_out: tuple[str, ...] = ()
    """Those with nothing to compute: no power, no limit, named nowhere in the document."""
    types: tuple[tuple[Path, str], ...] = ()
    """Part types that the lists' `types` name, with their paths."""
    files: tuple[ListFile, ...] = ()


NOTHING = Listed()


@dataclass(frozen=True)
class _Joined:
    parts: MappingNode
    listed: Listed


class PartLists:
    """The part lists of one document, each file read once.

    Parameters
    ----------
    file
        Path of the document.
    allowed
        Folders outside its own that lists may lie in.
    mentioned
        References of parts and names of part types that the document speaks of anywhere, its
        options and conditions included.
    """

    def __init__(self, file: str, allowed: Sequence[str], mentioned: "Mentioned") -> None:
        self.file, self.allowed, self.mentioned = file, tuple(allowed), mentioned
        self._files: list[str] = []
        self._data: dict[str, bytes] = {}
        self._joined: dict[str, _Joined | DocumentError] = {}
        self._rows = 0

    def put_in(
        self, base: MappingNode, patches: Sequence[MappingNode]
    ) -> tuple[MappingNode, Listed]:
        """Give the document with the listed parts under its own, and what became of all rows.

        ``patches`` may change the lists themselves; they are not applied otherwise.

        Raises
        ------
        DocumentError
            With everything wrong with the lists, at its place in the document or the list.
        """
        key = "part_lists"
        lists: Node | None = base.entries.get(key)
        for patch in patches:
            if key in patch.entries:
                lists = merge_patch(lists, patch.entries[key])
        if not isinstance(lists, MappingNode):
            return base, NOTHING
        known = repr(to_data(lists))
        if known not in self._joined:
            mark = base.marks.get(key, (base.line, base.column))
            try:
                self._joined[known] = self._join(MappingNode({key: lists}, {key: mark}, *mark))
            except DocumentError as error:
                self._joined[known] = error
        joined = self._joined[known]
        if isinstance(joined, DocumentError):
            raise joined
        own = base.entries.get("parts")
        parts = merge_patch(joined.parts, own) if isinstance(own, MappingNode) else joined.parts
        marks = {"parts": (lists.line, lists.column), **base.marks}
        return replace(base, entries={**base.entries, "parts": parts}, marks=marks), joined.listed

    def place(self, line: int) -> tuple[str, int]:
        """Give the file a node's line lies in, and its number there."""
        index, own = divmod(line, LINES_PER_FILE)
        return (self.file, line) if index == 0 else (self._files[index - 1], own)

    def placed(self, problem: Problem) -> Problem:
        """Give a problem with the file and line it lies in."""
        if problem.line < LINES_PER_FILE:
            return problem
        file, line = self.place(problem.line)
        return replace(problem, file=file, line=line)

    def placed_positions(self, found: Positions) -> Positions:
        """Give positions with the line in its own file, and that file where it is a list."""
        places = {name: (*self.place(line), column) for name, (line, column) in found.parts.items()}
        return Positions(
            {name: (line, column) for name, (_, line, column) in places.items()},
            found.walls,
            {
                name: places[name][0]
                for name, (line, _) in found.parts.items()
                if line >= LINES_PER_FILE
            },
        )

    # Reading ------------------------------------------------------------------------------

    def _join(self, root: MappingNode) -> _Joined:
        problems: list[Problem] = []

        def refuse(path: Path, message: str) -> None:
            at = locate(root, path, at_key=True)
            problems.append(Problem(self.file, *at, dotted(path), message))

        entries: dict[str, _Part] = {}
        files: list[ListFile] = []
        types: list[tuple[Path, str]] = []
        invalid = False
        lists = root.entries["part_lists"]
        assert isinstance(lists, MappingNode)
        if len(self._files) + len(lists.entries) > MOST_LISTS:
            refuse(("part_lists",), f"more than {MOST_LISTS} lists, counting those of patches")
            raise DocumentError(problems)
        for name, node in lists.entries.items():
            path: Path = ("part_lists", name)
            spec = valid_list(node)
            if spec is None:
                invalid = True  # told with all else that is wrong with the document's keys
                continue
            wrong = list(_misfits(spec))
            for key, message in wrong:
                refuse((*path, *key), message)
            if wrong:
                continue
            shown = os.path.join(os.path.dirname(self.file), spec.file)
            try:
                data = self._read(spec.file)
            except RefusedError as error:
                refuse((*path, "file"), f"given {quoted(spec.file)}; {error}")
                continue
            self._files.append(shown)
            reader = ListReader(spec, shown, len(self._files) * LINES_PER_FILE)
            found = reader.read(data, MOST_ROWS - self._rows)
            self._rows += len(found)
            problems += reader.problems
            problems += self._add(entries, found, spec, reader)
            types += [((*path, "types", word), kind) for word, kind in spec.types.items()]
            files.append(ListFile(name, shown, hashlib.sha256(data).hexdigest(), len(found)))
        if problems or invalid:
            raise DocumentError(problems)
        kept = {key: each for key, each in entries.items() if self._matters(each)}
        return _Joined(
            _parts_node(kept, root),
            Listed(
                {key: ListedPart(each.type_word, each.fold_below_w) for key, each in kept.items()},
                tuple(key for key in entries if key not in kept),
                tuple(types),
                tuple(files),
            ),
        )

    def _read(self, name: str) -> bytes:
        if name not in self._data:
            self._data[name] = read_inside(name, self.file, self.allowed, MOST_LIST_BYTES)
        return self._data[name]

    def _add(
        self,
        entries: "dict[str, _Part]",
        found: Mapping[str, Entry],
        spec: "PartList",
        reader: ListReader,
    ) -> Iterator[Problem]:
        """Join one list's rows to those of the lists before it."""
        for reference, entry in found.items():
            part = entries.get(reference)
            if part is None:
                part = entries[reference] = _Part(reference, entry.mark)
            part.fold_below_w = max(part.fold_below_w, spec.fold_below_w)
            part.type_word = part.type_word or entry.type_word
            for key, value in entry.values.items():
                first = part.values.get(key)
                same = first is not None and to_data(first.node) == to_data(value.node)
                if first is None or (first.of_list and not (value.of_list and not same)):
                    part.values[key] = value
                elif not (value.of_list and (same or not first.of_list)):
                    file, line = self.place(first.mark[0])
                    message = f"`{key}` is given before, in {file}, line {line}"
                    place = value.mark[0] - reader.first_line, value.mark[1]
                    yield Problem(reader.file, *place, reference, message)

    def _matters(self, part: "_Part") -> bool:
        """Tell whether there may be anything to compute for a part."""
        kind = part.values.get("type")
        return (
            part.reference in self.mentioned.parts
            or any(key in part.values for key in ("power_w", "power_by_mode_w", "limits"))
            or (
                kind is not None
                and isinstance(kind.node, ScalarNode)
                and kind.node.value in self.mentioned.types
            )
        )


@dataclass
class _Part:
    """A part as joined so far; its mark is where its reference stands first."""

    reference: str
    mark: tuple[int, int]
    values: dict[str, Value] = field(default_factory=dict)
    type_word: str | None = None
    fold_below_w: float = 0.0


@dataclass(frozen=True)
class Mentioned:
    """Names of parts and part types that a document speaks of."""

    parts: frozenset[str]
    types: frozenset[str]

    @classmethod
    def of(cls, nodes: Sequence[MappingNode]) -> "Mentioned":
        """Collect them from a document and its patches."""

        def names(key: str) -> frozenset[str]:
            return frozenset(
                name
                for node in nodes
                if isinstance(section := node.entries.get(key), MappingNode)
                for name in section.entries
            )

        return cls(names("parts"), names("part_types"))


def _parts_node(parts: Mapping[str, _Part], root: MappingNode) -> MappingNode:
    entries: dict[str, Node] = {}
    for name, part in parts.items():
        nodes = {key: value.node for key, value in part.values.items()}
        marks = {key: value.mark for key, value in part.values.items()}
        entries[name] = MappingNode(nodes, marks, *part.mark)
    return MappingNode(
        entries, {name: part.mark for name, part in parts.items()}, root.line, root.column
    )


def _misfits(spec: "PartList") -> Iterator[tuple[Path, str]]:
    """Give what does not fit together in the description of a list."""
    columns = spec.columns
    for one, other in (("x", "y"), ("y", "x")):
        if getattr(columns, one) is not None and getattr(columns, other) is None:
            yield ("columns", one), f"given without a column for {other}"
    lengths = [key for key in _LENGTH_COLUMNS if getattr(columns, key) is not None]
    if lengths and spec.unit is None:
        yield ("unit",), "missing; needs mm, mil or inch, as there are columns of lengths"
    if columns.x is not None and spec.seen_from is None:
        yield (
            ("seen_from",),
            "missing; needs the side of the board that x and y are drawn from, or own_side",
        )
    if columns.side is None and spec.sides:
        yield ("sides",), "given without a column for side"
    if columns.board is None and spec.boards:
        yield ("boards",), "given without a column for board"
    if columns.type is None and spec.types:
        yield ("types",), "given without a column for type"
    if spec.seen_from == "own_side" and columns.side is None and spec.side is None:
        yield ("side",), "missing; with own_side every part needs a side or a column for it"
