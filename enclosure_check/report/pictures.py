"""Small pictures in characters that read without colour: the map of a board, the air's profile."""

from collections.abc import Sequence
from functools import lru_cache

from enclosure_check.findings.results import AirLayer, BoardFinding
from enclosure_check.report.layout import tenths

# A map is at most so many characters wide and lines high; a character is about twice as high as
# wide.
MAP_WIDTH, MAP_HEIGHT = 24, 10
HIGH_OVER_WIDE = 2.0
# Its steps, from the coldest to the hottest, and its hottest place.
STEPS = "0123456789"
HOTTEST = "*"
# Where all is this close there is nothing to draw. [K]
EVEN_K = 0.5
PROFILE_WIDTH = 30
INDENT = "    "
# Names of the edges at the left, right, upper and lower end, by where a board is seen from.
_EDGES = {
    "front": ("left", "right", "top", "bottom"),
    "right": ("front", "back", "top", "bottom"),
    "top": ("left", "right", "back", "front"),
}


def board_picture(board: BoardFinding) -> list[str]:
    """Draw a board's temperatures in steps, with a legend; nothing where they are all alike."""
    rows = board.map_c
    if not rows or not rows[0]:
        return []
    width, height = map_size(len(rows[0]), len(rows))
    means = resampled(rows, width, height)
    low, high = min(map(min, means)), max(map(max, means))
    if high - low < EVEN_K:
        return []
    left, right, upper, lower = _EDGES[board.seen_from]
    drawn = [[_step(value, low, high) for value in row] for row in means]
    across, down = _hottest(rows)
    row, column = min(int(down * height), height - 1), min(int(across * width), width - 1)
    drawn[row][column] = HOTTEST
    legend = {
        0: f"0: {tenths(low)} C, 9: {tenths(high)} C, in even steps",
        1: f"{HOTTEST}: hottest cell",
    }
    edge = len(left) + 1
    lines = [f"{INDENT}{'':{edge}}{upper:^{width}}".rstrip()]
    for index, cells in enumerate(drawn):
        named = index == (height - 1) // 2
        before, after = (left, right) if named else ("", "")
        note = legend.get(index, "")
        line = f"{INDENT}{before:{edge}}{''.join(cells)} {after:{len(right)}}   {note}"
        lines.append(line.rstrip())
    lines.append(f"{INDENT}{'':{edge}}{lower:^{width}}".rstrip())
    return lines


def map_size(across: int, down: int) -> tuple[int, int]:
    """Give the characters and lines that a map of about square cells takes in true shape."""
    wide = HIGH_OVER_WIDE * across / down
    height = min(MAP_HEIGHT, MAP_WIDTH / wide, down)
    return max(min(round(height * wide), MAP_WIDTH), 2), max(round(height), 2)


def resampled(rows: Sequence[Sequence[float]], width: int, height: int) -> list[list[float]]:
    """Give means over ``height`` rows of ``width`` cells that cover the same area."""
    down, across = _shares(len(rows), height), _shares(len(rows[0]), width)
    narrow = [[sum(part * row[at] for at, part in mix) for mix in across] for row in rows]
    return [
        [sum(part * narrow[at][column] for at, part in mix) for column in range(width)]
        for mix in down
    ]


@lru_cache(maxsize=32)
def _shares(many: int, few: int) -> list[list[tuple[int, float]]]:
    """Give, for each of ``few`` even stretches, the cells of ``many`` in it and their shares."""
    length = many / few
    mixes = []
    for index in range(few):
        start, end = index * length, (index + 1) * length
        overlaps = ((at, min(at + 1, end) - max(at, start)) for at in range(many))
        mixes.append([(at, overlap / length) for at, overlap in overlaps if overlap > 0])
    return mixes


def _step(value: float, low: float, high: float) -> str:
    return STEPS[min(int((value - low) / (high - low) * len(STEPS)), len(STEPS) - 1)]


def _hottest(rows: Sequence[Sequence[float]]) -> tuple[float, float]:
    """Give where the middle of the hottest cell is, from the upper left corner as shares."""
    row, column = max(
        ((row, column) for row in range(len(rows)) for column in range(len(rows[0]))),
        key=lambda at: rows[at[0]][at[1]],
    )
    return (column + 0.5) / len(rows[0]), (row + 0.5) / len(rows)


def profile_picture(profile: Sequence[AirLayer]) -> list[str]:
    """Draw the air's temperature over its height, the top first; nothing where it is even."""
    if not profile:
        return []
    low = min(layer.air_c for layer in profile)
    high = max(layer.air_c for layer in profile)
    if high - low < EVEN_K:
        return []
    lines = []
    for layer in reversed(profile):
        before = round((layer.air_c - low) / (high - low) * PROFILE_WIDTH)
        lines.append(
            f"{INDENT}{layer.height_mm:5.0f} mm {tenths(layer.air_c):>6} C |{' ' * before}o"
        )
    return lines
