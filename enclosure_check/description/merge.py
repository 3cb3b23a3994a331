"""JSON merge patches (RFC 7396) on nodes, so that every value keeps its place in the file."""

from collections.abc import Iterator
from typing import overload

from enclosure_check.description.problems import Path
from enclosure_check.description.yaml_nodes import (
    MappingNode,
    Node,
    ScalarNode,
    SequenceNode,
    is_null,
)


@overload
def merge_patch(target: MappingNode, patch: MappingNode) -> MappingNode: ...
@overload
def merge_patch(target: Node | None, patch: Node) -> Node: ...
def merge_patch(target: Node | None, patch: Node) -> Node:
    """Give the target as the patch changes it; neither is changed itself.

    Values and keys keep the position of the side they came from; the position of a key whose
    null in the patch removed it is kept in ``removed``.

    Parameters
    ----------
    target
        What is patched; None where there is nothing yet.
    patch
        The patch: its mappings are merged, null removes, anything else replaces.

    References
    ----------
    P. Hoffman, J. Snell, "JSON Merge Patch", RFC 7396 (2014), section 2.
    """
    if not isinstance(patch, MappingNode):
        return patch
    if isinstance(target, MappingNode):
        entries, marks, removed = dict(target.entries), dict(target.marks), dict(target.removed)
        line, column = target.line, target.column
    else:
        entries, marks, removed = {}, {}, {}
        line, column = patch.line, patch.column
    for key, value in patch.entries.items():
        if is_null(value):
            entries.pop(key, None)
            marks.pop(key, None)
            removed[key] = patch.marks[key]
            continue
        old = entries.get(key)
        entries[key] = merge_patch(old, value)
        if not (isinstance(old, MappingNode) and isinstance(value, MappingNode)):
            marks[key] = patch.marks[key]
        removed.pop(key, None)
    return MappingNode(entries, marks, line, column, removed)


def null_paths(node: Node, path: Path = ()) -> Iterator[Path]:
    """Give the paths of the keys that are null or were removed by a patch."""
    if isinstance(node, MappingNode):
        for key in node.removed:
            yield (*path, key)
        for key, value in node.entries.items():
            if is_null(value):
                yield (*path, key)
            elif not isinstance(value, ScalarNode):
                yield from null_paths(value, (*path, key))
    elif isinstance(node, SequenceNode):
        for index, item in enumerate(node.items):
            yield from null_paths(item, (*path, index))
