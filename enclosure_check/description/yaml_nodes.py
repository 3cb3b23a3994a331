"""Read a YAML file into nodes that know their line and column, refusing what is not plain data.

Duplicate keys, tags, merge keys, several documents, aliases that multiply and deep nesting are
refused here; everything wrong with a file is collected before it is raised. Only ``true``,
``false``, ``null``, ``~``, nothing and decimal numbers are more than text: ``on``, ``no``,
``12:30``, ``0x1F``, ``1_000`` and dates stay text, ``1e-3`` and ``010`` are numbers.
"""

import re
from collections.abc import Iterator
from itertools import islice
from typing import Any, NamedTuple

import yaml

from enclosure_check.description.problems import DocumentError, Path, Problem, dotted, quoted
from enclosure_check.records import dataclass, field

MAX_BYTES = 1 << 20
MAX_DEPTH = 32
MAX_ALIASED_NODES = 20_000
MAX_PROBLEMS = 500
# Characters that are not allowed are shown up to this many.
_MOST_CHARACTERS = 5
# Nesting this deep ends reading: no slip of the hand makes it.
_HOPELESS_DEPTH = 200

Mark = tuple[int, int]
Scalar = str | int | float | bool | None

# Each text can match in one way only, so that a megabyte of digits is refused at once.
_NUMBER = re.compile(r"[-+]?(?:[0-9]+(?:\.[0-9]*)?|\.[0-9]+)(?:[eE][-+]?[0-9]+)?\Z")
_INTEGER = re.compile(r"[-+]?[0-9]{1,15}\Z")
_NOT_FINITE = re.compile(r"[-+]?\.(?:inf|Inf|INF)\Z|\.(?:nan|NaN|NAN)\Z")
_LINE_BREAK = re.compile(r"\r\n|\r|\n")
# Control characters but tab and line breaks; other line separators; byte order marks.
_FORBIDDEN = re.compile("[\x00-\x08\x0b\x0c\x0e-\x1f\x7f-\x9f\u2028\u2029\ufeff\ufffe\uffff]")
# The same inside a text, where escapes may have put them.
_FORBIDDEN_TEXT = re.compile("[\x00-\x08\x0b-\x1f\x7f-\x9f\u2028\u2029\ud800-\udfff]")
_BYTE_ORDER_MARKS = (
    (b"\xff\xfe\x00\x00", "UTF-32"),
    (b"\x00\x00\xfe\xff", "UTF-32"),
    (b"\xff\xfe", "UTF-16"),
    (b"\xfe\xff", "UTF-16"),
)
_LOADER: Any = getattr(yaml, "CSafeLoader", yaml.SafeLoader)


class ScalarNode(NamedTuple):
    """A single value and where it stands; ``text`` is what was written, without its quotes."""

    value: Scalar
    line: int
    column: int
    text: str


@dataclass(frozen=True)
class SequenceNode:
    """A list and where it starts."""

    items: "tuple[Node, ...]"
    line: int
    column: int


@dataclass(frozen=True)
class MappingNode:
    """A mapping: its values, where its keys stand, and where a patch removed some."""

    entries: "dict[str, Node]"
    marks: dict[str, Mark]
    line: int
    column: int
    removed: dict[str, Mark] = field(default_factory=dict)


Node = ScalarNode | SequenceNode | MappingNode


def plain_value(text: str) -> Scalar:
    """Give the value an unquoted scalar stands for."""
    if text in ("", "~", "null"):
        return None
    if text in ("true", "false"):
        return text == "true"
    if _INTEGER.match(text):
        return int(text)
    if _NUMBER.match(text):
        return float(text)
    if _NOT_FINITE.match(text):
        return float(text.lower().replace(".", ""))
    return text


def is_null(node: Node) -> bool:
    """Tell whether a node is the null value."""
    return isinstance(node, ScalarNode) and node.value is None


def to_data(node: Node) -> Any:
    """Give the plain data of a node.

    Entries whose value is null are left out of mappings (null means back to the default); null
    items of lists stay None.
    """
    if isinstance(node, ScalarNode):
        return node.value
    if isinstance(node, SequenceNode):
        return [to_data(item) for item in node.items]
    return {key: to_data(value) for key, value in node.entries.items() if not is_null(value)}


def locate(node: Node, path: Path, *, at_key: bool = False) -> Mark:
    """Give the line and column of what stands at a path.

    That is the value's position for single values and list items, the key's for mappings, lists
    and when ``at_key`` is set. Where the path ends early, it is the place where a patch removed
    the missing key, else the key of the nearest ancestor that exists.
    """
    mark = (node.line, node.column)
    here = node
    for step in path:
        if isinstance(here, MappingNode):
            key = str(step)
            if key not in here.entries:
                return here.removed.get(key, mark)
            mark, here = here.marks[key], here.entries[key]
        elif isinstance(here, SequenceNode) and isinstance(step, int) and step < len(here.items):
            here = here.items[step]
            mark = (here.line, here.column)
        else:
            return mark
    return (here.line, here.column) if isinstance(here, ScalarNode) and not at_key else mark


def read_yaml(data: bytes, file: str) -> MappingNode:
    """Read a YAML file whose top level is a mapping.

    Parameters
    ----------
    data
        The file's bytes.
    file
        The file's name, for the messages.

    Raises
    ------
    DocumentError
        With everything that makes the file unreadable or unfit.
    """
    reader = _Reader(file)
    text = reader.decode(data)
    root = reader.read(text) if text is not None else None
    if isinstance(root, MappingNode) and not reader.problems:
        return root
    raise DocumentError(reader.problems)


class _Stop(Exception):  # noqa: N818 - ends reading, is no error
    """Reading cannot or need not go on."""


class _Frame:
    """A mapping or list being read, and what it will cost to repeat it."""

    __slots__ = (
        "anchor",
        "at_value",
        "column",
        "entries",
        "height",
        "items",
        "key",
        "line",
        "marks",
        "nodes",
    )

    def __init__(self, line: int, column: int, anchor: str | None, is_mapping: bool) -> None:
        self.line, self.column, self.anchor = line, column, anchor
        self.entries: dict[str, Node] | None = {} if is_mapping else None
        self.marks: dict[str, Mark] = {}
        self.items: list[Node] = []
        # Of a mapping: whether a value comes next, and its key (None when the key was refused).
        self.at_value = False
        self.key: str | None = None
        self.nodes, self.height = 1, 1

    def at_key(self) -> bool:
        return self.entries is not None and not self.at_value


class _Reader:
    """Turns the parser's events into nodes and collects what is wrong."""

    def __init__(self, file: str) -> None:
        self.file = file
        self.problems: list[Problem] = []
        self.stack: list[_Frame] = []
        self.root: Node | None = None
        # Finished nodes by anchor with their number of nodes and height; None while open.
        self.anchors: dict[str, tuple[Node, int, int] | None] = {}
        self.aliased = 0
        self.skipped_depth = 0
        self.told_depth = False
        # Whether characters were replaced, which may itself break the syntax.
        self.replaced = False

    def problem(self, mark: Mark, message: str, field: str | None = None) -> None:
        if field is None:
            field = dotted(tuple(self._path()))
        self.problems.append(Problem(self.file, *mark, field, message))
        if len(self.problems) == MAX_PROBLEMS:
            self.problems.append(Problem(self.file, *mark, "", "too many problems; stopped here"))
            raise _Stop

    def _path(self) -> Iterator[str | int]:
        for frame in self.stack:
            if frame.entries is None:
                yield len(frame.items)
            elif frame.at_value and frame.key is not None:
                yield frame.key

    # From bytes to text -------------------------------------------------------------------

    def decode(self, data: bytes) -> str | None:
        """Give the text of a file, None when it has none that can be read."""
        if len(data) > MAX_BYTES:
            self.problem((1, 1), f"larger than {MAX_BYTES} bytes (1 MiB)")
            return None
        for mark, name in _BYTE_ORDER_MARKS:
            if data.startswith(mark):
                self.problem((1, 1), f"encoded in {name}; save the file in UTF-8")
                return None
        start = 3 if data.startswith(b"\xef\xbb\xbf") else 0
        try:
            text = data[start:].decode()
        except UnicodeDecodeError as error:
            at = start + error.start
            before = data[start:at].decode()
            self.problem(
                _mark_of(before, len(before)),
                f"not UTF-8: byte 0x{data[at]:02X} at offset {at} of the file",
            )
            return None
        for found in islice(_FORBIDDEN.finditer(text), _MOST_CHARACTERS):
            what = f"character U+{ord(found.group()):04X} is not allowed in a document"
            self.problem(_mark_of(text, found.start()), what)
        if self.problems:
            self.replaced = True
            text, count = _FORBIDDEN.subn("\ufffd", text)
            if count > _MOST_CHARACTERS:
                last = self.problems[-1]
                more = f"and {count - _MOST_CHARACTERS} more such characters"
                self.problem((last.line, last.column), more)
        return text

    # From events to nodes -----------------------------------------------------------------

    def read(self, text: str) -> Node | None:
        """Give the top node, None when there is none."""
        try:
            for event in yaml.parse(text, Loader=_LOADER):
                self._take(event)
            if self.root is None or is_null(self.root):
                self.problem((1, 1), "the document is empty")
            elif not isinstance(self.root, MappingNode):
                kind = "a list" if isinstance(self.root, SequenceNode) else "a single value"
                self.problem(
                    (self.root.line, self.root.column), f"given {kind}, allowed: a mapping"
                )
        except _Stop:
            return None
        except yaml.MarkedYAMLError as error:
            mark = error.problem_mark or error.context_mark
            at = (mark.line + 1, mark.column + 1) if mark is not None else (1, 1)
            parts = [part for part in (error.context, error.problem) if part]
            self._syntax(at, ", ".join(parts))
        except (yaml.YAMLError, ValueError, OverflowError) as error:
            # The pure Python reader lets an escape beyond Unicode fail on its own.
            at = (self.stack[-1].line, self.stack[-1].column) if self.stack else (1, 1)
            self._syntax(at, str(error))
        return self.root

    def _syntax(self, mark: Mark, message: str) -> None:
        if not self.replaced:
            self.problems.append(Problem(self.file, *mark, "", f"not valid YAML: {message}"))

    def _take(self, event: Any) -> None:
        mark = (event.start_mark.line + 1, event.start_mark.column + 1)
        if self.skipped_depth:
            self._skip(event)
        elif isinstance(event, yaml.ScalarEvent):
            self._scalar(event, mark)
        elif isinstance(event, yaml.CollectionStartEvent):
            self._start(event, mark)
        elif isinstance(event, yaml.CollectionEndEvent):
            self._end()
        elif isinstance(event, yaml.AliasEvent):
            self._alias(event, mark)
        elif isinstance(event, yaml.DocumentStartEvent) and self.root is not None:
            self.problem(mark, "a second document starts here; give one document a file")
            raise _Stop

    def _scalar(self, event: Any, mark: Mark) -> None:
        text: str = event.value
        is_plain = not event.style
        self._refuse_tag(event, mark)
        if not text.isprintable() and (found := _FORBIDDEN_TEXT.search(text)):
            self.problem(mark, f"character U+{ord(found.group()):04X} is not allowed in a text")
        node = ScalarNode(plain_value(text) if is_plain else text, *mark, text)
        if event.anchor is not None:
            self.anchors[event.anchor] = (node, 1, 0)
        if self.stack and self.stack[-1].at_key():
            self._key(node.text, mark, is_plain)
        else:
            self._add(node, 1, 0)

    def _start(self, event: Any, mark: Mark) -> None:
        is_mapping = isinstance(event, yaml.MappingStartEvent)
        self._refuse_tag(event, mark)
        if self.stack and self.stack[-1].at_key():
            kind = "a mapping" if is_mapping else "a list"
            self.problem(mark, f"given {kind} as a key, allowed: text")
        if len(self.stack) >= MAX_DEPTH:
            self._refuse_depth(mark)
            self.skipped_depth = 1
            return
        if event.anchor is not None:
            self.anchors[event.anchor] = None
        self.stack.append(_Frame(*mark, event.anchor, is_mapping))

    def _skip(self, event: Any) -> None:
        """Pass over what is nested too deeply, leaving a null in its place."""
        if isinstance(event, yaml.CollectionStartEvent):
            self.skipped_depth += 1
            if self.skipped_depth > _HOPELESS_DEPTH:
                raise _Stop
        elif isinstance(event, yaml.CollectionEndEvent):
            self.skipped_depth -= 1
            if not self.skipped_depth:
                self._add(ScalarNode(None, 1, 1, ""), 1, 0)

    def _end(self) -> None:
        frame = self.stack.pop()
        node: Node
        if frame.entries is None:
            node = SequenceNode(tuple(frame.items), frame.line, frame.column)
        else:
            node = MappingNode(frame.entries, frame.marks, frame.line, frame.column)
        if frame.anchor is not None:
            self.anchors[frame.anchor] = (node, frame.nodes, frame.height)
        self._add(node, frame.nodes, frame.height)

    def _alias(self, event: Any, mark: Mark) -> None:
        stand_in = ScalarNode(None, *mark, "")
        node, nodes, height = self.anchors.get(event.anchor) or (stand_in, 1, 0)
        name = quoted(event.anchor)
        if event.anchor not in self.anchors:
            if not self.told_depth:  # else it may be in what was passed over
                self.problem(mark, f"alias {name} stands for nothing: no such anchor above")
        elif self.anchors[event.anchor] is None:
            self.problem(mark, f"alias {name} stands for what it is itself part of")
        elif len(self.stack) + height > MAX_DEPTH:
            self._refuse_depth(mark)
            node, nodes, height = stand_in, 1, 0
        elif self.aliased + nodes > MAX_ALIASED_NODES:
            if self.aliased <= MAX_ALIASED_NODES:
                self.problem(mark, f"aliases repeat more than {MAX_ALIASED_NODES} values")
            self.aliased = MAX_ALIASED_NODES + 1
            node, nodes, height = stand_in, 1, 0
        else:
            self.aliased += nodes
        if self.stack and self.stack[-1].at_key():
            if isinstance(node, ScalarNode):
                self._key(node.text, mark, is_plain=False)
            else:
                self.problem(mark, "given a mapping or list as a key, allowed: text")
                self._add(node, nodes, height)
        else:
            self._add(node, nodes, height)

    def _key(self, key: str, mark: Mark, is_plain: bool) -> None:
        frame = self.stack[-1]
        frame.key, frame.at_value = key, True
        assert frame.entries is not None
        if is_plain and key == "<<":
            self.problem(mark, "merge keys are not allowed; write the entries out")
        elif not key.isprintable():
            self.problem(mark, "this key has characters that cannot be seen")
        elif key in frame.entries:
            first = frame.marks[key][0]
            self.problem(mark, f"given twice, first in line {first}, again in line {mark[0]}")
            frame.key = None
        else:
            frame.marks[key] = mark

    def _add(self, node: Node, nodes: int, height: int) -> None:
        """Put a finished node where it belongs."""
        if not self.stack:
            self.root = node
            return
        frame = self.stack[-1]
        frame.nodes += nodes
        frame.height = max(frame.height, height + 1)
        if frame.entries is None:
            frame.items.append(node)
        elif not frame.at_value:  # a refused key
            frame.key, frame.at_value = None, True
        else:
            if frame.key is not None:
                frame.entries[frame.key] = node
            frame.key, frame.at_value = None, False

    def _refuse_tag(self, event: Any, mark: Mark) -> None:
        if event.tag is not None:
            tag = event.tag.replace("tag:yaml.org,2002:", "!!", 1)
            self.problem(mark, f"tag {quoted(tag)} is not allowed")

    def _refuse_depth(self, mark: Mark) -> None:
        if not self.told_depth:
            self.problem(mark, f"nested more than {MAX_DEPTH} deep")
        self.told_depth = True


def _mark_of(text: str, index: int) -> Mark:
    """Give line and column, from 1, of the character at an index."""
    lines = _LINE_BREAK.split(text[:index])
    return len(lines), len(lines[-1]) + 1
