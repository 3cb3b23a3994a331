"""Work spread over processes gives what one process gives."""

import os
import signal
import threading

import pytest
from support.reports import SAMPLES

from enclosure_check.check import check
from enclosure_check.description.load import load_document
from enclosure_check.report.json_report import write_json
from enclosure_check.report.options import WriterOptions
from enclosure_check.workers import MOST_PROCESSES, available_processes, spread

pytestmark = pytest.mark.skipif(not hasattr(os, "fork"), reason="no processes without fork")
HERE = os.getpid()


def where(item: int) -> tuple[int, int]:
    return item, os.getpid()


def test_results_come_in_order_and_from_several_processes():
    # The first waits for the other to have begun, so that both have something to do.
    begun, begin = os.pipe()

    def work(item: int) -> tuple[int, int]:
        if os.getpid() == HERE:
            os.read(begun, 1)
        else:
            os.write(begin, b"x" * 8)
        return where(item)

    results = spread(work, range(6), 2)
    assert [item for item, _ in results] == list(range(6))
    assert len({process for _, process in results}) == 2


@pytest.mark.parametrize("processes", [1, 2, 3, 50])
def test_results_do_not_depend_on_the_number_of_processes(processes):
    items = list(range(11))
    assert spread(lambda item: "x" * item * 50_000, items, processes) == [
        "x" * item * 50_000 for item in items
    ]


def test_one_process_or_one_item_forks_nothing():
    assert spread(where, range(3), 1) == [(0, HERE), (1, HERE), (2, HERE)]
    assert spread(where, [7], 4) == [(7, HERE)]
    assert spread(where, [], 4) == []


def test_more_items_than_fit_into_the_pipe_are_done_alone():
    assert {process for _, process in spread(where, range(1000), 2)} == {HERE}


def test_what_another_process_cannot_do_is_done_here():
    def elsewhere_it_fails(item: int) -> tuple[int, int]:
        if os.getpid() != HERE:
            raise ValueError(item)
        return where(item)

    assert spread(elsewhere_it_fails, range(5), 3) == [(item, HERE) for item in range(5)]


def test_what_a_killed_process_leaves_is_done_here():
    def elsewhere_it_is_killed(item: int) -> tuple[int, int]:
        if os.getpid() != HERE:
            os.kill(os.getpid(), signal.SIGKILL)
        return where(item)

    assert spread(elsewhere_it_is_killed, range(5), 3) == [(item, HERE) for item in range(5)]


def test_errors_are_raised_here_and_no_process_is_left():
    def work(item: int) -> int:
        if item == 3:
            raise KeyError(item)
        return item

    with pytest.raises(KeyError, match="3"):
        spread(work, range(5), 2)
    with pytest.raises(ChildProcessError):
        os.waitpid(-1, os.WNOHANG)


def test_no_fork_to_be_had(monkeypatch):
    def refused() -> int:
        raise BlockingIOError

    monkeypatch.setattr(os, "fork", refused)
    assert spread(where, range(3), 2) == [(item, HERE) for item in range(3)]


def test_what_begins_is_told_in_this_process_only():
    told: list[int] = []
    results = spread(where, range(6), 2, told.append)
    assert told == [item for item, process in results if process == HERE]


def test_a_thread_that_runs_is_no_hindrance():
    go_on = threading.Event()
    thread = threading.Thread(target=go_on.wait)
    thread.start()
    try:
        assert [item for item, _ in spread(where, range(4), 2)] == [0, 1, 2, 3]
    finally:
        go_on.set()
        thread.join()


def test_available_processes():
    assert 1 <= available_processes() <= MOST_PROCESSES


@pytest.mark.parametrize("path", SAMPLES, ids=[path.stem for path in SAMPLES])
def test_reports_are_the_same_byte_for_byte(path):
    document = load_document(str(path))
    one, several = (
        write_json(check(document, processes=processes), WriterOptions()) for processes in (1, 3)
    )
    assert one == several
