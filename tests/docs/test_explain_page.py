"""The page on explaining a part: its example is what the command prints."""

import shlex

from enclosure_check.cli import main


def test_the_example_is_what_the_command_prints(read_page, root, monkeypatch, capsys):
    page = read_page("docs/explain.md")
    (command,), (shown,) = page.blocks("sh"), page.blocks("text")
    monkeypatch.chdir(root)
    for name in ("NO_COLOR", "FORCE_COLOR"):
        monkeypatch.delenv(name, raising=False)
    assert main(shlex.split(command)[1:]) == 0
    out = capsys.readouterr().out
    tree = out.split("\n\n")[2].partition("\n")[0]
    assert tree.endswith("1 K: R")
    assert "\n\n" + shown.rstrip("\n") + "\n\n" in out, out
    for word in ("W", "%", "K", "C", "^", "!", "<-"):
        assert f"*{word}*" in page.text or f"`{word}`" in page.text
