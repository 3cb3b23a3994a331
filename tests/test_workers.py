"""Work spread over processes gives what one process gives."""

import os
import pickle
import signal
import threading
import time
from collections.abc import Callable, Sequence
from contextlib import suppress
from typing import Any

import pytest
from support.hanging import ends
from support.reports import SAMPLES

from enclosure_check import workers
from enclosure_check.check import check
from enclosure_check.description.load import load_document
from enclosure_check.report.json_report import write_json
from enclosure_check.report.options import WriterOptions
from enclosure_check.workers import (
    MOST_PROCESSES,
    Task,
    available_processes,
    each,
    see_off,
    spread,
)

pytestmark = pytest.mark.skipif(not hasattr(os, "fork"), reason="no processes without fork")
HERE = os.getpid()


def all_end() -> None:
    """See every process that was started end: this hangs while one does not."""
    with ends(), suppress(ChildProcessError):
        while True:
            os.waitpid(-1, 0)


def where(item: int) -> tuple[int, int]:
    return item, os.getpid()


def done(
    work: Callable[[int], Any], items: Sequence[int], processes: int, **more: Any
) -> list[Any]:
    """Spread work that needs neither preparing nor leading."""
    task = Task(
        prepare=lambda item: item,
        lead=lambda: None,
        finish=lambda item, _prepared, _shared: work(item),
        **more,
    )
    return spread(task, items, processes)


def test_results_come_in_order_and_from_several_processes():
    # The first waits for the other to have begun, so that both have something to do.
    begun, begin = os.pipe()

    def work(item: int) -> tuple[int, int]:
        if os.getpid() == HERE:
            os.read(begun, 1)
        else:
            os.write(begin, b"x" * 8)
        return where(item)

    results = done(work, range(6), 2)
    assert [item for item, _ in results] == list(range(6))
    assert len({process for _, process in results}) == 2


@pytest.mark.parametrize("processes", [1, 2, 3, 50])
def test_results_do_not_depend_on_the_number_of_processes(processes):
    items = list(range(11))
    assert done(lambda item: "x" * item * 50_000, items, processes) == [
        "x" * item * 50_000 for item in items
    ]


def test_one_process_or_one_item_forks_nothing():
    assert done(where, range(3), 1) == [(0, HERE), (1, HERE), (2, HERE)]
    assert done(where, [7], 4) == [(7, HERE)]
    assert done(where, [], 4) == []


def test_more_items_than_fit_into_the_pipe_are_done_alone():
    assert {process for _, process in done(where, range(1000), 2)} == {HERE}


def test_what_another_process_cannot_do_is_done_here():
    def elsewhere_it_fails(item: int) -> tuple[int, int]:
        if os.getpid() != HERE:
            raise ValueError(item)
        return where(item)

    assert done(elsewhere_it_fails, range(5), 3) == [(item, HERE) for item in range(5)]


def test_what_a_killed_process_leaves_is_done_here():
    def elsewhere_it_is_killed(item: int) -> tuple[int, int]:
        if os.getpid() != HERE:
            os.kill(os.getpid(), signal.SIGKILL)
        return where(item)

    assert done(elsewhere_it_is_killed, range(5), 3) == [(item, HERE) for item in range(5)]


def test_errors_are_raised_here_and_no_process_is_left():
    def work(item: int) -> int:
        if item == 3:
            raise KeyError(item)
        return item

    with pytest.raises(KeyError, match="3"):
        done(work, range(5), 2)
    all_end()


def test_those_seen_off_are_gone():
    assert [item for item, _ in done(where, range(4), 3)] == [0, 1, 2, 3]
    see_off()
    with pytest.raises(ChildProcessError):
        os.waitpid(-1, os.WNOHANG)


def test_no_fork_to_be_had(monkeypatch):
    def refused() -> int:
        raise BlockingIOError

    monkeypatch.setattr(os, "fork", refused)
    assert done(where, range(3), 2) == [(item, HERE) for item in range(3)]


@pytest.mark.parametrize("wanting", ["pipe", "mmap"])
def test_nothing_to_be_shared(wanting, monkeypatch):
    def refused(*_: Any) -> None:
        raise OSError

    monkeypatch.setattr(*((os, "pipe") if wanting == "pipe" else (workers.mmap, "mmap")), refused)
    assert done(where, range(3), 2) == [(item, HERE) for item in range(3)]


def test_what_begins_is_told_in_this_process_only():
    told: list[int] = []
    results = done(where, range(6), 2, begins=told.append)
    assert told == [item for item, process in results if process == HERE]


def test_a_thread_that_runs_is_no_hindrance():
    go_on = threading.Event()
    thread = threading.Thread(target=go_on.wait)
    thread.start()
    try:
        assert [item for item, _ in done(where, range(4), 2)] == [0, 1, 2, 3]
    finally:
        go_on.set()
        thread.join()


def led(lead: Callable[[], Any], items: Sequence[int], processes: int) -> list[Any]:
    task = Task(
        prepare=lambda item: (10 * item, os.getpid()),
        lead=lead,
        finish=lambda item, prepared, shared: (item, *prepared, shared, os.getpid()),
    )
    return spread(task, items, processes)


def test_what_is_led_here_reaches_all_and_what_was_prepared_stays_where_it_was():
    def lead() -> dict[str, Any]:
        time.sleep(0.2)  # so that the others have begun
        return {"by": os.getpid(), "much": "x" * 1_000_000}

    results = led(lead, range(6), 3)
    for place, (item, prepared, preparer, shared, finisher) in enumerate(results):
        assert (item, prepared) == (place, 10 * place)
        assert preparer == finisher
        assert shared == {"by": HERE, "much": "x" * 1_000_000}
    assert len({finisher for *_, finisher in results}) > 1


def test_what_stands_alone_is_ended_before_all_is_led():
    marked, mark = os.pipe()

    def lead() -> str:
        # Led when the other process has ended all that it could.
        for _ in range(3):
            os.read(marked, 1)
        return "led"

    def finish(item: int, _prepared: int, shared: str | None) -> tuple[int, str | None, bool]:
        if shared is None:
            os.write(mark, b"x")
        return item, shared, os.getpid() == HERE

    task = Task(
        prepare=lambda item: item, lead=lead, finish=finish, stands_alone=lambda item: item < 3
    )
    results = spread(task, range(5), 2)
    assert results[:3] == [(item, None, False) for item in range(3)]
    assert [shared for _, shared, _ in results[3:]] == ["led", "led"]
    os.close(marked)
    os.close(mark)


def test_what_is_too_much_to_share_is_done_here(monkeypatch):
    monkeypatch.setattr(workers, "_SHARED_BYTES", 4096)
    assert {finisher for *_, finisher in led(lambda: "x" * 5000, range(4), 2)} == {HERE}


def test_an_error_in_what_leads_is_raised_and_no_process_is_left():
    def lead() -> None:
        raise LookupError

    with pytest.raises(LookupError):
        led(lead, range(4), 3)
    all_end()


def test_what_cannot_be_told_is_no_hindrance_to_one_process():
    assert [item for item, *_ in led(lambda: lambda: None, range(3), 1)] == [0, 1, 2]
    with pytest.raises((AttributeError, pickle.PicklingError)):
        led(lambda: lambda: None, range(3), 2)


def test_available_processes():
    assert 1 <= available_processes() <= MOST_PROCESSES


@pytest.mark.parametrize("path", SAMPLES, ids=[path.stem for path in SAMPLES])
def test_reports_are_the_same_byte_for_byte(path):
    document = load_document(str(path))
    one, several = (
        write_json(check(document, processes=processes), WriterOptions()) for processes in (1, 3)
    )
    assert one == several


@pytest.mark.parametrize("processes", [1, 3])
@pytest.mark.parametrize("count", [0, 1, 7, 500])
def test_work_with_each_in_lots(processes, count):
    assert each(lambda item: 2 * item, range(count), processes=processes) == [
        2 * item for item in range(count)
    ]
