"""What one row of the evidence page is: somebody else's number, ours, and our band."""

from collections.abc import Iterable
from dataclasses import dataclass
from typing import Literal

from enclosure_check.physics.correlation import CORRELATIONS

Kind = Literal["measured", "numerical experiment", "worked example", "practice rule"]
KINDS: tuple[Kind, ...] = ("measured", "numerical experiment", "worked example", "practice rule")
Seen = Literal["seen", "computed", "memory"]

# A law with the source's own properties of air, and arithmetic: the printed rounding. [%]
SAME_LAW_PCT = 1.0
# A difference from a source that has to be explained, by rung [%].
EXPLAINED_BEYOND = {1: 1.0, 2: 3.0, 3: 3.0}


@dataclass(frozen=True)
class Source:
    """Somebody's publication."""

    short: str
    full: str


@dataclass(frozen=True)
class Row:
    """One comparison. Numbers of a row share one unit, which ``quantity`` names."""

    rung: int
    kind: Kind
    case: str
    source: Source
    place: str
    """Example, table or equation in the source."""
    seen: Seen
    quantity: str
    theirs: tuple[float, float]
    """Lowest and highest number the source gives, mostly the same."""
    ours: float
    band: float
    """Half-width of our band at about 95 %; of a flag, 0."""
    why: str = ""
    """Where the difference comes from, in a line."""
    scale: float | None = None
    """What the error is a share of; their number when left out."""
    flag: bool = False
    """The source says only that ours has to be above ``theirs``."""
    own: bool = False
    """The accuracy that its band rests on was found from this row itself, among others."""

    @property
    def middle(self) -> float:
        """Their number, the middle of their range."""
        return 0.5 * sum(self.theirs)

    @property
    def error_pct(self) -> float | None:
        """Ours less theirs [% of ``scale``]; none of a flag."""
        if self.flag:
            return None
        return 100.0 * (self.ours - self.middle) / (self.scale or abs(self.middle))

    @property
    def inside(self) -> bool:
        """Whether their number, or some of their range, lies in our band."""
        low, high = self.theirs
        if self.flag:
            return self.ours > high
        return low - self.band <= self.ours <= high + self.band

    @property
    def unexplained(self) -> bool:
        """Whether a line on why is missing."""
        if self.why:
            return False
        error = self.error_pct
        far = error is not None and abs(error) > EXPLAINED_BEYOND.get(self.rung, 1e9)
        return not self.inside or (far and self.kind == "worked example")


def row(
    rung: int,
    kind: Kind,
    case: str,
    source: Source,
    place: str,
    seen: Seen,
    quantity: str,
    theirs: float | tuple[float, float],
    ours: object,
    *,
    pct: float | None = None,
    band: float | None = None,
    why: str = "",
    scale: float | None = None,
    flag: bool = False,
    own: bool = False,
) -> Row:
    """Make a row; the band as such, or in percent of our number."""
    value = float(ours)  # type: ignore[arg-type]  # a number or an array of one
    assert flag or (pct is None) != (band is None), case
    width = band if band is not None else abs(value) * (pct or 0.0) / 100.0
    span = theirs if isinstance(theirs, tuple) else (float(theirs), float(theirs))
    return Row(
        rung, kind, case, source, place, seen, quantity, span, value, width, why, scale, flag, own
    )


def accuracy(key: str) -> float:
    """Accuracy of a law by the register, half-width at about 95 % [%]."""
    return CORRELATIONS[key].accuracy_pct


@dataclass(frozen=True)
class Count:
    """Rows of one kind, added up."""

    rows: int
    inside: int
    rms_pct: float | None
    worst: Row | None

    @property
    def share_pct(self) -> float:
        """Share of rows inside the band [%]."""
        return 100.0 * self.inside / self.rows


def count(rows: Iterable[Row]) -> Count:
    """Add up some rows."""
    every = list(rows)
    errors = [(abs(each.error_pct), each) for each in every if each.error_pct is not None]
    rms = (sum(error**2 for error, _ in errors) / len(errors)) ** 0.5 if errors else None
    worst = max(errors, key=lambda pair: pair[0])[1] if errors else None
    return Count(len(every), sum(each.inside for each in every), rms, worst)
