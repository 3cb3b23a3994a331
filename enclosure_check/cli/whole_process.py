"""What only a process that does nothing else may do to itself, to be done sooner."""

from contextlib import suppress

from enclosure_check.workers import available_processes

# Numbers of the settings of `mallopt` in the C library of GNU.
_TRIM_THRESHOLD, _MMAP_THRESHOLD = -1, -3
_NEVER = 1 << 30


def prepare() -> int:
    """Make a process ready that checks and then ends; give how many processes may work at once."""
    _keep_memory()
    return available_processes()


def _keep_memory() -> None:
    """Keep what arrays free for the arrays that follow.

    The C library would give it back to the system, which hands it out again page by page, zeroed:
    some tenths of the time of a solve. Elsewhere than with the C library of GNU nothing is done.
    """
    import ctypes  # numpy imports it as well

    with suppress(AttributeError, OSError, TypeError):
        mallopt = ctypes.CDLL(None).mallopt
        mallopt(_MMAP_THRESHOLD, _NEVER)
        mallopt(_TRIM_THRESHOLD, _NEVER)
