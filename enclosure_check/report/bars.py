"""Margins as small bars of characters: `|` is the limit, what lies right of it is kept to it."""

import math
from collections.abc import Iterable, Sequence
from typing import NamedTuple, Protocol

# Kelvin that one character may stand for.
STEPS_K = (1, 2, 5)
# A bar narrower than this tells nothing; one wider than that nothing more.
NARROWEST, WIDEST = 8, 40
LIMIT, KEPT, PAST, BAND, MORE_LEFT, MORE_RIGHT = "|", "#", "!", "-", "<", ">"
# The side past the limit takes at most this share of a bar.
_MOST_PAST = 0.4


class Margin(Protocol):
    """What a bar is drawn of."""

    @property
    def margin_k(self) -> float:
        """Distance to the limit, negative past it [K]."""

    @property
    def band_k(self) -> float | None:
        """Half-width of its band, if there is one [K]."""


class Scale(NamedTuple):
    """How bars are drawn, the same for all of one table."""

    step_k: int
    before: int
    """Characters left of the limit."""
    after: int
    """Characters right of it."""

    @property
    def title(self) -> str:
        """What stands over the bars."""
        return f"{KEPT} = {self.step_k} K"


def scale_of(rows: Iterable[Margin], width: int) -> Scale | None:
    """Give the scale of a table's bars; none where there is too little room.

    The finest that shows every margin past its limit and the smaller half of the others, which are
    those that matter; longer ones are cut.
    """
    width = min(width, WIDEST)
    ends = [
        (row.margin_k - (row.band_k or 0.0), row.margin_k + (row.band_k or 0.0)) for row in rows
    ]
    if width < NARROWEST or not ends:
        return None
    low = min(end for end, _ in ends)
    high = sorted(end for _, end in ends)[(len(ends) - 1) // 2]
    found = None
    for step in STEPS_K:
        wanted = _past(max(-low, 0.0), step)
        before = min(wanted, int(width * _MOST_PAST))
        found = Scale(step, before, width - 1 - before)
        if before == wanted and _count(max(high, 0.0), step) <= found.after:
            break
    return found


def bar(row: Margin, scale: Scale) -> str:
    """Draw one margin: what is surely kept, then its band as far as it reaches either way."""
    band = row.band_k or 0.0
    sure, most = row.margin_k - band, row.margin_k + band
    kept, reach = (_count(max(end, 0.0), scale.step_k) for end in (sure, most))
    past, far = (_past(max(end, 0.0), scale.step_k) for end in (-most, -sure))
    right = _side(KEPT * kept + BAND * (reach - kept), scale.after, MORE_RIGHT)
    left = _side(PAST * past + BAND * (far - past), scale.before, MORE_LEFT)
    return f"{left[::-1]:>{scale.before}}{LIMIT}{right}".rstrip()


def _side(drawn: str, room: int, more: str) -> str:
    """Cut what lies on one side of the limit, from it outwards, to its room."""
    return drawn if len(drawn) <= room else drawn[: room - 1] + more if room else ""


def _count(kelvin: float, step: int) -> int:
    return round(kelvin / step)


def _past(kelvin: float, step: int) -> int:
    """Count the characters past a limit: at least one where it is passed at all."""
    return math.ceil(kelvin / step)


def legend(rows: Sequence[Margin], scale: Scale) -> str:
    """Say how bars are read: only of what is there."""
    words = [f"{LIMIT} the limit, {KEPT} kept to it"]
    if any(row.margin_k - (row.band_k or 0.0) < 0 for row in rows):
        words.append(f"{PAST} past it")
    if any(row.band_k for row in rows):
        words.append(f"{BAND} its band")
    drawn = "".join(bar(row, scale) for row in rows)
    words += [f"{mark} more" for mark in (MORE_LEFT, MORE_RIGHT) if mark in drawn]
    return ", ".join(words)
