"""How large a document is for one run, and the bound that keeps a stranger's document quick.

Time and memory of a check grow with what is in the box and with the number of conditions. Points
stand for that: at most some 3 ms of processor time each where this was measured, with 1 to 500
parts, 1 to 24 boards and 1 to 60 conditions. Bodies in the air see each other and weigh more, for
the memory that takes: 240 of them took 558 MB. Parts on one board or wall warm each other, pair by
pair: 500 of them took 2,180 MB, which the most in one case is chosen by.
"""

from collections import Counter
from collections.abc import Sequence

from enclosure_check.description.case import Case
from enclosure_check.description.problems import DocumentError, Problem

MOST_POINTS = 1500
MOST_POINTS_OF_CASE, MOST_PAIRS_OF_CASE = 800, 40_000
_PAIRS_OF_A_POINT = 200
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
        + pairs(case) / _PAIRS_OF_A_POINT
    )


def pairs(case: Case) -> int:
    """Give the number of pairs of parts that share a board or wall, each part with itself too."""
    hosts = Counter(part.host for part in case.parts.values() if part.place != "air")
    return sum(count * count for count in hosts.values())


def refuse_large(file: str, cases: Sequence[Case]) -> None:
    """Refuse what takes too long or too much memory for one run.

    Raises
    ------
    DocumentError
        When the cases together have more than `MOST_POINTS`, or one by itself too many.
    """
    of_each = [points(case) for case in cases]
    largest = cases[of_each.index(max(of_each))]
    most_pairs = max(map(pairs, cases))
    if most_pairs > MOST_PAIRS_OF_CASE:
        what = (
            f"{len(largest.parts)} parts make {most_pairs} pairs on their boards, allowed: "
            f"{MOST_PAIRS_OF_CASE} ({MOST_PAIRS_OF_CASE**0.5:.0f} parts on one board); fold small "
            "parts"
        )
    elif max(of_each) > MOST_POINTS_OF_CASE:
        what = (
            f"{len(largest.parts)} parts and {len(largest.boards)} boards count "
            f"{max(of_each):.0f} points, allowed: {MOST_POINTS_OF_CASE}; fold small parts"
        )
    elif sum(of_each) > MOST_POINTS:
        what = (
            f"{len(cases)} conditions, the largest with {len(largest.parts)} parts and "
            f"{len(largest.boards)} boards, count {sum(of_each):.0f} points, allowed: "
            f"{MOST_POINTS}; fold small parts, check fewer conditions at a time with --condition"
        )
    else:
        return
    message = f"too large for one run: {what}, or if you trust the document allow it with --large"
    raise DocumentError([Problem(file, 1, 1, "", message)])
