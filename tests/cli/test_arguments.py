"""The parser of the command line."""

import shutil
import subprocess
import sys

import pytest

from enclosure_check.cli.arguments import _columns, parser


@pytest.mark.parametrize("columns", [None, "", "0", "-3", "x", "57", "200"])
def test_help_is_as_wide_as_the_terminal(columns, monkeypatch):
    monkeypatch.delenv("COLUMNS", raising=False)
    if columns is not None:
        monkeypatch.setenv("COLUMNS", columns)
    assert _columns() == shutil.get_terminal_size().columns
    if columns == "57":
        lines = parser().format_help().splitlines()
        assert max(map(len, (line for line in lines if line.startswith("usage")))) <= 57


def test_parsing_loads_no_compression():
    code = (
        "import sys; from enclosure_check.cli.arguments import parser;"
        "parser().parse_args(['check', 'x']); print(*sys.modules)"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    modules = done.stdout.split()
    assert "argparse" in modules
    assert {"shutil", "lzma", "bz2"}.isdisjoint(modules)
