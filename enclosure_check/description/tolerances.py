"""Match the dotted patterns of `tolerances` against the numbers of a document."""

from collections.abc import Iterator, Sequence

from enclosure_check.description.yaml_nodes import MappingNode, Node, ScalarNode

Path = tuple[str, ...]

# Sections whose numbers describe no physical quantity of the box that could be uncertain.
_WITHOUT_TOLERANCE = ("format", "tolerances", "measured", "requirements")


def _is_number(node: Node) -> bool:
    return (
        isinstance(node, ScalarNode)
        and isinstance(node.value, int | float)
        and not isinstance(node.value, bool)
    )


def _children(node: Node, top: bool) -> Iterator[tuple[str, Node]]:
    if isinstance(node, MappingNode):
        for key, value in node.entries.items():
            if not (top and key in _WITHOUT_TOLERANCE):
                yield key, value
    elif not isinstance(node, ScalarNode):
        yield from ((str(index), item) for index, item in enumerate(node.items))


def matches_number(node: Node, pattern: str | None, *, top: bool = False) -> bool:
    """Tell whether a dotted pattern, ``*`` standing for any one name, leads to a number.

    Names may hold dots themselves. ``pattern`` is None where it ends.
    """
    if pattern is None:
        return _is_number(node)
    step, dot, rest = pattern.partition(".")
    inner = rest if dot else None
    for key, child in _children(node, top):
        if step == "*" and matches_number(child, inner):
            return True
        if pattern == key and _is_number(child):
            return True
        if pattern.startswith(f"{key}.") and matches_number(child, pattern[len(key) + 1 :]):
            return True
    return False


def like_paths(nodes: Sequence[MappingNode], pattern: str) -> Iterator[str]:
    """Give the paths of all numbers, with the pattern's ``*`` put in at the same places."""
    steps = pattern.split(".")
    for node in nodes:
        for path in number_paths(node, top=True):
            if len(path) == len(steps):
                pairs = zip(path, steps, strict=True)
                yield ".".join("*" if step == "*" else name for name, step in pairs)


def number_paths(node: Node, *, top: bool = False) -> Iterator[Path]:
    """Give the paths of all numbers, of the whole document without what is no quantity."""
    if _is_number(node):
        yield ()
    for key, child in _children(node, top):
        for path in number_paths(child):
            yield (key, *path)


def matching_paths(node: Node, pattern: str | None, *, top: bool = True) -> Iterator[Path]:
    """Give the paths of all numbers that a dotted pattern leads to, as `matches_number` does."""
    if pattern is None:
        if _is_number(node):
            yield ()
        return
    step, dot, rest = pattern.partition(".")
    inner = rest if dot else None
    for key, child in _children(node, top):
        if step == "*":
            yield from ((key, *path) for path in matching_paths(child, inner, top=False))
        elif pattern == key and _is_number(child):
            yield (key,)
        elif pattern.startswith(f"{key}."):
            beyond = pattern[len(key) + 1 :]
            yield from ((key, *path) for path in matching_paths(child, beyond, top=False))
