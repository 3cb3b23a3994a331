"""The sample documents, by size."""

from pathlib import Path

FOLDER = Path(__file__).parent.parent.parent / "sample_boards"


def by_size() -> list[Path]:
    """Give the samples, the largest document first."""
    return sorted(FOLDER.glob("*.yaml"), key=lambda path: -path.stat().st_size)
