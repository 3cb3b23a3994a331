"""What the program shows on a terminal, on a pipe, and where it cannot show everything."""

import fcntl
import os
import pty
import re
import struct
import subprocess
import termios

import pytest
from support.reports import SMALL, write_document

from .conftest import COMMAND, environment

GERMAN = {
    **SMALL,
    "title": "Größe ±2 電源",
    "parts": {"Größe": SMALL["parts"]["X1"]},
}


def in_terminal(folder, columns: int, *arguments: str, **changes: str) -> str:
    """Run the program with a terminal of some width as standard output; give what it wrote."""
    ours, theirs = pty.openpty()
    fcntl.ioctl(theirs, termios.TIOCSWINSZ, struct.pack("HHHH", 50, columns, 0, 0))
    process = subprocess.Popen(
        [*COMMAND, *arguments],
        cwd=folder,
        env=environment(**{"TERM": "xterm", **changes}),
        stdout=theirs,
        stderr=subprocess.PIPE,
        stdin=theirs,
    )
    os.close(theirs)
    seen = b""
    while True:
        try:
            block = os.read(ours, 65536)
        except OSError:  # the other end is gone
            break
        if not block:
            break
        seen += block
    os.close(ours)
    assert process.stderr is not None
    assert process.stderr.read() == b""
    process.stderr.close()
    assert process.wait(60) == 0
    return seen.decode("utf-8").replace("\r\n", "\n")


def uncoloured(text: str) -> str:
    return re.sub(r"\x1b\[[0-9;]*m", "", text)


def test_a_terminal_gets_colour_and_the_same_words(tmp_path, run):
    write_document(tmp_path)
    shown = in_terminal(tmp_path, 80, "check", "box.yaml")
    assert "\x1b[38;5;28mPASS: every limit is kept.\x1b[0m" in shown
    assert uncoloured(shown) == run("check", "box.yaml").out


@pytest.mark.parametrize(("columns", "width"), [(40, 80), (80, 80), (110, 110), (300, 140)])
def test_width_of_the_terminal_is_used_within_bounds(tmp_path, columns, width):
    write_document(tmp_path)
    lines = uncoloured(in_terminal(tmp_path, columns, "check", "box.yaml")).splitlines()
    assert max(map(len, lines)) == width


@pytest.mark.parametrize("changes", [{"NO_COLOR": "1"}, {"TERM": "dumb"}])
def test_colour_can_be_turned_off(tmp_path, changes):
    write_document(tmp_path)
    assert "\x1b" not in in_terminal(tmp_path, 80, "check", "box.yaml", **changes)


def test_a_pipe_gets_no_colour(tmp_path, run):
    write_document(tmp_path)
    assert "\x1b" not in run("check", "box.yaml", TERM="xterm").out


@pytest.mark.parametrize(
    ("changes", "coloured"),
    [
        ({"FORCE_COLOR": "1"}, True),
        ({"FORCE_COLOR": ""}, False),
        ({"FORCE_COLOR": "1", "NO_COLOR": "1"}, False),
        ({"FORCE_COLOR": "1", "NO_COLOR": ""}, True),
    ],
)
def test_colour_on_a_pipe_when_asked_for(tmp_path, run, changes, coloured):
    write_document(tmp_path)
    assert ("\x1b[" in run("check", "box.yaml", **changes).out) == coloured


def test_a_file_gets_no_colour_whatever_is_asked_for(tmp_path, run):
    write_document(tmp_path)
    run("check", "box.yaml", "--output", "report.txt", FORCE_COLOR="1")
    assert "\x1b" not in (tmp_path / "report.txt").read_text("utf-8")


@pytest.mark.parametrize(
    ("encoding", "shown"),
    [
        ("utf-8", "Größe ±2 電源"),
        ("latin-1", "Größe ±2 \\u96fb\\u6e90"),
        ("ascii", "Gr\\xf6\\xdfe \\xb12 \\u96fb\\u6e90"),
    ],
)
def test_characters_a_terminal_lacks_are_escaped(tmp_path, run, encoding, shown):
    write_document(tmp_path, GERMAN)
    ended = run("check", "box.yaml", PYTHONIOENCODING=encoding)
    assert ended.code == 0
    assert ended.out.startswith(f"{shown}\n")
    assert max(map(len, ended.out.splitlines())) <= 80


def test_plain_locale(tmp_path):
    write_document(tmp_path, GERMAN)
    changes = {"LC_ALL": "C", "PYTHONCOERCECLOCALE": "0", "PYTHONUTF8": "0"}
    surroundings = environment(**changes)
    del surroundings["PYTHONIOENCODING"]
    ended = subprocess.run(
        [*COMMAND, "check", "box.yaml"], cwd=tmp_path, env=surroundings, capture_output=True
    )
    assert ended.returncode == 0
    assert ended.stdout.isascii()


def test_an_error_in_a_plain_locale(tmp_path, run):
    write_document(tmp_path, {**GERMAN, "Übel": 1})
    ended = run("check", "box.yaml", PYTHONIOENCODING="ascii")
    assert ended.code == 2
    assert ended.out == ""
    assert "unknown key" in ended.err


def test_json_is_the_same_in_every_locale(tmp_path, run):
    write_document(tmp_path, GERMAN)
    outputs = {
        run("check", "box.yaml", "--format", "json", PYTHONIOENCODING=encoding).out
        for encoding in ("utf-8", "ascii", "latin-1")
    }
    assert len(outputs) == 1
    assert '"title": "Gr\\u00f6\\u00dfe \\u00b12' in outputs.pop()
