"""A bound on what must end: it catches what hangs or grows with the square, and measures nothing."""

import signal
from collections.abc import Iterator
from contextlib import contextmanager
from types import FrameType

LONG_S = 60.0


class HangsError(Exception):
    """What was tried did not end."""


@contextmanager
def ends(within_s: float = LONG_S) -> Iterator[None]:
    """Fail with `HangsError` what takes so long that no slow machine explains it."""
    if not hasattr(signal, "setitimer"):
        yield  # where there is no timer the run as a whole hangs, and shows it as well
        return
    before = signal.signal(signal.SIGALRM, _hangs)
    signal.setitimer(signal.ITIMER_REAL, within_s)
    try:
        yield
    finally:
        signal.setitimer(signal.ITIMER_REAL, 0.0)
        signal.signal(signal.SIGALRM, before)


def _hangs(_number: int, _frame: FrameType | None) -> None:
    raise HangsError
