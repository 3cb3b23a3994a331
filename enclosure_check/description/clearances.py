"""Things that cannot be where they are: boards that share space, bodies that reach into boards."""

from __future__ import annotations

from collections.abc import Mapping
from itertools import combinations
from typing import TYPE_CHECKING

from enclosure_check.description.case import BoardCase, PartCase
from enclosure_check.description.frames import Vector
from enclosure_check.description.names import WallName
from enclosure_check.description.remarks import MOST_WARNINGS, ROUNDING_MM, Path, Remarks

if TYPE_CHECKING:
    from enclosure_check.description.document import Document


def check_boards(document: Document, boards: dict[str, BoardCase], remarks: Remarks) -> None:
    """Refuse boards that share space with one named before them."""
    for first, second in combinations(boards.values(), 2):
        shared = shared_space(first.low_mm, first.size_mm, second.low_mm, second.size_mm)
        if shared is not None:
            remarks.error(
                _place(("boards", second.name), document.boards[second.name].from_walls_mm),
                f"shares {_words(shared)} with board {first.name}: no two boards can be in one "
                "place. Look at `from_walls_mm` and the sizes",
            )


def check_bodies(
    document: Document,
    parts: dict[str, PartCase],
    boards: dict[str, BoardCase],
    remarks: Remarks,
) -> None:
    """Refuse bodies in the air that reach into a board; warn of parts on another face that do."""
    for board in boards.values():
        across = board.axis
        back, front = board.low_mm[across], board.high_mm[across]
        for part in parts.values():
            # A board is thin: most parts lie before it or behind it.
            start = part.low_mm[across]
            if start >= front or start + part.size_mm[across] <= back or part.host == board.name:
                continue
            shared = shared_space(part.low_mm, part.size_mm, board.low_mm, board.size_mm)
            if shared is None:
                continue
            path = ("parts", part.name)
            if part.place == "air":
                remarks.error(
                    _place(path, document.parts[part.name].from_walls_mm),
                    f"shares {_words(shared)} with board {board.name}. Look at `from_walls_mm` and "
                    "the sizes",
                )
            elif len(remarks.warnings) < MOST_WARNINGS:
                remarks.warn(
                    path,
                    f"reaches into board {board.name}, {_words(shared)}: too tall, or in the "
                    "wrong place; computed as if it did not",
                )


def _place(path: Path, from_walls: Mapping[WallName, float]) -> Path:
    """Give where a document says how far something is from a wall, if it does."""
    return (*path, "from_walls_mm", next(iter(from_walls))) if from_walls else path


def shared_space(low: Vector, size: Vector, other_low: Vector, other_size: Vector) -> Vector | None:
    """Give the edges of what two boxes share [mm]; None where they touch or stand apart."""
    edges = [
        min(a + a_size, b + b_size) - max(a, b)
        for a, a_size, b, b_size in zip(low, size, other_low, other_size, strict=True)
    ]
    return (edges[0], edges[1], edges[2]) if min(edges) > ROUNDING_MM else None


def _words(size: Vector) -> str:
    return " x ".join(f"{edge:.3g}" for edge in size) + " mm"
