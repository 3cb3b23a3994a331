"""The page on starting: its commands work, its tables are those of the program."""

import shlex

from enclosure_check.cli import main
from enclosure_check.cli.completion import SHELLS
from enclosure_check.description.starters import KINDS, MODELINE, SCHEMA_FILE


def test_the_first_line_works(read_page, tmp_path, monkeypatch, capsys):
    monkeypatch.chdir(tmp_path)
    (line,) = read_page("docs/start.md").blocks("sh")
    for command in line.split("&&"):
        program, *arguments = shlex.split(command)
        assert program == "enclosure-check"
        assert main(arguments) == 0


def test_tables_and_the_modeline(read_page):
    page = read_page("docs/start.md")
    assert [(row[0].strip("`"), row[1]) for row in page.table("kind")] == list(KINDS.items())
    assert [row[0] for row in page.table("shell")] == list(SHELLS)
    assert page.blocks("text") == [MODELINE.format(SCHEMA_FILE)]
