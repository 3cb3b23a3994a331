"""Completion scripts: all that the parser knows, tried in the shells that are there."""

import os
import pty
import select
import shutil
import subprocess
import time

import pytest

from enclosure_check.cli import main
from enclosure_check.cli.arguments import parser
from enclosure_check.cli.completion import SHELLS, commands_of

PROGRAM = "enclosure-check"


def needs(shell):
    return pytest.mark.skipif(shutil.which(shell) is None, reason=f"no {shell} here")


@pytest.fixture
def script(tmp_path, capsys):
    def write(shell):
        assert main(["completion", shell]) == 0
        path = tmp_path / f"script.{shell}"
        path.write_text(capsys.readouterr().out, "utf-8")
        return path

    return write


@pytest.mark.parametrize("shell", SHELLS)
def test_every_command_option_and_word_is_in_it(shell, script):
    text = script(shell).read_text("utf-8")
    commands = commands_of(parser())
    assert {"check", "new", "schema", "completion"} <= {command.name for command in commands}
    for command in commands:
        assert command.name in text
        for option in (*command.options, *command.values):
            for name in option.names:
                long = name.startswith("--") and shell == "fish"
                assert (f"-l {name[2:]}" if long else name.lstrip("-")) in text
            for word in option.words:
                assert word in text


def test_what_the_parser_says_is_read_off_it():
    commands = {command.name: command for command in commands_of(parser())}
    check = {name: option for option in commands["check"].options for name in option.names}
    assert check["--format"].words
    assert check["--output"].is_path
    assert not check["--strict"].takes
    assert check["--condition"].takes
    assert not check["--condition"].is_path
    assert commands["check"].values[0].is_path
    assert set(commands["completion"].values[0].words) == set(SHELLS)
    assert commands[""].name == ""
    assert "--version" in {name for option in commands[""].options for name in option.names}


def test_another_shell_is_refused(capsys):
    assert main(["completion", "elsewhere"]) == 2


# bash -------------------------------------------------------------------------------------


def by_bash(script, folder, *words):
    """What bash offers for the last of some words, by the function it was told of."""
    quoted = " ".join(f"'{word}'" for word in (PROGRAM, *words))
    code = (
        f"source {script}\n"
        f"complete -p {PROGRAM} | grep -q -- '-F _enclosure_check' || exit 9\n"
        f"COMP_WORDS=({quoted})\nCOMP_CWORD={len(words)}\n"
        "_enclosure_check\nprintf '%s\\n' \"${COMPREPLY[@]}\"\n"
    )
    done = subprocess.run(
        ["bash", "--norc", "-c", code], cwd=folder, capture_output=True, text=True, timeout=30
    )
    assert done.returncode == 0, done.stderr
    assert done.stderr == ""
    return {line for line in done.stdout.splitlines() if line}


@needs("bash")
@pytest.mark.parametrize(
    ("words", "offered"),
    [
        (["che"], {"check"}),
        ([""], {"check", "new", "schema", "completion"}),
        (["--v"], {"--version"}),
        (["check", "--expl"], {"--explain"}),
        (["check", "--format", "te"], {"text"}),
        (["check", "--format", "=", "te"], {"text"}),
        (["check", "--format", "="], {"json", "text"}),
        (["check", "box.yaml", "--condition", "b"], set()),
        (["check", "bo"], {"box.yaml", "box two.yaml"}),
        (["check", "box.yaml", "--output", "su"], {"sub"}),
        (["new", "x.yaml", "--kind", "se"], {"sealed_wall"}),
        (["schema", "d"], {"document"}),
        (["completion", ""], {"bash", "zsh", "fish"}),
    ],
)
def test_bash_offers(script, tmp_path, words, offered):
    for name in ("box.yaml", "box two.yaml"):
        (tmp_path / name).touch()
    (tmp_path / "sub").mkdir()
    found = by_bash(script("bash"), tmp_path, *words)
    assert found >= offered if words[-1] in ("", "=") else found == offered


def press(folder, script, line, whole):
    """Press the tabulator key in an interactive bash, and wait for what the line becomes."""
    child, terminal = pty.fork()
    if child == 0:
        os.chdir(folder)
        os.environ.update(TERM="dumb", PS1="> ", INPUTRC="/dev/null")
        os.execvp("bash", ["bash", "--norc", "--noprofile", "-i"])
    shown = ""

    def until(text):
        nonlocal shown
        end = time.monotonic() + 30
        while text not in shown and time.monotonic() < end:
            if select.select([terminal], [], [], 0.2)[0]:
                shown += os.read(terminal, 65536).decode()
        assert text in shown, shown

    try:
        until("> ")
        os.write(terminal, f"source {script}; echo rea''dy\n".encode())
        until("ready\r\n> ")
        shown = ""
        os.write(terminal, f"{line}\t".encode())
        until(whole)
    finally:
        os.close(terminal)
        os.waitpid(child, 0)


@needs("bash")
def test_the_key_itself_completes(script, tmp_path):
    press(tmp_path, script("bash"), f"{PROGRAM} che", f"{PROGRAM} check ")


# Others -----------------------------------------------------------------------------------


@needs("fish")
def test_fish_offers(script, tmp_path):
    path = script("fish")
    for line, offered in (
        ("che", "check"),
        ("check --format j", "json"),
        ("new --kind se", "sealed_wall"),
        ("check --expl", "--explain"),
    ):
        done = subprocess.run(
            ["fish", "--no-config", "-c", f"source {path}; complete -C '{PROGRAM} {line}'"],
            cwd=tmp_path,
            env={**os.environ, "HOME": str(tmp_path)},
            capture_output=True,
            text=True,
            timeout=60,
        )
        assert done.stderr == ""
        assert offered in [found.partition("\t")[0] for found in done.stdout.splitlines()]


@needs("zsh")
def test_zsh_takes_it(script, tmp_path):
    path = script("zsh")
    code = (
        f"autoload -U compinit; compinit -u -d {tmp_path}/dump; source {path}; "
        f"print $_comps[{PROGRAM}]"
    )
    done = subprocess.run(
        ["zsh", "-f", "-c", code], capture_output=True, text=True, timeout=60, cwd=tmp_path
    )
    assert (done.stdout, done.stderr) == ("_enclosure_check\n", "")
