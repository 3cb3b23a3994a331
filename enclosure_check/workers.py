"""Work spread over processes that are forks of this one; the results are those of one alone."""

import os
import pickle
import signal
import struct
import warnings
from collections.abc import Callable, Sequence
from contextlib import suppress
from typing import BinaryIO, NamedTuple, NoReturn, TypeVar

Item = TypeVar("Item")
Result = TypeVar("Result")

# Each process holds what its work takes.
MOST_PROCESSES = 8
_PLACE = struct.Struct("=i")
# All places fit into a pipe of the least size there is.
_MOST_ITEMS = 512 // _PLACE.size


class _Worker(NamedTuple):
    """A forked process and where its results come from."""

    number: int
    results: int


def available_processes() -> int:
    """Tell how many processes may run at once; one where there is no fork."""
    if not hasattr(os, "fork"):
        return 1
    with suppress(AttributeError, OSError):
        return min(len(os.sched_getaffinity(0)), MOST_PROCESSES)
    return min(os.cpu_count() or 1, MOST_PROCESSES)


def spread(
    work: Callable[[Item], Result],
    items: Sequence[Item],
    processes: int,
    begins: Callable[[Item], None] | None = None,
) -> list[Result]:
    """Do the same work on every item, on several processes at once.

    Parameters
    ----------
    work
        What gives the result of an item; it must not depend on what was done before. Its results
        go through `pickle` when another process gives them.
    items
        What to work on.
    processes
        How many at most, this one included; with one nothing is forked.
    begins
        Told of every item this process begins.

    Returns
    -------
    list
        The results, in the order of the items. What another process did not give, for an error or
        want of memory there, is done again here, so that errors are raised as without processes.
    """
    done: dict[int, Result] = {}
    if min(processes, len(items)) > 1 and len(items) <= _MOST_ITEMS:
        done = _side_by_side(work, items, min(processes, len(items)), begins)
    for place, item in enumerate(items):
        if place not in done:
            if begins is not None:
                begins(item)
            done[place] = work(item)
    return [done[place] for place in range(len(items))]


def _side_by_side(
    work: Callable[[Item], Result],
    items: Sequence[Item],
    processes: int,
    begins: Callable[[Item], None] | None,
) -> dict[int, Result]:
    """Give the results that were found, by place."""
    # Whoever is free takes the next place out of the pipe.
    take, put = os.pipe()
    os.write(put, b"".join(_PLACE.pack(place) for place in range(len(items))))
    os.close(put)
    workers: list[_Worker] = []
    done: dict[int, Result] = {}
    try:
        with suppress(OSError):  # no more processes to be had
            while len(workers) < processes - 1:
                workers.append(_forked(work, items, take))
        while workers and (place := _taken(take)) is not None:
            if begins is not None:
                begins(items[place])
            done[place] = work(items[place])
        for worker in workers:
            with os.fdopen(os.dup(worker.results), "rb") as results:
                done.update(_received(results))
    finally:
        os.close(take)
        for worker in workers:
            _ended(worker)
    return done


def _taken(take: int) -> int | None:
    """Take a place out of the pipe; none when there is none left."""
    given = os.read(take, _PLACE.size)
    return _PLACE.unpack(given)[0] if len(given) == _PLACE.size else None


def _received(results: BinaryIO) -> dict[int, Result]:
    """Read what a worker gives, until it ends."""
    received: dict[int, Result] = {}
    with suppress(EOFError, pickle.UnpicklingError):
        while True:
            place, result = pickle.load(results)
            received[place] = result
    return received


def _forked(work: Callable[[Item], Result], items: Sequence[Item], take: int) -> _Worker:
    """Start a process that works on items until none is left, and gives its results to a pipe."""
    results, give = os.pipe()
    try:
        with warnings.catch_warnings():
            # A thread that shows progress may run; the fork touches nothing of it.
            warnings.simplefilter("ignore", DeprecationWarning)
            number = os.fork()
    except OSError:
        os.close(results)
        os.close(give)
        raise
    if number == 0:
        os.close(results)
        _work_and_end(work, items, take, give)
    os.close(give)
    return _Worker(number, results)


def _work_and_end(
    work: Callable[[Item], Result], items: Sequence[Item], take: int, give: int
) -> NoReturn:
    """Be the other process: never return, print nothing, leave what fails to the first."""
    code = 1
    try:
        with os.fdopen(give, "wb") as out:
            while (place := _taken(take)) is not None:
                pickle.dump((place, work(items[place])), out, pickle.HIGHEST_PROTOCOL)
                out.flush()
        code = 0
    except BaseException:
        code = 1
    finally:
        os._exit(code)


def _ended(worker: _Worker) -> None:
    """Be rid of a worker; one that still works has no reader left."""
    os.close(worker.results)
    with suppress(ProcessLookupError):
        os.kill(worker.number, signal.SIGKILL)
    with suppress(ChildProcessError):
        os.waitpid(worker.number, 0)
