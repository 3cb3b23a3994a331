"""From the loader's marks to the positions in findings."""

from collections.abc import Mapping

from enclosure_check.findings.results import Position


def position_of(
    marks: Mapping[str, tuple[int, int]], name: str, files: Mapping[str, str] | None = None
) -> Position | None:
    """Give where something stands, None for what has no place of its own.

    ``files`` tells the file of what does not stand in the document itself.
    """
    mark = marks.get(name)
    return None if mark is None else Position(*mark, None if files is None else files.get(name))
