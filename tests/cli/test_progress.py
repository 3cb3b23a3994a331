"""Progress: on a terminal, after a second, gone at the end; nowhere else."""

import io
import time
from contextlib import suppress
from types import SimpleNamespace

import pytest

from enclosure_check.cli.output import Progress


class Terminal(io.StringIO):
    def isatty(self):
        return True

    def lines_left(self) -> str:
        """What the last line shows at the end."""
        shown: list[str] = []
        place = 0
        for char in self.getvalue():
            if char == "\r":
                place = 0
            else:
                shown[place : place + 1] = [char]
                place += 1
        return "".join(shown).rstrip()


@pytest.fixture
def terminal(monkeypatch) -> Terminal:
    stream = Terminal()
    monkeypatch.setattr(Progress, "FIRST_S", 0.05)
    monkeypatch.setenv("COLUMNS", "40")
    # Capturing puts its own stream in place when the test begins, so ours is handed over.
    monkeypatch.setattr("enclosure_check.cli.output.sys", SimpleNamespace(stderr=stream))
    return stream


def wait_for(terminal: Terminal, text: str) -> None:
    for _ in range(200):
        if text in terminal.getvalue():
            return
        time.sleep(0.01)
    raise AssertionError(terminal.getvalue())


def test_what_takes_long_is_told_even_while_nothing_new_happens(terminal):
    with Progress(wanted=True) as progress:
        progress.tell("1 of 2: a.yaml: noon")
        wait_for(terminal, "1 of 2: a.yaml: noon")
        progress.tell("short")
        assert terminal.lines_left() == "short"
        progress.tell("x" * 100 + " \x1b[31m \nend")
        assert len(terminal.lines_left()) < 40
        assert terminal.lines_left().endswith("\\x1b[31m  end")
    assert terminal.lines_left() == ""
    assert "\x1b" not in terminal.getvalue()
    assert "\n" not in terminal.getvalue()


def test_what_is_quick_is_not_told(terminal):
    with Progress(wanted=True) as progress:
        progress.tell("a.yaml")
    time.sleep(0.1)
    assert terminal.getvalue() == ""


def test_it_is_gone_after_an_error(terminal):
    with suppress(ZeroDivisionError), Progress(wanted=True) as progress:
        progress.tell("a.yaml")
        wait_for(terminal, "a.yaml")
        raise ZeroDivisionError
    assert terminal.lines_left() == ""


def test_none_when_not_wanted(terminal):
    with Progress(wanted=False) as progress:
        progress.tell("a.yaml")
        time.sleep(0.1)
    assert terminal.getvalue() == ""


def test_none_on_a_pipe(terminal, monkeypatch):
    pipe = io.StringIO()
    monkeypatch.setattr("enclosure_check.cli.output.sys", SimpleNamespace(stderr=pipe))
    with Progress(wanted=True) as progress:
        progress.tell("a.yaml")
        time.sleep(0.1)
    assert pipe.getvalue() == ""


def test_none_without_standard_error(monkeypatch):
    monkeypatch.setattr("enclosure_check.cli.output.sys", SimpleNamespace(stderr=None))
    with Progress(wanted=True) as progress:
        progress.tell("a.yaml")
