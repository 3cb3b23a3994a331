"""Where the parts and walls of a document stand in it, so that findings can point there."""

from collections.abc import Iterable, Mapping

from enclosure_check.description.problems import Path
from enclosure_check.description.yaml_nodes import MappingNode, Mark, locate
from enclosure_check.records import dataclass, field


@dataclass(frozen=True)
class Positions:
    """Line and column, both from 1, of each part and wall of a document by its name."""

    parts: Mapping[str, Mark] = field(default_factory=dict)
    walls: Mapping[str, Mark] = field(default_factory=dict)
    files: Mapping[str, str] = field(default_factory=dict)
    """The part list a part stands in, of those that stand in one."""


def positions(node: MappingNode, walls: Iterable[str]) -> Positions:
    """Give the positions in a document, patched by its option and condition.

    A part stands where its key does: in a patch where only that names it. A wall that is not
    described by itself stands where the defaults for walls do, else where the box does.
    """
    listed = node.entries.get("parts")
    parts = listed.entries if isinstance(listed, MappingNode) else {}
    return Positions(
        {name: locate(node, ("parts", name), at_key=True) for name in parts},
        {name: _wall(node, name) for name in walls},
    )


def _wall(node: MappingNode, name: str) -> Mark:
    ways: tuple[Path, ...] = (("walls", name), ("defaults", "wall"))
    for path in ways:
        if _is_there(node, path):
            return locate(node, path, at_key=True)
    return locate(node, ("box",), at_key=True)


def _is_there(node: MappingNode, path: Path) -> bool:
    here: object = node
    for step in path:
        if not isinstance(here, MappingNode) or str(step) not in here.entries:
            return False
        here = here.entries[str(step)]
    return True
