"""Open files that a document names, without following it out of its folder."""

import os
import stat
from collections.abc import Sequence

_DRIVE_OR_STREAM = ":"


class RefusedError(Exception):
    """A file that is not opened; the message says why."""


def read_inside(name: str, document: str, allowed: Sequence[str], most_bytes: int) -> bytes:
    """Read a file that a document names.

    Parameters
    ----------
    name
        As the document names it: a path from the document's folder.
    document
        Path of the document itself.
    allowed
        Further folders files may lie in.
    most_bytes
        Longest file that is read. [bytes]

    Raises
    ------
    RefusedError
        When the path, every link followed, lies outside these folders, is no plain file, is too
        long or cannot be read. What lies outside is neither opened nor told of.
    """
    if name.startswith("~") or "\\" in name or _DRIVE_OR_STREAM in name or name.startswith("//"):
        raise RefusedError("allowed: a path from the document's folder, with `/` between folders")
    home = os.path.dirname(os.path.realpath(document))
    try:
        path = os.path.realpath(os.path.join(home, name))
        inside = any(_holds(os.path.realpath(folder), path) for folder in (home, *allowed))
    except (OSError, ValueError):
        raise RefusedError("allowed: a path from the document's folder") from None
    if not inside:
        raise RefusedError(
            "it leads out of the document's folder; if you trust the document, allow the folder "
            "with --allow-folder"
        )
    try:
        return _read_plain(path, most_bytes)
    except OSError as error:
        raise RefusedError(f"cannot be read: {error.strerror or error}") from None


def _holds(folder: str, path: str) -> bool:
    """Tell whether a path lies in a folder, both with every link followed."""
    try:
        return os.path.commonpath([folder, path]) == folder
    except ValueError:  # different drives
        return False


def _read_plain(path: str, most_bytes: int) -> bytes:
    # Neither waits for a pipe nor follows a link that was put there since.
    flags = os.O_RDONLY | getattr(os, "O_NONBLOCK", 0) | getattr(os, "O_NOFOLLOW", 0)
    flags |= getattr(os, "O_BINARY", 0)
    if not stat.S_ISREG(os.stat(path).st_mode):
        raise RefusedError("no plain file")
    descriptor = os.open(path, flags)
    with open(descriptor, "rb") as file:
        if not stat.S_ISREG(os.fstat(descriptor).st_mode):
            raise RefusedError("no plain file")
        data = file.read(most_bytes + 1)
    if len(data) > most_bytes:
        raise RefusedError(f"larger than {most_bytes >> 20} MiB")
    return data
