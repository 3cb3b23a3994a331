"""Work spread over processes that are forks of this one; the results are those of one alone."""

import math
import mmap
import os
import pickle
import select
import signal
import struct
import warnings
from collections.abc import Callable, Sequence
from contextlib import suppress
from typing import BinaryIO, Generic, NamedTuple, NoReturn, TypeVar

from enclosure_check.records import dataclass

Item = TypeVar("Item")
Prepared = TypeVar("Prepared")
Shared = TypeVar("Shared")
Result = TypeVar("Result")

# Each process holds what its work takes.
MOST_PROCESSES = 8
_PLACE = struct.Struct("=i")
# All places fit into a pipe of the least size there is.
_MOST_ITEMS = 512 // _PLACE.size
# Room for what all processes share, used as far as it is needed.
_SHARED_BYTES = 16 << 20
_SIZE = struct.Struct("=q")
# So many lots leave little to wait for at the end.
_MOST_LOTS = 48


@dataclass(frozen=True, eq=False)
class Task(Generic[Item, Prepared, Shared, Result]):
    """What is to be done with every item.

    Shared things and results go through `pickle` where they come from another process. No result
    may depend on what was done before.
    """

    prepare: Callable[[Item], Prepared]
    """What can be done with an item before anything is known of the others."""
    lead: Callable[[], Shared]
    """Finds once what all are finished with."""
    finish: Callable[[Item, Prepared, Shared | None], Result]
    """Ends an item; without what is shared where it `stands_alone`."""
    stands_alone: Callable[[Prepared], bool] = lambda _: False
    """Whether an item that is prepared needs nothing of what is shared."""
    begins: Callable[[Item], None] | None = None
    """Told of every item that this process begins to finish."""


class _Worker(NamedTuple):
    """A forked process, where its results come from, and where it learns that all is led."""

    number: int
    results: int
    led: int


def available_processes() -> int:
    """Tell how many processes may run at once; one where there is no fork."""
    if not hasattr(os, "fork"):
        return 1
    with suppress(AttributeError, OSError):
        return min(len(os.sched_getaffinity(0)), MOST_PROCESSES)
    return min(os.cpu_count() or 1, MOST_PROCESSES)


def spread(
    task: Task[Item, Prepared, Shared, Result], items: Sequence[Item], processes: int
) -> list[Result]:
    """Do a task with every item, on several processes at once.

    Parameters
    ----------
    task
        What is done. While this process leads, the others prepare, and end what stands alone.
    items
        What to work on.
    processes
        How many at most, this one included; with one nothing is forked.

    Returns
    -------
    list
        The results, in the order of the items. What another process did not give, for an error or
        want of memory there, is done again here, so that errors are raised as without processes.
    """
    processes = min(processes, len(items))
    if processes > 1 and len(items) <= _MOST_ITEMS:
        # Where there are no pipes or no memory to share, one process does.
        with suppress(OSError):
            shared, done = _side_by_side(task, items, processes)
            return [
                done[at] if at in done else _done(task, items[at], shared)
                for at in range(len(items))
            ]
    shared = task.lead()
    return [_done(task, item, shared) for item in items]


def each(work: Callable[[Item], Result], items: Sequence[Item], /, processes: int) -> list[Result]:
    """Do some work with every item, neighbours together, on several processes at once.

    Raises and gives what one process would; see `spread`.
    """
    size = max(1, math.ceil(len(items) / _MOST_LOTS))
    lots = [items[start : start + size] for start in range(0, len(items), size)]
    task: Task[Sequence[Item], None, None, list[Result]] = Task(
        prepare=lambda _: None,
        lead=lambda: None,
        finish=lambda lot, _, __: [work(item) for item in lot],
    )
    return [result for lot in spread(task, lots, processes) for result in lot]


def _done(task: Task[Item, Prepared, Shared, Result], item: Item, shared: Shared) -> Result:
    if task.begins is not None:
        task.begins(item)
    return task.finish(item, task.prepare(item), shared)


def _side_by_side(
    task: Task[Item, Prepared, Shared, Result], items: Sequence[Item], processes: int
) -> tuple[Shared, dict[int, Result]]:
    """Give what is shared, and the results that were found, by place."""
    _clear_away()
    # Whoever is free takes the next place out of the pipe.
    take, put = os.pipe()
    os.write(put, b"".join(_PLACE.pack(place) for place in range(len(items))))
    os.close(put)
    # No process begins more than its part before all is led: the last ones go to whoever is free.
    most = max(1, (len(items) - 1) // processes)
    workers: list[_Worker] = []
    done: dict[int, Result] = {}
    with mmap.mmap(-1, _SHARED_BYTES) as room:
        try:
            with suppress(OSError):  # no more processes to be had
                while len(workers) < processes - 1:
                    workers.append(_forked(task, items, take, most, room))
            shared = task.lead()
            if workers and _filled(room, shared):
                for worker in workers:
                    _tell_led(worker)
                while (place := _taken(take)) is not None:
                    done[place] = _done(task, items[place], shared)
                for worker in workers:
                    with os.fdopen(os.dup(worker.results), "rb") as results:
                        done.update(_received(results))
        finally:
            os.close(take)
            for worker in workers:
                _ended(worker)
    return shared, done


def _filled(room: mmap.mmap, shared: object) -> bool:
    """Put what is shared where all processes find it, if it fits."""
    told = pickle.dumps(shared, pickle.HIGHEST_PROTOCOL)
    if _SIZE.size + len(told) > len(room):
        return False
    room[: _SIZE.size] = _SIZE.pack(len(told))
    room[_SIZE.size : _SIZE.size + len(told)] = told
    return True


def _tell_led(worker: _Worker) -> None:
    with suppress(BrokenPipeError):  # it is no more; what it had taken is done here
        os.write(worker.led, b"1")


def _taken(take: int) -> int | None:
    """Take a place out of the pipe; none when there is none left."""
    given = os.read(take, _PLACE.size)
    return _PLACE.unpack(given)[0] if len(given) == _PLACE.size else None


def _received(results: BinaryIO) -> dict[int, Result]:
    """Read what a worker gives as it ends; nothing of one that failed."""
    try:
        return dict(pickle.load(results))
    except (EOFError, pickle.UnpicklingError):
        return {}


def _forked(
    task: Task[Item, Prepared, Shared, Result],
    items: Sequence[Item],
    take: int,
    most: int,
    room: mmap.mmap,
) -> _Worker:
    """Start a process that works on items until none is left, and gives its results to a pipe."""
    results, give = os.pipe()
    wait, led = os.pipe()
    try:
        with warnings.catch_warnings():
            # A thread that shows progress may run; the fork touches nothing of it.
            warnings.simplefilter("ignore", DeprecationWarning)
            number = os.fork()
    except OSError:
        for each in (results, give, wait, led):
            os.close(each)
        raise
    if number == 0:
        os.close(results)
        os.close(led)
        _work_and_end(task, items, take, most, (room, wait, give))
    os.close(give)
    os.close(wait)
    return _Worker(number, results, led)


def _work_and_end(
    task: Task[Item, Prepared, Shared, Result],
    items: Sequence[Item],
    take: int,
    most: int,
    ways: tuple[mmap.mmap, int, int],
) -> NoReturn:
    """Be the other process: never return, print nothing, leave what fails to the first."""
    room, wait, give = ways
    code, first = 1, os.getppid()
    try:
        # Given at the end: until then nobody reads.
        results: list[tuple[int, Result]] = []
        waiting: list[tuple[int, Prepared]] = []
        while len(waiting) < most and not select.select([wait], [], [], 0)[0]:
            place = _taken(take)
            if place is None:
                break
            prepared = task.prepare(items[place])
            if task.stands_alone(prepared):
                results.append((place, task.finish(items[place], prepared, None)))
            else:
                waiting.append((place, prepared))
        if os.read(wait, 1):
            size = _SIZE.unpack(room[: _SIZE.size])[0]
            shared: Shared = pickle.loads(room[_SIZE.size : _SIZE.size + size])
            for place, prepared in waiting:
                results.append((place, task.finish(items[place], prepared, shared)))
            # Nobody waits for the rest where the first process was killed.
            while os.getppid() == first and (place := _taken(take)) is not None:
                item = items[place]
                results.append((place, task.finish(item, task.prepare(item), shared)))
        with os.fdopen(give, "wb") as out:
            pickle.dump(results, out, pickle.HIGHEST_PROTOCOL)
        code = 0
    except BaseException:  # whatever it is, the first process comes upon it as well
        code = 1
    finally:
        os._exit(code)


# Workers that were told to end: nobody waits while the system takes their memory back.
_leaving: set[int] = set()


def _ended(worker: _Worker) -> None:
    """Be rid of a worker; one that still works has no reader left."""
    os.close(worker.results)
    os.close(worker.led)
    with suppress(ProcessLookupError):
        os.kill(worker.number, signal.SIGKILL)
    _leaving.add(worker.number)
    _clear_away()


def _clear_away() -> None:
    """Forget the workers that are gone."""
    for number in tuple(_leaving):
        with suppress(ChildProcessError):
            if os.waitpid(number, os.WNOHANG) == (0, 0):
                continue
        _leaving.discard(number)


def see_off() -> None:
    """Wait until all workers are gone, so that what they took is told with this process."""
    while _leaving:
        with suppress(ChildProcessError):
            os.waitpid(_leaving.pop(), 0)
