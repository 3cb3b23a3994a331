"""Load a document: read, patch, validate and resolve every combination it describes."""

from __future__ import annotations

import hashlib
from collections.abc import Iterator, Mapping, Sequence
from contextlib import suppress
from itertools import chain, islice
from typing import TYPE_CHECKING

from enclosure_check.description.case import Case
from enclosure_check.description.combinations import BASE, MAX_PROBLEMS, Checked, Combination
from enclosure_check.description.inputs import Input, document_inputs
from enclosure_check.description.merge import null_paths
from enclosure_check.description.problems import (
    DocumentError,
    Path,
    Problem,
    dotted,
    nearest,
    quoted,
)
from enclosure_check.description.quick import is_mapping_by_name
from enclosure_check.description.remarks import MOST_SPELLINGS
from enclosure_check.description.yaml_nodes import (
    MAX_BYTES,
    MappingNode,
    Node,
    ScalarNode,
    is_null,
    locate,
    read_yaml,
)
from enclosure_check.records import dataclass, field

if TYPE_CHECKING:
    from enclosure_check.description.listed import Listed, ListFile, PartLists
    from enclosure_check.description.variation import Variation

MAX_COMBINATIONS = 200
MAX_PARTS_IN_COMBINATIONS = 10_000
_LONGEST_NAME = 80


@dataclass(frozen=True)
class LoadedDocument:
    """A document found valid in every combination of its options and conditions.

    ``file`` is its name as given, ``node`` all of it as written, ``digest`` the SHA-256 of its
    bytes in hexadecimal. ``node`` holds the parts of part lists too, below the document's own.
    """

    file: str
    node: MappingNode
    digest: str
    _cases: Mapping[Combination, Case] = field(repr=False, compare=False)
    _written: MappingNode | None = field(default=None, repr=False, compare=False)
    """The document without the parts of its lists, where it has lists."""
    _lists: PartLists | None = field(default=None, repr=False, compare=False)

    def place(self, path: Path, *, at_key: bool = True) -> tuple[str, int, int]:
        """Give file, line and column of what stands at a path: parts may stand in part lists."""
        line, column = locate(self.node, path, at_key=at_key)
        file, line = self._lists.place(line) if self._lists is not None else (self.file, line)
        return file, line, column

    def condition_names(self) -> tuple[str, ...]:
        """Give the names of the conditions, in their order; empty when the base itself runs."""
        return tuple(_named(self.node, "conditions"))

    def option_names(self) -> tuple[str, ...]:
        """Give the names of the options, in their order."""
        return tuple(_named(self.node, "options"))

    def inputs(self, option: str | None = None) -> dict[str, Input]:
        """Give every value stated, with an option applied, by its dotted path."""
        return document_inputs(self._under(option, None)[0], option)

    def part_lists(self, option: str | None = None) -> tuple[ListFile, ...]:
        """Give the part lists read, those of an option in place of the document's own."""
        listed = self._under(option, None)[1]
        return () if listed is None else listed.files

    def _under(
        self, option: str | None, condition: str | None
    ) -> tuple[MappingNode, Listed | None]:
        """Give the document with the parts of the lists it has under an option and condition."""
        if self._lists is None or self._written is None:
            return self.node, None
        patches = []
        for section, name in (("options", option), ("conditions", condition)):
            patch = _keys(self._written.entries.get(section)).get(name or "")
            if isinstance(patch, MappingNode):
                patches.append(patch)
        return self._lists.put_in(self._written, patches)

    def variation(self, case: Case) -> Variation:
        """Give the document of one of its cases, whose numbers can be changed."""
        from enclosure_check.description.variation import Variation

        node, listed = self._under(case.option, case.condition)
        return Variation(node, self.file, case.option, case.condition, listed)

    def cases(
        self, *, option: str | None = None, conditions: Sequence[str] | None = None
    ) -> tuple[Case, ...]:
        """Give the cases of one option, or of none, under all or the named conditions.

        Without any condition in the document the base itself is the one case, named ``base``.

        Raises
        ------
        DocumentError
            When a name is not one of the document's.
        """
        problems = []
        if option is not None and option not in self.option_names():
            problems.append(self.unknown("options", "option", option, self.option_names()))
        existing = self.condition_names() or (BASE,)
        wanted = existing if conditions is None else tuple(conditions)
        problems += [
            self.unknown("conditions", "condition", name, existing)
            for name in wanted
            if name not in existing
        ]
        if problems:
            raise DocumentError(problems)
        keys = wanted if self.condition_names() else [None for _ in wanted]
        return tuple(self._cases[option, key] for key in keys)

    def unknown(self, key: str, what: str, given: str, names: Sequence[str]) -> Problem:
        """Give the problem of a name that is none of the document's under a key."""
        known = f"; there is {', '.join(map(quoted, names))}" if names else f"; there is no {what}"
        message = f"given {quoted(given)}, which is no {what} here{nearest(given, names) or known}"
        return Problem(self.file, *locate(self.node, (key,), at_key=True), key, message)


def load_document(path: str, *, allowed_folders: Sequence[str] = ()) -> LoadedDocument:
    """Read a document and check all of it, in every combination of options and conditions.

    An option is patched onto the base, then a condition onto that. The base as it stands is
    checked only when there are no conditions, as it runs only then.

    Parameters
    ----------
    path
        The document.
    allowed_folders
        Folders, besides the document's own, that its part lists may lie in.

    Raises
    ------
    DocumentError
        With every problem at once, each at its place in the document or a part list.
    """
    data = _read(path)
    node = read_yaml(data, path)
    problems: list[Problem] = []
    options = _patches(node, "options", path, problems)
    conditions = _patches(node, "conditions", path, problems)
    lists = _part_lists(node, options, conditions, path, allowed_folders)
    bases = _bases(node, options, conditions, lists)
    problems += islice(_idle_removals(bases, options, conditions, path), MAX_PROBLEMS)
    combinations: list[Combination] = [
        (option, condition) for option in (None, *options) for condition in conditions or (None,)
    ]
    if len(combinations) > MAX_COMBINATIONS:
        message = (
            f"{len(options) + 1} options (counting none) times {max(len(conditions), 1)} "
            f"conditions are more than {MAX_COMBINATIONS} combinations"
        )
        at = locate(node, ("options",), at_key=True)
        raise DocumentError([*problems, Problem(path, *at, "options", message)])
    all_refused = not conditions and any(_named(node, "conditions"))
    checked = Checked(path, node, options, conditions, _named(node, "conditions"), lists)
    most = max((len(_keys(each.entries.get("parts"))) for each in bases), default=0)
    if most * len(combinations) > MAX_PARTS_IN_COMBINATIONS:
        message = (
            f"{most} parts in {len(combinations)} combinations of options and conditions are more "
            f"than {MAX_PARTS_IN_COMBINATIONS}"
        )
        problems.append(Problem(path, *locate(node, ("parts",), at_key=True), "parts", message))
        all_refused = True
    if not all_refused:
        checked.check(combinations)
        problems += checked.problems(combinations)
    if problems:
        raise DocumentError(problems if lists is None else map(lists.placed, problems))
    digest = hashlib.sha256(data).hexdigest()
    whole = node if lists is None else lists.put_in(node, ())[0]
    return LoadedDocument(path, whole, digest, checked.cases, node, lists)


def _read(path: str) -> bytes:
    try:
        with open(path, "rb") as file:
            return file.read(MAX_BYTES + 1)
    except (OSError, ValueError) as error:
        reason = error.strerror if isinstance(error, OSError) and error.strerror else str(error)
        raise DocumentError([Problem(path, 1, 1, "", f"cannot be read: {reason}")]) from None


# Part lists -------------------------------------------------------------------------------


def _part_lists(
    node: MappingNode,
    options: Mapping[str, MappingNode],
    conditions: Mapping[str, MappingNode],
    file: str,
    allowed: Sequence[str],
) -> PartLists | None:
    """Give the reader of part lists, None for a document without any."""
    nodes = (node, *options.values(), *conditions.values())
    if not any("part_lists" in each.entries for each in nodes):
        return None
    from enclosure_check.description.listed import Mentioned, PartLists

    return PartLists(file, allowed, Mentioned.of(nodes))


def _bases(
    node: MappingNode,
    options: Mapping[str, MappingNode],
    conditions: Mapping[str, MappingNode],
    lists: PartLists | None,
) -> list[MappingNode]:
    """Give the document with the listed parts under every patch of the lists; at least as it is.

    What is wrong with the lists is told when the combinations are checked.
    """
    if lists is None:
        return [node]
    bases = [node]
    for patches in ((), *((each,) for each in (*options.values(), *conditions.values()))):
        if not patches or "part_lists" in patches[0].entries:
            with suppress(DocumentError):
                bases.append(lists.put_in(node, patches)[0])
    return bases


# Patches ----------------------------------------------------------------------------------


def _named(node: MappingNode, key: str) -> Iterator[str]:
    """Give the names of the options or conditions; a null stands for none."""
    section = node.entries.get(key)
    if isinstance(section, MappingNode):
        yield from (name for name, patch in section.entries.items() if not is_null(patch))


def _patches(
    node: MappingNode, key: str, file: str, problems: list[Problem]
) -> dict[str, MappingNode]:
    """Give the options or conditions that can be used; the others become problems."""

    def refuse(path: Path, message: str) -> None:
        at = locate(node, path, at_key=True)
        problems.append(Problem(file, *at, dotted(path), message))

    section = node.entries.get(key)
    if section is None or is_null(section):
        return {}
    if not isinstance(section, MappingNode):
        refuse((key,), f"given {_kind(section)}, allowed: a mapping of patches by name")
        return {}
    patches: dict[str, MappingNode] = {}
    for name in _named(node, key):
        patch = section.entries[name]
        inner = [each for each in ("conditions", "options") if each in _keys(patch)]
        if not 0 < len(name) <= _LONGEST_NAME:
            refuse((key, name), f"given a name of {len(name)} characters, allowed: 1 to 80")
        if not isinstance(patch, MappingNode):
            message = f"given {_kind(patch)}, allowed: a mapping of what changes"
            refuse((key, name), message)
        elif inner:
            for each in inner:
                refuse((key, name, each), "a patch cannot have options or conditions of its own")
        else:
            patches[name] = patch
    return patches


def _keys(node: Node | None) -> Mapping[str, Node]:
    return node.entries if isinstance(node, MappingNode) else {}


def _kind(node: Node) -> str:
    if isinstance(node, ScalarNode):
        return quoted(node.text)
    return "a mapping" if isinstance(node, MappingNode) else "a list"


def _idle_removals(
    bases: Sequence[MappingNode],
    options: Mapping[str, MappingNode],
    conditions: Mapping[str, MappingNode],
    file: str,
) -> Iterator[Problem]:
    """Refuse a null in a patch that removes a named thing which is nowhere: it is misspelt."""
    told = 0
    for key, patches, patched in (
        ("options", options, bases),
        ("conditions", conditions, [*bases, *options.values()]),
    ):
        for name, patch in patches.items():
            for path in null_paths(patch):
                if not is_mapping_by_name(path[:-1]):
                    continue
                gone = str(path[-1])
                owners = [_keys(_at(each, path[:-1])) for each in patched]
                if not any(gone in owner for owner in owners):
                    spell = told < MOST_SPELLINGS
                    near = nearest(gone, chain.from_iterable(owners)) if spell else ""
                    told += 1
                    message = f"removes nothing, there is no {quoted(gone)}{near}"
                    at = locate(patch, path, at_key=True)
                    yield Problem(file, *at, dotted((key, name, *path)), message)


def _at(node: Node, path: Path) -> Node | None:
    for step in path:
        child = _keys(node).get(str(step))
        if child is None:
            return None
        node = child
    return node
