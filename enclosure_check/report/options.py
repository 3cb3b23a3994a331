"""What a writer is told about the place its text goes to."""

from enclosure_check.records import dataclass


@dataclass(frozen=True)
class WriterOptions:
    """How to lay a report out; a format that needs none of it ignores it."""

    width: int = 80
    """Longest line, in character cells."""
    colour: bool = False
    """Whether colour may be added to words."""
    encoding: str = "utf-8"
    """Encoding of the place; characters it lacks are written as escapes."""
    several: bool = False
    """Whether several documents were asked for, even if only one is there."""
    short: bool = False
    """Whether a text holds the verdict lines only."""
