"""One number of a document changed: the case it then makes, for derivatives by rebuilding."""

from __future__ import annotations

from functools import cached_property
from typing import TYPE_CHECKING

from enclosure_check.description.combinations import BASE
from enclosure_check.description.merge import merge_patch
from enclosure_check.description.problems import DocumentError, FieldErrors
from enclosure_check.description.quick import Known, Plain, plainly_valid, validated
from enclosure_check.description.resolve import resolve
from enclosure_check.description.yaml_nodes import (
    MappingNode,
    Node,
    ScalarNode,
    SequenceNode,
)

if TYPE_CHECKING:
    from enclosure_check.description.case import Case
    from enclosure_check.description.document import Document
    from enclosure_check.description.listed import Listed

Key = tuple[str, ...]


class Variation:
    """A document under one option and condition, whose numbers can be changed one at a time."""

    def __init__(
        self,
        node: MappingNode,
        file: str,
        option: str | None,
        condition: str,
        listed: Listed | None = None,
    ) -> None:
        own = ("options", "conditions")
        merged = MappingNode(
            {key: value for key, value in node.entries.items() if key not in own},
            {key: mark for key, mark in node.marks.items() if key not in own},
            node.line,
            node.column,
        )
        for section, name in (("options", option), ("conditions", condition)):
            patches = node.entries.get(section)
            if isinstance(patches, MappingNode) and name in patches.entries:
                patch = patches.entries[name]
                if isinstance(patch, MappingNode):
                    merged = merge_patch(merged, patch)
        self.node = merged
        self._file, self._option, self._condition = file, option, condition
        self._listed = listed
        self._known: Known = {}

    @cached_property
    def document(self) -> Document:
        """The document as it stands."""
        return validated(self.node, self._file, self._known)

    def case_with(self, path: Key, value: float) -> Case | None:
        """Give the case with another number at a path; None where that is no valid document."""
        node = _with(self.node, path, value)
        assert isinstance(node, MappingNode)
        document = plainly_valid(node, self._known)
        if document is None and isinstance(self.document, Plain):
            # All else is plainly valid, and a number out of its bounds is by no other rule.
            return None
        try:
            document = document or validated(node, self._file, self._known)
            return resolve(document, self._condition or BASE, self._option, self._listed)
        except (DocumentError, FieldErrors):
            return None


def _with(node: Node, path: Key, value: float) -> Node:
    """Copy a document with another number at a path, sharing all the rest."""
    if isinstance(node, ScalarNode):
        return ScalarNode(value, node.line, node.column, f"{value:.17g}")
    step, rest = path[0], path[1:]
    if isinstance(node, SequenceNode):
        items = list(node.items)
        items[int(step)] = _with(items[int(step)], rest, value)
        return SequenceNode(tuple(items), node.line, node.column)
    entries = {**node.entries, step: _with(node.entries[step], rest, value)}
    return MappingNode(entries, node.marks, node.line, node.column, node.removed)
