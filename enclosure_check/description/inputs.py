"""Every value of a document by its path, to be kept with a result and compared later."""

from collections.abc import Iterator
from math import isfinite

from enclosure_check.description.merge import merge_patch
from enclosure_check.description.problems import LONGEST_QUOTE, quoted
from enclosure_check.description.yaml_nodes import MappingNode, Node, ScalarNode, SequenceNode

Input = float | bool | str | None


def document_inputs(node: MappingNode, option: str | None) -> dict[str, Input]:
    """Give the values a document states, with an option applied, by their dotted paths.

    Conditions keep their own paths, as in ``conditions.noon.surroundings.air_c``; the other
    options are left out. A null is kept in conditions, where it removes. Numbers are floats. Items
    of lists are numbered from 0.

    Parameters
    ----------
    node
        The document as written.
    option
        Name of one of its options, or None.
    """
    options = node.entries.get("options")
    entries = {key: value for key, value in node.entries.items() if key != "options"}
    merged = MappingNode(entries, node.marks, node.line, node.column)
    if option is not None and isinstance(options, MappingNode):
        patch = options.entries[option]
        assert isinstance(patch, MappingNode)
        merged = merge_patch(merged, patch)
    return dict(_flattened(merged, ""))


def _flattened(node: Node, path: str) -> Iterator[tuple[str, Input]]:
    if isinstance(node, ScalarNode):
        if node.value is not None or path.startswith("conditions."):
            yield path, _value(node)
        return
    lead = f"{path}." if path else ""
    if isinstance(node, SequenceNode):
        for place, item in enumerate(node.items):
            yield from _flattened(item, f"{lead}{place}")
    else:
        for key, value in node.entries.items():
            yield from _flattened(value, lead + _step(key))


def _value(node: ScalarNode) -> Input:
    """Give a value: numbers as floats; as text what a patch replaces before anybody uses it."""
    value = node.value
    if isinstance(value, bool | str) or value is None:
        return value
    return float(value) if isfinite(value) else node.text


def _step(key: str) -> str:
    """Give a key as one step of a path: in quotes where it would not read as one."""
    plain = key.isprintable() and 0 < len(key) <= LONGEST_QUOTE and not set(key) & set(".'\"")
    return key if plain else quoted(key, len(key))
