"""What goes out: standard output, standard error and files; the only place that prints."""

import os
import sys
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    import threading

    from enclosure_check.report.options import WriterOptions

PROGRAM = "enclosure-check"
NARROWEST, WIDEST = 80, 140


class CannotWriteError(Exception):
    """Results that could not be written where they were wanted."""


def printable(text: str) -> str:
    """Give a text with control characters as escapes; line ends stay."""
    return "".join(
        char if char.isprintable() or char == "\n" else ascii(char)[1:-1] for char in text
    )


def say(text: str) -> None:
    """Print a diagnostic."""
    if sys.stderr is not None:
        print(printable(text), file=sys.stderr)


def terminal_options() -> "WriterOptions":
    """Find out what standard output can show."""
    from enclosure_check.report.options import WriterOptions

    is_terminal = sys.stdout is not None and sys.stdout.isatty()
    width = NARROWEST
    if is_terminal:
        from shutil import get_terminal_size

        width = min(max(get_terminal_size().columns, NARROWEST), WIDEST)
    colour = is_terminal and os.environ.get("TERM") != "dumb"
    if os.environ.get("FORCE_COLOR"):
        colour = True
    if os.environ.get("NO_COLOR"):
        colour = False
    encoding = getattr(sys.stdout, "encoding", None) or "ascii"
    return WriterOptions(width, colour, encoding)


def print_result(text: str) -> None:
    """Print a result, all of it now, so that a failure is noticed."""
    if sys.stdout is None:
        raise CannotWriteError("standard output is closed")
    try:
        sys.stdout.write(text)
        sys.stdout.flush()
    except BrokenPipeError:
        # The reader has seen enough. Python flushes once more when it ends: let that go nowhere.
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
    except OSError as error:
        raise CannotWriteError(f"standard output cannot be written: {error.strerror}") from None


def all_is_written() -> bool:
    """Write what the standard streams hold back; tell whether nothing is left."""
    try:
        for stream in (sys.stdout, sys.stderr):
            if stream is not None:
                stream.flush()
    except (OSError, ValueError):
        return False
    return True


def same_file(one: str, other: str) -> bool:
    """Tell whether two paths lead to one file that exists."""
    try:
        return os.path.samefile(one, other)
    except (OSError, ValueError):
        return False


def save(path: str, text: str) -> None:
    """Write a file at once: it is either replaced by all of the text or left as it was.

    A link is followed; what is no file (a device, a pipe) is written to as it is.

    Raises
    ------
    CannotWriteError
        When it cannot be written; nothing is left behind.
    """
    data = text.encode("utf-8")
    try:
        if os.path.exists(path) and not os.path.isfile(path):
            with open(path, "wb") as file:
                file.write(data)
        else:
            _replace(os.path.realpath(path), data)
    except (OSError, ValueError) as error:
        reason = error.strerror if isinstance(error, OSError) and error.strerror else str(error)
        raise CannotWriteError(f"{path}: cannot be written: {reason}") from None


def _replace(target: str, data: bytes) -> None:
    """Write a temporary file beside the target and put it in its place, mode kept."""
    folder, name = os.path.split(target)
    mode = None
    if os.path.exists(target):
        with open(target, "ab"):  # raises where the file may not be written
            mode = os.stat(target).st_mode & 0o7777
    temporary = os.path.join(folder, f".{name[:200]}.{os.getpid()}.tmp")
    descriptor = os.open(temporary, os.O_WRONLY | os.O_CREAT | os.O_EXCL, 0o666)
    try:
        with open(descriptor, "wb") as file:
            file.write(data)
            file.flush()
            os.fsync(file.fileno())
        if mode is not None:
            os.chmod(temporary, mode)
        os.replace(temporary, target)
    except BaseException:
        os.unlink(temporary)
        raise


# Progress ---------------------------------------------------------------------------------


class Progress:
    """A line on standard error that tells what is being done, once that takes a while.

    It is shown on a terminal only, and gone when the work is done.
    """

    FIRST_S = 1.0

    def __init__(self, *, wanted: bool) -> None:
        self._shown = wanted and sys.stderr is not None and sys.stderr.isatty()
        self._text, self._width, self._due = "", 0, False
        self._timer: threading.Timer | None = None

    def __enter__(self) -> "Progress":
        if self._shown:
            import threading

            self._lock = threading.Lock()
            self._timer = threading.Timer(self.FIRST_S, self._begin)
            self._timer.daemon = True
            self._timer.start()
        return self

    def __exit__(self, *_: object) -> None:
        if self._timer is not None:
            self._timer.cancel()
            with self._lock:
                self._shown = False
                self._draw("")

    def tell(self, text: str) -> None:
        """Say what is being done now."""
        if self._timer is not None:
            with self._lock:
                self._text = text
                if self._due:
                    self._draw(text)

    def _begin(self) -> None:
        with self._lock:
            self._due = True
            if self._shown:
                self._draw(self._text)

    def _draw(self, text: str) -> None:
        """Put a text in place of the one before, within one line, without any control sequence."""
        from shutil import get_terminal_size

        room = get_terminal_size().columns - 1
        shown = printable(text).replace("\n", " ").encode("ascii", "backslashreplace").decode()
        shown = shown if len(shown) <= room else f"...{shown[len(shown) - room + 3 :]}"
        if shown or self._width:
            sys.stderr.write(f"\r{shown.ljust(self._width)}" + ("" if shown else "\r"))
            sys.stderr.flush()
        self._width = len(shown)
