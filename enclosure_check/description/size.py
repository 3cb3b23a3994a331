"""How large a document is for one run, and the bound that keeps a stranger's document quick.

Time and memory of a check grow with what is in the box and with the number of conditions. Points
stand for that: at most some 3 ms of processor time each where this was measured, with 1 to 500
parts, 1 to 24 boards and 1 to 60 conditions. Bodies in the air see each other and weigh more, for
the memory that takes: 240 of them took 558 MB.
"""

from collections.abc import Sequence

from enclosure_check.description.case import Case
from enclosure_check.description.problems import DocumentError, Problem

MOST_POINTS = 1500
_OF_CASE, _OF_BOARD, _OF_PART, _OF_BODY_IN_AIR, _OF_FEATURE = 10, 20, 1, 10, 0.25


def points(case: Case) -> float:
    """Give the size of one case in points."""
    in_air = sum(part.place == "air" for part in case.parts.values())
    features = sum(
        len(board.zones) + len(board.stand_offs) + len(board.fillers) + 20 * len(board.shield_cans)
        for board in case.boards.values()
    ) + sum(len(wall.cables) for wall in case.walls.values())
    return (
        _OF_CASE
        + _OF_BOARD * len(case.boards)
        + _OF_PART * (len(case.parts) - in_air)
        + _OF_BODY_IN_AIR * in_air
        + _OF_FEATURE * features
    )


def refuse_large(file: str, cases: Sequence[Case]) -> None:
    """Refuse what takes too long or too much memory for one run.

    Raises
    ------
    DocumentError
        When the cases together have more than `MOST_POINTS`.
    """
    total = sum(map(points, cases))
    if total <= MOST_POINTS:
        return
    first = cases[0]
    raise DocumentError(
        [
            Problem(
                file,
                1,
                1,
                "",
                f"too large for one run: {len(cases)} conditions, the first with "
                f"{len(first.parts)} parts and {len(first.boards)} boards, count {total:.0f} "
                f"points, allowed: {MOST_POINTS}; fold small parts, check fewer conditions at a "
                "time with --condition, or if you trust the document allow it with --large",
            )
        ]
    )
