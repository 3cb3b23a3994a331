"""An earlier result given on the command line."""

from collections.abc import Sequence
from typing import TYPE_CHECKING

from enclosure_check.cli.codes import UsageError

if TYPE_CHECKING:
    from enclosure_check.findings.earlier import EarlierReport
    from enclosure_check.findings.run import Run

DEFAULT_LOSS_K = 0.1


def read_baseline(path: str, documents: Sequence[str]) -> "tuple[EarlierReport, ...]":
    """Read an earlier result; it must hold one of the documents.

    Raises
    ------
    UsageError
        When it cannot be read or is not what it should be.
    """
    from enclosure_check.findings.compare import holds_any
    from enclosure_check.findings.earlier import MAX_BYTES, EarlierError, read_earlier

    try:
        with open(path, "rb") as file:
            earlier = read_earlier(file.read(MAX_BYTES + 1))
    except (OSError, ValueError) as error:
        reason = error.strerror if isinstance(error, OSError) and error.strerror else str(error)
        raise UsageError(f"{path}: cannot be read: {reason}") from None
    except EarlierError as error:
        raise UsageError(f"{path}: {error}") from None
    if not holds_any(documents, earlier):
        held = ", ".join(repr(each.document) for each in earlier[:3])
        more = f" and {len(earlier) - 3} more" if len(earlier) > 3 else ""
        raise UsageError(
            f"{path}: holds none of the documents to be checked; it holds {held or 'none'}{more}. "
            "Documents are matched by their path as given"
        )
    return earlier


def against(
    run: "Run", earlier: "tuple[EarlierReport, ...]", path: str, allow_loss_k: float | None
) -> "Run":
    """Give a run with what changed against an earlier result."""
    from enclosure_check.findings.compare import compared

    allowed = DEFAULT_LOSS_K if allow_loss_k is None else allow_loss_k
    return compared(run, earlier, path, allowed)
